#pragma once
// Translation of Coulomb expansions along the z axis: the coefficients for each order m, in the normalisation of
// expansion/indexing.hpp. Lengths: the distance of the shift is one.
// All follow from the addition theorems of solid harmonics (E. W. Hobson, Spherical and Ellipsoidal Harmonics, 1931).
#include <vector>

namespace farsum::coulomb {

/// Factorials and the three shifts, computed once for an order.
class Shifts {
 public:
  explicit Shifts(int order);

  /// Multipole at +z to the origin: M_nm = sum_{l <= n} child(n, l, m) M_lm.
  /// Local at the origin to +z: L_lm = sum_{n >= l} child(n, l, m) L_nm.
  ///   child = sqrt((n-m)! (n+m)! / ((l-m)! (l+m)!)) / (n-l)!
  long double child(int n, int l, int m) const;

  /// Multipole about +z (the source) to local about the origin (the target): L_lm = sum_n far(l, n, m) M_nm.
  ///   far = (-1)^(n+m) (n+l)! / sqrt((n-m)! (n+m)! (l-m)! (l+m)!)
  long double far(int l, int n, int m) const;

 private:
  std::vector<long double> factorial_, root_factorial_;
};

}  // namespace farsum::coulomb
