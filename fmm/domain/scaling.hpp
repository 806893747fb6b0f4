#pragma once
// Power-of-two scaling: lengths and charges are brought to order one by factors 2^k, results scaled back, so that no
// intermediate overflows and scaling an input by a power of two changes no mantissa bit of any result.
#include <array>
#include <cstddef>

#include "fmm/parallel/executor.hpp"
#include "fmm/points.hpp"

namespace farsum {

/// Product with 2^exponent, exact unless the result is subnormal or overflows; works for exponents beyond the range of one
/// double.
class PowerOfTwo {
 public:
  explicit PowerOfTwo(int exponent = 0);
  double operator()(double value) const noexcept { return value * first_ * second_; }
  int exponent() const noexcept { return exponent_; }

 private:
  int exponent_;
  double first_, second_;
};

/// Bounding box of points.
struct Bounds {
  std::array<double, 3> low{}, high{};
  bool empty = true;
  void join(const Bounds& other);
  double extent() const;  ///< largest edge
};

/// Bounding box; throws Error(not_finite) naming the first bad index of `what` ("position", "target").
Bounds checked_bounds(const PointsView& points, const char* what, Executor& executor);

struct ChargeSums {
  double max_abs = 0, sum = 0, sum_squares = 0;  ///< sum_squares relative to max_abs^2
};

/// Sums over the charges; throws Error(not_finite) naming the first bad index.
ChargeSums checked_charge_sums(const ChargesView& charges, Executor& executor);

/// Exponent k with 2^(k-1) <= value < 2^k (0 for value 0).
int binary_exponent(double value);

}  // namespace farsum
