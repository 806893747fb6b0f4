#pragma once
// Energy and the exact identities of an isolated set of charges, from results in the caller's arrays.
#include "fmm/domain/scaling.hpp"
#include "fmm/points.hpp"
#include "fmm/report.hpp"

namespace farsum {

struct IdentityInput {
  PointsView positions;
  ChargesView charges;
  ResultView values;
  Bounds bounds;                                       ///< of the positions
  PowerOfTwo length, charge;                           ///< caller's value -> scaled value
  PowerOfTwo potential_unit, field_unit, energy_unit;  ///< scaled -> caller's
};

struct IdentityResult {
  Energy energy;  ///< error_bound still to be multiplied by the tolerance
  IdentityChecks checks;
  double field_max = 0;       ///< caller's units
  bool finite = true;         ///< every result is a finite number
  std::size_t first_bad = 0;  ///< first index that is not
};

/// One pass over all results; the order of additions is fixed.
IdentityResult check_identities(const IdentityInput& input, Executor& executor);

}  // namespace farsum
