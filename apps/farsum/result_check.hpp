#pragma once
// Holds a result against exact sums that are formed anew from the input.
#include <vector>

#include "apps/farsum/species_roles.hpp"
#include "fmm/options.hpp"
#include "fmm/report.hpp"
#include "io/result_reader.hpp"

namespace farsum::command {

/// Both sides of the check: charges from the input, values from the result, and which row of the input each row of the result
/// is.
struct CheckedResult {
  const io::ParticleSet& input;
  io::ResultTable& result;       ///< its columns are brought to engine units and to the order of the input
  std::vector<std::size_t> row;  ///< of the input, for each row of the result
  double coulomb_constant = 0;   ///< that the result was made with, V m / C
};

/// Throws Error(not_finite) naming the first value of the result that is no finite number.
void require_finite_results(const io::ResultTable& result);

/// All charges act on all: the engine's own measurement (farsum::measure_error), with its choice of charges.
/// Throws Error(item_wrong_size) when the result does not hold every charge of the input.
ErrorMeasure check_all_charges(CheckedResult& checked, const Options& options);

/// Some species act on some: exact sums over the acting rows at evenly spread rows of the result. Same norms; rms_upper is not
/// estimated and equals rms.
ErrorMeasure check_limited(CheckedResult& checked, const RowRoles& roles, const Options& options);

/// Half the sum of charge times potential, in J, and the same with absolute values. Needs columns in engine units.
struct EnergySum {
  double value = 0, scale = 0;
};
EnergySum energy_sum(const CheckedResult& checked);

}  // namespace farsum::command
