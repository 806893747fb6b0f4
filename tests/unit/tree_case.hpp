#pragma once
// Points of the test scenes in an octree, built as the engine does: scaled by a power of two, in one frame for all.
#include <vector>

#include "fmm/domain/scaling.hpp"
#include "fmm/octree/octree.hpp"
#include "tests/reference/scenes.hpp"

namespace farsum::unit {

using reference::Charges;

/// Scale and frame that hold all the given points.
struct Setting {
  PowerOfTwo scale;
  Frame frame;

  explicit Setting(std::initializer_list<const Charges*> sets, double side = 1.25, double middle = 3.0 / 7) {
    Executor executor(1);
    Bounds bounds;
    for (const Charges* set : sets) bounds.join(checked_bounds(set->points(), "position", executor));
    scale = PowerOfTwo(-binary_exponent(bounds.extent()));
    for (double& v : bounds.low) v = scale(v);
    for (double& v : bounds.high) v = scale(v);
    frame = Frame(bounds, side, middle);
  }
};

inline Octree tree_of(const Charges& charges, const Setting& setting, std::uint32_t capacity, int threads = 1) {
  static MemoryLedger ledger;  // outlives every tree of a test
  Executor executor(threads);
  return build_octree(charges.points(), setting.scale, setting.frame, {capacity}, executor, ledger);
}

inline Octree tree_of(const Charges& charges, std::uint32_t capacity, int threads = 1) {
  return tree_of(charges, Setting({&charges}), capacity, threads);
}

}  // namespace farsum::unit
