#include "fmm/schedule/close_pairs.hpp"

#include <algorithm>
#include <array>
#include <charconv>
#include <cmath>
#include <limits>

#include "fmm/error.hpp"

namespace farsum {
namespace {

constexpr double kSmallestSquared = 0x1p-120;  // (2^-60)^2 of an extent between 1/2 and 1
constexpr double kFarSquared = 1e300;

double squared_distance(const Octree& a, std::size_t i, const Octree& b, std::size_t j) {
  const double dx = a.x[i] - b.x[j], dy = a.y[i] - b.y[j], dz = a.z[i] - b.z[j];
  return dx * dx + dy * dy + dz * dz;
}

/// The source nearest to a target, itself left out; the smallest caller's index among equals.
std::uint32_t nearest_source(const Octree& sources, const Octree& targets, std::size_t place) {
  const bool same = &sources == &targets;
  double best = std::numeric_limits<double>::infinity();
  std::uint32_t found = 0;
  for (std::size_t j = 0; j < sources.count; ++j) {
    if (same && j == place) continue;
    const double r2 = squared_distance(targets, place, sources, j);
    if (r2 < best || (r2 == best && sources.index[j] < found)) {
      best = r2;
      found = sources.index[j];
    }
  }
  return found;
}

std::string number(double value) {
  std::array<char, 40> text;
  const auto end = std::to_chars(text.data(), text.data() + text.size(), value);
  return std::string(text.data(), end.ptr);
}

std::string place_text(const PointsView& points, std::size_t i) {
  const std::ptrdiff_t at = std::ptrdiff_t(i) * points.stride;
  return "(" + number(points.x[at]) + ", " + number(points.y[at]) + ", " + number(points.z[at]) + ")";
}

}  // namespace

ClosestPair closest_pair(const Octree& sources, const Octree& targets, const double* nearest_squared) {
  ClosestPair pair;
  pair.squared = kFarSquared;
  std::size_t place = targets.count;
  for (std::size_t k = 0; k < targets.count; ++k) {
    pair.squared = std::min(pair.squared, nearest_squared[k]);
    if (nearest_squared[k] < kSmallestSquared && (place == targets.count || targets.index[k] < targets.index[place])) place = k;
  }
  if (place == targets.count) return pair;
  pair.too_close = true;
  pair.target = targets.index[place];
  pair.source = nearest_source(sources, targets, place);
  return pair;
}

void nearest_in_leaves(const Octree& tree, double* nearest_squared, Executor& executor) {
  std::fill_n(nearest_squared, tree.count, kFarSquared);
  executor.for_each(tree.boxes.size(), 64, [&](std::size_t first, std::size_t last, int) {
    for (std::size_t b = first; b < last; ++b) {
      const Box& box = tree.boxes[b];
      if (!box.leaf()) continue;
      for (std::size_t i = box.begin; i < box.end; ++i)
        for (std::size_t j = box.begin; j < i; ++j) {
          const double r2 = squared_distance(tree, i, tree, j);
          nearest_squared[i] = std::min(nearest_squared[i], r2);
          nearest_squared[j] = std::min(nearest_squared[j], r2);
        }
    }
  });
}

void throw_close_pair(const PointsView& positions, std::size_t a, std::size_t b) {
  const std::ptrdiff_t at_a = std::ptrdiff_t(a) * positions.stride, at_b = std::ptrdiff_t(b) * positions.stride;
  const bool equal = positions.x[at_a] == positions.x[at_b] && positions.y[at_a] == positions.y[at_b] &&
                     positions.z[at_a] == positions.z[at_b];
  const std::string names = "charges " + std::to_string(std::min(a, b)) + " and " + std::to_string(std::max(a, b));
  if (equal)
    throw Error(ErrorCode::coincident_charges, names + " are both at " + place_text(positions, std::min(a, b)),
                "move or merge them, or ask to skip coincident pairs");
  throw Error(ErrorCode::range_exceeded,
              names + " at " + place_text(positions, std::min(a, b)) + " are nearer than 2^-60 of the extent of all charges",
              "merge them, or leave out the outlier that makes the extent so large");
}

void throw_target_on_charge(const PointsView& positions, std::size_t target, std::size_t source, bool exactly) {
  const std::string names = "target " + std::to_string(target) + " and charge " + std::to_string(source);
  if (exactly)
    throw Error(ErrorCode::target_on_charge, names + " are both at " + place_text(positions, source),
                "move the target, or ask to skip coincident pairs: the target then gets the value of all other charges");
  throw Error(ErrorCode::range_exceeded, names + " are nearer than 2^-60 of the extent of everything",
              "move or leave out the target");
}

std::string short_number(double value) {
  std::array<char, 40> text;
  const auto end = std::to_chars(text.data(), text.data() + text.size(), value, std::chars_format::general, 3);
  std::string result(text.data(), end.ptr);
  const std::size_t exponent = result.find('e');
  if (exponent != std::string::npos && exponent + 2 < result.size() && result[exponent + 2] == '0')
    result.erase(exponent + 2, 1);
  return result;
}

}  // namespace farsum
