#pragma once
// An adaptive octree over one set of points, and the points in its order. Boxes stand level by level, parents before children;
// the points of a box, and of everything below it, are one contiguous range. Empty boxes do not exist.
#include <cstddef>
#include <cstdint>
#include <vector>

#include "fmm/base/aligned_array.hpp"
#include "fmm/octree/frame.hpp"
#include "fmm/parallel/executor.hpp"
#include "fmm/points.hpp"

namespace farsum {

struct Box {
  BoxCoordinates place{};            ///< integer coordinates at the box's own level
  std::uint32_t begin = 0, end = 0;  ///< its points, in tree order
  std::uint32_t parent = 0;
  std::uint32_t first_child = 0;
  std::uint8_t children = 0;  ///< 0 for a leaf
  std::uint8_t level = 0;
  std::uint8_t octant = 0;  ///< position inside the parent: bit 0 x, bit 1 y, bit 2 z
  std::uint32_t count() const noexcept { return end - begin; }
  bool leaf() const noexcept { return children == 0; }
};

struct Octree {
  Frame frame;
  std::size_t count = 0;                   ///< points
  AlignedArray<std::uint32_t> index;       ///< caller's index of the point at each place of the tree order
  AlignedArray<double> x, y, z;            ///< scaled coordinates in tree order, padded to whole vectors
  std::vector<Box> boxes;                  ///< boxes[0] is the root, if there are points
  LedgerShare boxes_share;                 ///< counts the boxes
  std::vector<std::uint32_t> level_begin;  ///< first box of each level, and the end: depth() + 2 entries

  int depth() const noexcept { return int(level_begin.size()) - 2; }
  std::size_t leaves() const noexcept;
};

struct OctreeLimits {
  std::uint32_t leaf_capacity;  ///< a box with more points is divided, unless they are all equal
};

/// Builds the tree. Points are multiplied by `scale` first. A pure function of its arguments except the executor.
/// A box of level kMaxLevel, or one whose points are all equal, is never divided.
Octree build_octree(const PointsView& points, const PowerOfTwo& scale, const Frame& frame, OctreeLimits limits,
                    Executor& executor, MemoryLedger& ledger);

/// values[i] = scale(view[index[i]]) in tree order, padded with zeros to whole vectors.
AlignedArray<double> gather_charges(const ChargesView& charges, const PowerOfTwo& scale, const Octree& tree, Executor& executor,
                                    MemoryLedger& ledger);

}  // namespace farsum
