#pragma once
// Conventions of all expansions.
//
// Harmonics. With spherical coordinates (r, theta, phi) and Legendre functions P_nm without the factor (-1)^m,
//   H_nm = sqrt((n - m)! / (n + m)!) r^n P_nm(cos theta) e^{i m phi},   m >= 0          (Schmidt's normalisation)
//   R_{n,0} = H_n0,   R_{n,m} = sqrt(2) Re H_nm,   R_{n,-m} = sqrt(2) Im H_nm            (regular, real)
//   S_{n,k}(x) = R_{n,k}(x) / |x|^(2n+1)                                                (irregular)
// so that sum_k R_nk(x) R_nk(y) = |x|^n |y|^n P_n(cos angle) and 1/|x - y| = sum_nk R_nk(y) S_nk(x) for |y| < |x|.
//
// Multipole expansion of a box: M_nk = sum_j q_j R_nk(y_j), potential sum M_nk S_nk(x). Local: potential sum L_nk R_nk(x).
// Positions are relative to the centre of the box in units of its side h; then potential = (1/h) sum, field = -(1/h^2) grad.
// All degrees n <= order are kept. Coefficient (n, k), -n <= k <= n, stands at n^2 + n + k: an expansion of lower order is a
// prefix. A row of coefficients is padded with zeros to whole 64-byte blocks.
#include <cstddef>

#include "fmm/base/padding.hpp"

namespace farsum {

/// Highest order of any expansion; enough for a tolerance of 1e-13 with box pairs one box apart.
inline constexpr int kMaxOrder = 48;

constexpr std::size_t term_count(int order) noexcept {
  return std::size_t(order + 1) * std::size_t(order + 1);
}
constexpr std::size_t term_index(int n, int k) noexcept {
  return std::size_t(n * n + n + k);
}

/// Length of a padded row of coefficients.
template <class Real>
constexpr std::size_t row_length(int order) noexcept {
  return round_up(term_count(order), 64 / sizeof(Real));
}

}  // namespace farsum
