#include "fmm/octree/frame.hpp"

#include <algorithm>
#include <cmath>

#include "fmm/base/padding.hpp"

namespace farsum {
namespace {

constexpr std::int64_t kUnits = std::int64_t{1} << kMaxLevel;

/// a + b = sum + error exactly (Knuth).
double two_sum(double a, double b, double& error) noexcept {
  const double sum = a + b, part = sum - a;
  error = (a - (sum - part)) + (b - part);
  return sum;
}

}  // namespace

Frame::Frame(const Bounds& bounds, double side, double middle) : side_(side) {
  units_per_length_.high = double(kUnits) / side;
  units_per_length_.low = std::fma(-units_per_length_.high, side, double(kUnits)) / side;
  for (std::size_t axis = 0; axis < 3; ++axis) {
    const double low = bounds.low[axis], high = bounds.high[axis];
    corner_[axis] = bounds.empty ? 0.0 : low - (side * middle - (high - low) / 2);
  }
}

double Frame::box_side(int level) const noexcept {
  return std::ldexp(side_, -level);
}

std::array<double, 3> Frame::padding_place() const noexcept {
  std::array<double, 3> place = corner_;
  for (double& coordinate : place) coordinate += kPadDistance;
  return place;
}

std::int64_t Frame::lattice(int axis, double value) const noexcept {
  double low;
  const double high = two_sum(value, -corner_[std::size_t(axis)], low);
  const double scaled = high * units_per_length_.high, whole = std::floor(scaled);
  if (!(whole >= 0)) return 0;
  if (whole >= double(kUnits)) return kUnits - 1;
  const double rest = (scaled - whole) + (std::fma(high, units_per_length_.high, -scaled) + high * units_per_length_.low +
                                          low * units_per_length_.high);
  return std::clamp<std::int64_t>(std::int64_t(whole) + std::int64_t(std::floor(rest)), 0, kUnits - 1);
}

std::int64_t Frame::coarse_lattice(int axis, double value) const noexcept {
  constexpr double kCoarse = 1.0 / double(std::int64_t{1} << (kMaxLevel - kKeyLevels)), kFace = 1e-6;
  const double scaled = (value - corner_[std::size_t(axis)]) * (units_per_length_.high * kCoarse), whole = std::floor(scaled);
  const double inside = scaled - whole;
  if (inside > kFace && inside < 1 - kFace && whole >= 0 && whole < double(std::int64_t{1} << kKeyLevels))
    return std::int64_t(whole);
  return lattice(axis, value) >> (kMaxLevel - kKeyLevels);
}

std::array<DoubleDouble, 3> Frame::centre(const BoxCoordinates& box, int level) const noexcept {
  constexpr int kHalf = 30;
  const double step = box_side(level);
  std::array<DoubleDouble, 3> result;
  for (std::size_t axis = 0; axis < 3; ++axis) {
    // (i + 1/2) step with i split in two exact halves, each product with its rounding error.
    const double coarse = std::ldexp(double(box[axis] >> kHalf), kHalf);
    const double fine = double(box[axis] & ((std::int64_t{1} << kHalf) - 1)) + 0.5;
    const double a = coarse * step, b = fine * step;
    double low = std::fma(coarse, step, -a) + std::fma(fine, step, -b), error;
    double sum = two_sum(corner_[axis], a, error);
    low += error;
    sum = two_sum(sum, b, error);
    low += error;
    result[axis].high = two_sum(sum, low, error);
    result[axis].low = error;
  }
  return result;
}

std::uint64_t interleave(std::uint32_t x, std::uint32_t y, std::uint32_t z) noexcept {
  const auto spread = [](std::uint64_t v) {
    v &= 0x1fffff;
    v = (v | v << 32) & 0x1f00000000ffff;
    v = (v | v << 16) & 0x1f0000ff0000ff;
    v = (v | v << 8) & 0x100f00f00f00f00f;
    v = (v | v << 4) & 0x10c30c30c30c30c3;
    v = (v | v << 2) & 0x1249249249249249;
    return v;
  };
  return spread(x) | spread(y) << 1 | spread(z) << 2;
}

}  // namespace farsum
