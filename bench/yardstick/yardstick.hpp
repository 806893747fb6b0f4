#pragma once
// The yardstick of direct summation: a plain loop of AVX-512 intrinsics, potential and field, nothing else. The project's own
// kernels are held against it, so that a slow kernel cannot flatter the tree (its work is counted in pairs of the direct sum).
#include <cstddef>

namespace farsum::yardstick {

/// Whether this processor can run the loops; the other functions may be called only then.
bool available() noexcept;

/// potential[i] = sum_j q_j / r_ij, field_c[i] = sum_j q_j d_c / r_ij^3 with d = target - source; pairs at zero distance are
/// left out. sources: x, y, z, q, n_sources of each; targets: x, y, z; results: potential, field x, y, z. n_targets must be a
/// multiple of 16 (double) or 32 (float). Double: full precision; float: about 1e-7 a term.
void pair_sums(const double* const sources[4], std::size_t n_sources, const double* const targets[3], std::size_t n_targets,
               double* const results[4]) noexcept;
void pair_sums(const float* const sources[4], std::size_t n_sources, const float* const targets[3], std::size_t n_targets,
               float* const results[4]) noexcept;

}  // namespace farsum::yardstick
