#pragma once
// Charges at exactly the same place: found in the leaves of the tree, and merged where the caller wants such pairs left out.
#include <cstdint>
#include <optional>
#include <utility>
#include <vector>

#include "fmm/octree/octree.hpp"

namespace farsum {

/// The distinct places of a set of points: place_of[i] is the place of the caller's point i, first[p] the point that stands for
/// place p.
struct DistinctPlaces {
  std::vector<std::uint32_t> place_of, first;
};

/// Empty if all points are distinct.
std::optional<DistinctPlaces> find_coincident(const Octree& tree, Executor& executor);

/// Two points of a leaf that could not be divided although it is over capacity: equal, or nearer than the lattice resolves.
std::optional<std::pair<std::uint32_t, std::uint32_t>> undividable_pair(const Octree& tree, std::uint32_t capacity);

}  // namespace farsum
