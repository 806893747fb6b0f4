#include "fmm/domain/scaling.hpp"

#include <algorithm>
#include <cmath>
#include <limits>
#include <string>
#include <vector>

#include "fmm/error.hpp"

namespace farsum {
namespace {

constexpr std::size_t kGrain = 1 << 15;
constexpr std::size_t kNone = std::numeric_limits<std::size_t>::max();

[[noreturn]] void throw_not_finite(const char* what, std::size_t index, const char* component, double value) {
  throw Error(ErrorCode::not_finite,
              std::string(what) + " " + std::to_string(index) + " has " + component + " = " +
                  (std::isnan(value) ? "NaN" : (value > 0 ? "+infinity" : "-infinity")),
              "correct or leave out this entry");
}

Bounds bounds_of_piece(const PointsView& points, std::size_t begin, std::size_t end, std::size_t& first_bad) {
  const double* const bases[3] = {points.x, points.y, points.z};
  Bounds box;
  box.empty = begin == end;
  for (int axis = 0; axis < 3; ++axis) {
    double low = std::numeric_limits<double>::infinity(), high = -low;
    const double* base = bases[axis];
    double poison = 0;  // becomes NaN as soon as one value is not finite
    for (std::size_t i = begin; i < end; ++i) {
      const double value = base[std::ptrdiff_t(i) * points.stride];
      low = std::min(low, value);
      high = std::max(high, value);
      poison += value * 0.0;
    }
    box.low[std::size_t(axis)] = low;
    box.high[std::size_t(axis)] = high;
    if (poison == 0.0) continue;
    for (std::size_t i = begin; i < end && i < first_bad; ++i)
      if (!std::isfinite(base[std::ptrdiff_t(i) * points.stride])) first_bad = i;
  }
  return box;
}

}  // namespace

PowerOfTwo::PowerOfTwo(int exponent) : exponent_(exponent) {
  const int half = exponent / 2;
  first_ = std::ldexp(1.0, half);
  second_ = std::ldexp(1.0, exponent - half);
}

void Bounds::join(const Bounds& other) {
  if (other.empty) return;
  if (empty) {
    *this = other;
    return;
  }
  for (std::size_t axis = 0; axis < 3; ++axis) {
    low[axis] = std::min(low[axis], other.low[axis]);
    high[axis] = std::max(high[axis], other.high[axis]);
  }
}

double Bounds::extent() const {
  double largest = 0;
  for (std::size_t axis = 0; axis < 3; ++axis) largest = std::max(largest, empty ? 0.0 : high[axis] - low[axis]);
  return largest;
}

Bounds checked_bounds(const PointsView& points, const char* what, Executor& executor) {
  const std::size_t pieces = (points.count + kGrain - 1) / kGrain;
  std::vector<Bounds> boxes(pieces);
  std::vector<std::size_t> bad(pieces, kNone);
  executor.for_each(points.count, kGrain, [&](std::size_t begin, std::size_t end, int) {
    boxes[begin / kGrain] = bounds_of_piece(points, begin, end, bad[begin / kGrain]);
  });
  Bounds all;
  for (std::size_t piece = 0; piece < pieces; ++piece) {
    if (bad[piece] != kNone) {
      const std::ptrdiff_t at = std::ptrdiff_t(bad[piece]) * points.stride;
      const double values[3] = {points.x[at], points.y[at], points.z[at]};
      const char* const names[3] = {"x", "y", "z"};
      for (int axis = 0; axis < 3; ++axis)
        if (!std::isfinite(values[axis])) throw_not_finite(what, bad[piece], names[axis], values[axis]);
    }
    all.join(boxes[piece]);
  }
  return all;
}

ChargeSums checked_charge_sums(const ChargesView& charges, Executor& executor) {
  struct Part {
    double max_abs = 0, sum = 0;
    std::size_t bad = kNone;
  };
  const std::size_t pieces = (charges.count + kGrain - 1) / kGrain;
  std::vector<Part> parts(pieces);
  std::vector<double> squares(pieces);
  const auto value_at = [&](std::size_t i) { return charges.q[std::ptrdiff_t(i) * charges.stride]; };
  executor.for_each(charges.count, kGrain, [&](std::size_t begin, std::size_t end, int) {
    Part& part = parts[begin / kGrain];
    for (std::size_t i = begin; i < end; ++i) {
      const double q = value_at(i);
      if (!std::isfinite(q)) {
        part.bad = i;
        break;
      }
      part.max_abs = std::max(part.max_abs, std::abs(q));
      part.sum += q;
    }
  });
  ChargeSums sums;
  for (const Part& part : parts) {
    if (part.bad != kNone) throw_not_finite("charge", part.bad, "value", value_at(part.bad));
    sums.max_abs = std::max(sums.max_abs, part.max_abs);
    sums.sum += part.sum;
  }
  if (sums.max_abs == 0) return sums;
  const PowerOfTwo scale(-binary_exponent(sums.max_abs));
  executor.for_each(charges.count, kGrain, [&](std::size_t begin, std::size_t end, int) {
    double sum = 0;
    for (std::size_t i = begin; i < end; ++i) {
      const double q = scale(value_at(i));
      sum += q * q;
    }
    squares[begin / kGrain] = sum;
  });
  const double unit = scale(sums.max_abs);
  for (double part : squares) sums.sum_squares += part / (unit * unit);
  return sums;
}

int binary_exponent(double value) {
  int exponent = 0;
  std::frexp(value, &exponent);
  return value == 0 ? 0 : exponent;
}

}  // namespace farsum
