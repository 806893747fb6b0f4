#include "fmm/medium/coulomb/truncation.hpp"

namespace farsum::coulomb {

const TruncationRow* truncation_row(int squared_distance) noexcept {
  for (const TruncationRow& row : kTruncationRows)
    if (row.squared_distance == squared_distance) return &row;
  return nullptr;
}

}  // namespace farsum::coulomb
