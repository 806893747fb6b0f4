#pragma once
// Pairs that are too close: at one place, or nearer than 2^-60 of the extent. They are found by the sums themselves
// (smallest squared distance of every target); here they get their names.
#include <cstdint>
#include <string>

#include "fmm/octree/octree.hpp"

namespace farsum {

struct ClosestPair {
  double squared = 0;                    ///< smallest squared distance over all targets, scaled
  bool too_close = false;                ///< equal places, or below the range of the contract
  std::uint32_t target = 0, source = 0;  ///< caller's indices of the first such pair; set only if too_close
};

ClosestPair closest_pair(const Octree& sources, const Octree& targets, const double* nearest_squared);

/// nearest_squared[k] = smallest squared distance of point k to the others in its own leaf (a large number if it is alone).
void nearest_in_leaves(const Octree& tree, double* nearest_squared, Executor& executor);

/// Throws coincident_charges or range_exceeded naming both charges and the place.
[[noreturn]] void throw_close_pair(const PointsView& positions, std::size_t a, std::size_t b);
/// Throws target_on_charge (exactly) or range_exceeded.
[[noreturn]] void throw_target_on_charge(const PointsView& positions, std::size_t target, std::size_t source, bool exactly);

/// A number as a person writes it: "1e-06" becomes "1e-6", three significant digits.
std::string short_number(double value);

}  // namespace farsum
