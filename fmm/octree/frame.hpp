#pragma once
// The cubic lattice on which boxes lie. A box of level l has side S / 2^l and integer coordinates in [0, 2^l) from the frame's
// corner. Coordinates of points are scaled (domain/scaling.hpp): the extent is about one, offsets from the origin may be large.
#include <array>
#include <cstdint>

#include "fmm/domain/scaling.hpp"

namespace farsum {

/// Levels below the root that the lattice resolves: points nearer than side / 2^60 cannot be told apart by boxes.
inline constexpr int kMaxLevel = 60;
/// Levels covered by one 60-bit Morton key; deeper boxes get new keys inside an ancestor.
inline constexpr int kKeyLevels = 20;

using BoxCoordinates = std::array<std::int64_t, 3>;

/// A number as an unevaluated sum high + low, good to about 2^-100 of high.
struct DoubleDouble {
  double high = 0, low = 0;
};

class Frame {
 public:
  Frame() = default;
  /// Cube of the given side in which the middle of the bounds lies at the fraction `middle` of the side; it must hold the
  /// bounds.
  Frame(const Bounds& bounds, double side, double middle = 0.5);

  double side() const noexcept { return side_; }
  double box_side(int level) const noexcept;
  const std::array<double, 3>& corner() const noexcept { return corner_; }
  /// A place far outside the cube, for padding sources.
  std::array<double, 3> padding_place() const noexcept;

  /// Lattice coordinate of a scaled coordinate at level kMaxLevel, clamped into the cube; good to 2^-100 of the side.
  std::int64_t lattice(int axis, double value) const noexcept;
  /// The same at level kKeyLevels, quickly: only near a face of a box does it take the exact way.
  std::int64_t coarse_lattice(int axis, double value) const noexcept;
  /// Centre of a box, exact enough that relative positions keep their digits in boxes of any level.
  std::array<DoubleDouble, 3> centre(const BoxCoordinates& box, int level) const noexcept;

 private:
  std::array<double, 3> corner_{};
  double side_ = 1;
  DoubleDouble units_per_length_{0x1p60, 0};  ///< 2^kMaxLevel / side
};

/// Interleaves the low 21 bits of three coordinates: bits ... z1 y1 x1 z0 y0 x0.
std::uint64_t interleave(std::uint32_t x, std::uint32_t y, std::uint32_t z) noexcept;

}  // namespace farsum
