#pragma once
// Rotation of real harmonics about the y axis.
#include <vector>

namespace farsum {

/// Matrices D_n with R_n(Y v) = D_n R_n(v) for the rotation Y: x' = cos x - sin z, z' = sin x + cos z, which takes the
/// direction (sin, 0, cos) to the z axis. D_n does not mix cosine harmonics (k >= 0) with sine harmonics (k < 0).
class AxisTurn {
 public:
  /// Recursion of Ivanic & Ruedenberg (J. Phys. Chem. 100, 6342, 1996; 102, 9099, 1998) in extended precision.
  AxisTurn(int order, long double cosine, long double sine);

  /// Entry (row, column), -n <= row, column <= n; 0 where the signs of row and column differ in kind.
  long double entry(int n, int row, int column) const { return levels_[std::size_t(n)][slot(n, row, column)]; }

 private:
  static std::size_t slot(int n, int row, int column) { return std::size_t((row + n) * (2 * n + 1) + column + n); }
  void fill_level(int n);
  long double product(int axis, int n, int a, int b) const;
  long double new_entry(int n, int m, int column) const;

  std::vector<std::vector<long double>> levels_;
  std::vector<long double> roots_, inverse_roots_;  ///< of the integers
};

}  // namespace farsum
