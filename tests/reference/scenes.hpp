#pragma once
// Seeded sets of charges that stress different parts of the engine; the same charges from every compiler up to the last bits of
// libm.
#include <cstdint>
#include <string>
#include <vector>

#include "tests/reference/charges.hpp"

namespace farsum::reference {

enum class Shape {
  cube,             ///< evenly in the unit cube
  ball,             ///< evenly in the unit ball
  shell,            ///< evenly on the unit sphere
  line,             ///< evenly on a piece of the x axis: the bounding box has two zero edges
  slanted_line,     ///< evenly on a line that no axis is parallel to
  helix,            ///< ten turns, random along the curve
  plane,            ///< evenly on a square with z = 0 exactly
  ring,             ///< equal steps on a circle
  bunch_with_halo,  ///< long Gaussian core, a tenth of the charges in a halo six times wider
  droplets,         ///< Gaussian clusters of widths 1e-5 .. 1e-2 in the unit cube
  scales_1e9,       ///< clusters of widths 1, 1e-3, 1e-6 and 1e-9
  far_pair,         ///< two clusters of diameter 1, a million apart
  lattice,          ///< perfect simple cubic block, spacing 1 (the nearest cube number of charges)
  close_pairs,      ///< pairs of separation 1e-12 .. 1e-3 in the unit cube
  heavy_charge,     ///< cube with one charge a million times larger
  box_faces,        ///< random places of a dyadic grid: many lie on the faces between boxes of any octree
  outlier,          ///< cube with one charge a million edges away
  gaussian          ///< isotropic, width 1
};

enum class Signs {
  one,          ///< all positive
  random,       ///< a coin for each charge
  alternating,  ///< by index, on a lattice by parity of the place (rock salt)
  neutral       ///< neighbours in the list cancel: the total is exactly 0
};

const std::vector<Shape>& all_shapes();
std::string name_of(Shape shape);
std::string name_of(Signs signs);

/// About `count` charges (exactly, except for the lattice). Magnitudes are 0.5 .. 1.5, on lattice, ring and box_faces 1.
Charges make_scene(Shape shape, Signs signs, std::size_t count, std::uint64_t seed);

/// Simple cubic block of edge^3 unit charges at integer places, all positive or alternating.
Charges cubic_block(int edge, bool alternating);

}  // namespace farsum::reference
