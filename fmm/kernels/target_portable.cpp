// Kernels for any processor: the compiler's own vectors of 16 bytes, exact roots and divisions.
#define FARSUM_TARGET portable
#define FARSUM_VECTOR_BYTES 16
#include "fmm/kernels/target_body.hpp"
