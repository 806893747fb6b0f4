#pragma once
// Expansions of the derivatives of a potential: with them a field is evaluated by the same kernel as a potential.
#include <memory>

#include "fmm/expansion/indexing.hpp"

namespace farsum {

template <class Real>
struct GradientFactors;

/// Factors of the derivative rules for all degrees up to an order; see gradient.cpp.
template <class Real>
class GradientRows {
 public:
  explicit GradientRows(int order);

  /// Coefficients of d/dx, d/dy, d/dz of the local potential sum L_nk R_nk, degrees n <= order - 1, padded rows of
  /// row_length(order).
  void of_local(const Real* local, int order, Real* const (&rows)[3]) const;
  /// The same for a multipole potential sum M_nk S_nk: degrees n <= order + 1, rows of row_length(order + 1).
  void of_multipole(const Real* multipole, int order, Real* const (&rows)[3]) const;

 private:
  std::shared_ptr<GradientFactors<Real>> factors_;
};

extern template class GradientRows<float>;
extern template class GradientRows<double>;

}  // namespace farsum
