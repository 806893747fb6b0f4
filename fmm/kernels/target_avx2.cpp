// Kernels for processors with AVX2 and FMA: vectors of 32 bytes.
#define FARSUM_TARGET avx2
#define FARSUM_VECTOR_BYTES 32
#include "fmm/kernels/target_body.hpp"
