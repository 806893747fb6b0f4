// Kernels for processors with AVX-512 (F, DQ, VL, BW): vectors of 64 bytes.
#define FARSUM_TARGET avx512
#define FARSUM_VECTOR_BYTES 64
#include "fmm/kernels/target_body.hpp"
