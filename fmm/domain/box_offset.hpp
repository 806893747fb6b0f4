#pragma once
// Offsets between boxes of one level, and which of them count as near.

namespace farsum {

/// Source minus target, in box sides.
struct BoxOffset {
  int x, y, z;
  constexpr int squared() const noexcept { return x * x + y * y + z * z; }
  /// Equal or touching boxes.
  constexpr bool near() const noexcept { return x * x <= 1 && y * y <= 1 && z * z <= 1; }
};

/// Largest component of the offset of any far pair, for every Separation.
inline constexpr int kOffsetReach = 5;
inline constexpr int kOffsetSpan = 2 * kOffsetReach + 1;
inline constexpr int kOffsets = kOffsetSpan * kOffsetSpan * kOffsetSpan;
constexpr int offset_index(const BoxOffset& o) noexcept {
  return ((o.x + kOffsetReach) * kOffsetSpan + (o.y + kOffsetReach)) * kOffsetSpan + (o.z + kOffsetReach);
}
constexpr BoxOffset offset_of(int index) noexcept {
  return {index / (kOffsetSpan * kOffsetSpan) - kOffsetReach, index / kOffsetSpan % kOffsetSpan - kOffsetReach,
          index % kOffsetSpan - kOffsetReach};
}

/// When two boxes of one level are near: if they touch, or if their squared centre distance is at most near_squared (3 or 4).
/// With 4 the six offsets (2, 0, 0) are near: their expansions converge so slowly at facing corners that tight tolerances would
/// need orders beyond 48, and sum faster without them.
struct Separation {
  int near_squared = 3;

  constexpr bool near(const BoxOffset& o) const noexcept { return o.near() || o.squared() <= near_squared; }
  /// True if a far pair can have this offset: the boxes are far, their parents near.
  constexpr bool occurs(const BoxOffset& o) const noexcept {
    if (near(o)) return false;
    for (int octants = 0; octants < 64; ++octants) {
      const int x = o.x + (octants & 1) - (octants >> 3 & 1), y = o.y + (octants >> 1 & 1) - (octants >> 4 & 1),
                z = o.z + (octants >> 2 & 1) - (octants >> 5 & 1);
      if (x % 2 == 0 && y % 2 == 0 && z % 2 == 0 && near({x / 2, y / 2, z / 2})) return true;
    }
    return false;
  }
};

}  // namespace farsum
