// Derivatives of the harmonics H_nm of indexing.hpp (from E. W. Hobson, Spherical and Ellipsoidal Harmonics, 1931, in this
// normalisation), with G_nm = H_nm / r^(2n+1):
//   d/dz H_nm = sqrt(n^2 - m^2) H_{n-1,m}                   d/dz G_nm = -sqrt((n+1)^2 - m^2) G_{n+1,m}
//   (d/dx - i d/dy) H_nm = sqrt((n+m)(n+m-1)) H_{n-1,m-1}    (d/dx - i d/dy) G_nm = sqrt((n-m+1)(n-m+2)) G_{n+1,m-1}       m >=
//   1 (d/dx + i d/dy) H_nm = -sqrt((n-m)(n-m-1)) H_{n-1,m+1}   (d/dx + i d/dy) G_nm = -sqrt((n+m+1)(n+m+2)) G_{n+1,m+1}
// and for m = 0 (d/dx - i d/dy) is the conjugate of (d/dx + i d/dy).
// With real coefficients A (cosine) and B (sine) of order m the derivative by x passes +f A, +f B to order m - 1 and -g A, -g B
// to m + 1; by y it passes +f B, -f A to m - 1 and +g B, -g A to m + 1, with f = down / 2, g = up / 2. Orders 0 carry a factor
// sqrt(2).
#include "fmm/expansion/gradient.hpp"

#include <algorithm>
#include <cmath>
#include <vector>

namespace farsum {
namespace {

/// Factors of degree n: along z, to order m - 1 and to order m + 1, each for m = 0..n, the halves and roots of two included.
template <class Real>
struct DegreeFactors {
  std::vector<Real> along, down, up;
};

template <class Real>
DegreeFactors<Real> local_factors(int n) {
  DegreeFactors<Real> f;
  for (int m = 0; m <= n; ++m) {
    f.along.push_back(Real(std::sqrt(double(n * n - m * m))));
    f.down.push_back(Real(std::sqrt(double((n + m) * (n + m - 1))) / 2 * (m == 1 ? std::sqrt(2.0) : 1.0)));
    f.up.push_back(Real(std::sqrt(double((n - m) * (n - m - 1))) / 2 * (m == 0 ? std::sqrt(2.0) : 1.0)));
  }
  return f;
}

template <class Real>
DegreeFactors<Real> multipole_factors(int n) {
  DegreeFactors<Real> f;
  for (int m = 0; m <= n; ++m) {
    f.along.push_back(Real(-std::sqrt(double((n + 1) * (n + 1) - m * m))));
    f.down.push_back(Real(std::sqrt(double((n - m + 1) * (n - m + 2))) / 2 * (m == 1 ? std::sqrt(2.0) : 1.0)));
    f.up.push_back(Real(std::sqrt(double((n + m + 1) * (n + m + 2))) / 2 * (m == 0 ? std::sqrt(2.0) : 1.0)));
  }
  return f;
}

/// Adds degree n of `in` to degree `to` of the three rows; orders above `to` have factor 0 or do not exist.
template <class Real>
void derive_degree(const Real* in, int n, int to, const DegreeFactors<Real>& factors, Real* const (&rows)[3]) {
  const Real* a = in + term_index(n, 0);
  Real* const x = rows[0] + term_index(to, 0);
  Real* const y = rows[1] + term_index(to, 0);
  Real* const z = rows[2] + term_index(to, 0);
  for (int m = 0; m <= std::min(n, to); ++m) {
    z[m] += factors.along[std::size_t(m)] * a[m];
    if (m > 0) z[-m] += factors.along[std::size_t(m)] * a[-m];
  }
  for (int m = 1; m <= n; ++m) {
    const Real f = factors.down[std::size_t(m)];
    if (m - 1 > to) break;
    x[m - 1] += f * a[m];
    y[m - 1] += f * a[-m];
    if (m == 1) continue;
    x[1 - m] += f * a[-m];
    y[1 - m] -= f * a[m];
  }
  for (int m = 0; m <= n && m + 1 <= to; ++m) {
    const Real g = factors.up[std::size_t(m)];
    const Real sine = m == 0 ? Real(0) : a[-m];
    x[m + 1] -= g * a[m];
    x[-m - 1] -= g * sine;
    y[m + 1] += g * sine;
    y[-m - 1] -= g * a[m];
  }
}

}  // namespace

template <class Real>
struct GradientFactors {
  std::vector<DegreeFactors<Real>> local, multipole;
};

template <class Real>
GradientRows<Real>::GradientRows(int order) : factors_(std::make_shared<GradientFactors<Real>>()) {
  for (int n = 0; n <= order; ++n) {
    factors_->local.push_back(local_factors<Real>(n));
    factors_->multipole.push_back(multipole_factors<Real>(n));
  }
}

template <class Real>
void GradientRows<Real>::of_local(const Real* local, int order, Real* const (&rows)[3]) const {
  for (Real* row : rows) std::fill_n(row, row_length<Real>(order), Real(0));
  for (int n = 1; n <= order; ++n) derive_degree(local, n, n - 1, factors_->local[std::size_t(n)], rows);
}

template <class Real>
void GradientRows<Real>::of_multipole(const Real* multipole, int order, Real* const (&rows)[3]) const {
  for (Real* row : rows) std::fill_n(row, row_length<Real>(order + 1), Real(0));
  for (int n = 0; n <= order; ++n) derive_degree(multipole, n, n + 1, factors_->multipole[std::size_t(n)], rows);
}

template class GradientRows<float>;
template class GradientRows<double>;

}  // namespace farsum
