#include "fmm/expansion/order_choice.hpp"

#include <algorithm>

#include "fmm/medium/coulomb/truncation.hpp"

namespace farsum {
namespace {

/// Orders above this are even numbers only, so that translations of one offset share their order more often.
constexpr int kEvenAbove = 4;

int rounded(int order) {
  return order > kEvenAbove ? std::min(kMaxOrder, order + order % 2) : std::max(kMinOrder, order);
}

/// Octaves by which translations of the nearest far pairs may err more than the others: they are few (6, 24 and 24 of the 316
/// offsets) and converge slowly, so the same total error costs less this way, and all expansions get shorter.
double allowance(int squared_distance) {
  if (squared_distance == 4) return 2.0;
  if (squared_distance == 5) return 1.0;
  if (squared_distance == 6) return 0.5;
  return 0;
}

/// Beyond this degree corners dominate a uniform cube as well: a box with all points in a corner is worse by a constant factor
/// only.
constexpr int kSpreadDegrees = 16;

std::uint8_t smallest_order(double octaves, double spread, const float (&row)[kMaxOrder + 1]) {
  for (int p = kMinOrder; p <= kMaxOrder; ++p)
    if (double(row[p]) - spread * std::min(p, kSpreadDegrees) >= octaves) return std::uint8_t(rounded(p));
  return std::uint8_t(kMaxOrder);
}

}  // namespace

OrderChoice::OrderChoice() {
  for (int squared = 4; squared < int(rows_.size()); ++squared) {
    const coulomb::TruncationRow* measured = coulomb::truncation_row(squared);
    for (std::size_t spread = 0; spread < kSpreads; ++spread)
      for (std::size_t s = 0; s < kSlots; ++s) {
        Row& row = rows_[std::size_t(squared)][spread];
        const double octaves = double(s) / kStepsPerOctave - allowance(squared), per_degree = double(spread) * kSpreadStep;
        if (s + 1 == kSlots) {  // stands for everything beyond
          row.potential[s] = row.field[s] = std::uint8_t(kMaxOrder);
          continue;
        }
        row.potential[s] = smallest_order(octaves, per_degree, measured->potential);
        row.field[s] = smallest_order(octaves, per_degree, measured->field);
      }
  }
}

}  // namespace farsum
