#pragma once
// How large the error of a truncated multipole-to-local translation is on average: what every choice of an order rests on.
#include "fmm/medium/coulomb/truncation_table.hpp"

namespace farsum::coulomb {

/// Measured RMS errors at random places of a cube of side one, of the potential and field of random charges with sum q^2 = 1 in
/// another such cube at centre distance sqrt(squared_distance), 4..27, when both expansions keep all degrees <= order. As
/// -log2. A distance that was not measured is taken as the next smaller one that was: an upper bound.
const TruncationRow* truncation_row(int squared_distance) noexcept;

}  // namespace farsum::coulomb
