#pragma once
// Order of each multipole-to-local translation: the smallest whose usual error (medium/coulomb/truncation.hpp) stays within
// what the target box may bear, given the charges of the source box.
#include <array>
#include <cstdint>
#include <vector>

#include "fmm/domain/box_offset.hpp"
#include "fmm/expansion/indexing.hpp"

namespace farsum {

/// Strength of a source box and error borne by a target box, both as base-2 logarithms in scaled units.
/// strength_*: of sqrt(sum q^2 + c (sum q)^2). bearable_*: absolute error of one translation.
/// spread: how much faster than for a uniformly filled cube the terms grow with the degree, octaves per degree, source plus
/// target.
struct TranslationDemand {
  double strength_potential, strength_field, bearable_potential, bearable_field, spread;
};

class OrderChoice {
 public:
  OrderChoice();

  /// Order for boxes of side 2^log_side at a squared centre distance of 4 or more (in sides); kMaxOrder if even that is not
  /// enough.
  int order(int squared_distance, double log_side, const TranslationDemand& d) const noexcept {
    const Row& row = rows_[std::size_t(squared_distance)][spread_slot(d.spread)];
    const int a = row.potential[slot(d.strength_potential - log_side - d.bearable_potential)];
    const int b = row.field[slot(d.strength_field - 2 * log_side - d.bearable_field)];
    return a > b ? a : b;
  }

 private:
  static constexpr int kStepsPerOctave = 2, kOctaves = 80;
  static constexpr std::size_t kSlots = std::size_t(kStepsPerOctave * kOctaves);
  struct Row {
    std::array<std::uint8_t, kSlots> potential, field;
  };
  /// Slot of a wanted reduction 2^-octaves.
  static std::size_t slot(double octaves) noexcept {
    const double at = octaves * kStepsPerOctave + 1;
    return at <= 0 ? 0 : at >= double(kSlots - 1) ? kSlots - 1 : std::size_t(at);
  }
  static constexpr std::size_t kSpreads = 8;
  static constexpr double kSpreadStep = 0.08;  ///< octaves per degree
  static std::size_t spread_slot(double spread) noexcept {
    const double at = spread / kSpreadStep + 0.5;
    return at <= 0 ? 0 : at >= double(kSpreads - 1) ? kSpreads - 1 : std::size_t(at);
  }
  std::array<std::array<Row, kSpreads>, 3 * kOffsetReach * kOffsetReach + 1> rows_{};
};

/// Smallest order used; below it a translation costs hardly less.
inline constexpr int kMinOrder = 2;

}  // namespace farsum
