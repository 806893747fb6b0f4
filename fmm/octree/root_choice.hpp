#pragma once
// Size and place of the root cube. An octree halves boxes; with a fixed root the mean number of charges in a leaf would jump by
// eight between the numbers of charges that suit it. The root's side is free between one and two such steps instead.
#include <cstddef>

#include "fmm/octree/frame.hpp"

namespace farsum {

/// Frame for n points in the bounds such that boxes of some level hold about `fill` points if the points are spread evenly over
/// the bounds (also where those are flat). The middle of the bounds lies at 3/7 of the root's side: there it is far from the
/// faces of the boxes of every level, so that a dense core in the middle is not cut into corners.
Frame choose_frame(const Bounds& bounds, std::size_t n, double fill);

}  // namespace farsum
