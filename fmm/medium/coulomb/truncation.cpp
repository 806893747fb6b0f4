#include "fmm/medium/coulomb/truncation.hpp"

namespace farsum::coulomb {

const TruncationRow* truncation_row(int squared_distance) noexcept {
  const TruncationRow* nearest = kTruncationRows;
  for (const TruncationRow& row : kTruncationRows)
    if (row.squared_distance <= squared_distance) nearest = &row;
  return nearest;
}

}  // namespace farsum::coulomb
