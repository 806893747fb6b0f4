#pragma once
// The harmonics of fmm/expansion/indexing.hpp from their definition, with the Legendre functions of the standard library:
//   R_n0 = r^n P_n,  R_nm = sqrt(2 (n-m)!/(n+m)!) r^n P_nm(cos theta) cos(m phi),  R_n,-m the same with sin;  S_nk = R_nk /
//   r^(2n+1).
#include <array>
#include <cmath>
#include <cstddef>
#include <cstdlib>
#include <vector>

#include "fmm/expansion/indexing.hpp"

namespace farsum::unit {

using Vector = std::array<long double, 3>;

inline long double length_of(const Vector& v) {
  return std::sqrt(v[0] * v[0] + v[1] * v[1] + v[2] * v[2]);
}

inline long double regular(int n, int k, const Vector& v) {
  const long double r = length_of(v);
  if (r == 0) return n == 0 ? 1 : 0;
  const int m = std::abs(k);
  long double factor = m == 0 ? 1 : 2;
  for (int i = n - m + 1; i <= n + m; ++i) factor /= i;
  const long double angle = m * std::atan2(v[1], v[0]), turn = k >= 0 ? std::cos(angle) : std::sin(angle);
  return std::sqrt(factor) * std::pow(r, (long double)(n)) * std::assoc_legendrel(unsigned(n), unsigned(m), v[2] / r) * turn;
}

inline long double irregular(int n, int k, const Vector& v) {
  return regular(n, k, v) / std::pow(length_of(v), (long double)(2 * n + 1));
}

/// All harmonics of degrees <= order, by term_index.
inline std::vector<long double> harmonics(int order, const Vector& v, bool is_irregular) {
  std::vector<long double> values;
  for (int n = 0; n <= order; ++n)
    for (int k = -n; k <= n; ++k) values.push_back(is_irregular ? irregular(n, k, v) : regular(n, k, v));
  return values;
}

/// sum of coefficient * harmonic.
template <class Real>
long double expansion_at(const std::vector<Real>& coefficients, int order, const Vector& v, bool is_irregular) {
  long double sum = 0;
  for (int n = 0; n <= order; ++n)
    for (int k = -n; k <= n; ++k)
      sum += (long double)(coefficients[term_index(n, k)]) * (is_irregular ? irregular(n, k, v) : regular(n, k, v));
  return sum;
}

}  // namespace farsum::unit
