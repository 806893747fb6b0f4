#include "fmm/octree/root_choice.hpp"

#include <algorithm>
#include <cmath>

namespace farsum {
namespace {

constexpr double kMiddle = 3.0 / 7;    // binary 0.011011...: its distance from multiples of 2^-l is at least 2^-l / 7
constexpr double kLeastFactor = 1.17;  // side / extent at least 1 / (2 kMiddle), with a margin for rounding

/// Points in a box of side h if they fill the bounds evenly.
double points_in_box(const Bounds& bounds, double n, double h) {
  for (std::size_t axis = 0; axis < 3; ++axis) {
    const double edge = bounds.high[axis] - bounds.low[axis];
    if (edge > h) n *= h / edge;
  }
  return n;
}

/// Side of a box with `fill` points, by bisection in the exponent.
double side_for(const Bounds& bounds, double n, double fill) {
  double low = -60, high = 0;
  for (int step = 0; step < 40; ++step) {
    const double middle = (low + high) / 2;
    (points_in_box(bounds, n, std::exp2(middle)) < fill ? low : high) = middle;
  }
  return std::exp2(high);
}

}  // namespace

Frame choose_frame(const Bounds& bounds, std::size_t n, double fill) {
  const double extent = bounds.extent();
  if (!(extent > 0)) return Frame(bounds, 1.0, 0.5);
  double side = side_for(bounds, double(n), fill);
  while (side < kLeastFactor * extent) side *= 2;
  while (side >= 2 * kLeastFactor * extent) side /= 2;
  return Frame(bounds, side, kMiddle);
}

}  // namespace farsum
