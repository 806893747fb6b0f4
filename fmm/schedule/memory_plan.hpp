#pragma once
// Memory of an evaluation, predicted: before the tree from the number of points and the tolerance alone, afterwards from its
// boxes.
#include <cstddef>
#include <cstdint>

#include "fmm/octree/octree.hpp"

namespace farsum {

struct MemoryQuery {
  std::size_t sources = 0, targets = 0;
  bool same_points = true;
  bool tree = true;  ///< expansions, or a direct sum
  double tolerance = 1e-6;
  double leaf_fill = 40;  ///< mean number of points in a leaf
};

/// For points spread evenly. Bytes beyond the caller's arrays.
std::uint64_t predicted_bytes(const MemoryQuery& query) noexcept;

/// With the trees at hand and the order of the expansions known; within 20 % of the peak.
std::uint64_t predicted_bytes(const Octree& sources, const Octree& targets, int order, bool single_precision) noexcept;

/// Throws Error(memory_refused) if a ceiling (0 = none) is exceeded.
void refuse_above(std::uint64_t predicted, std::uint64_t ceiling);

}  // namespace farsum
