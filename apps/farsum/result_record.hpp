#pragma once
// What a result file remembers of its making, in its group `run`: enough to check it later. Nothing in it depends on threads,
// time or machine load, so equal jobs give equal files.
#include "apps/farsum/evaluation.hpp"
#include "apps/farsum/solve_options.hpp"
#include "io/run_attributes.hpp"

namespace farsum::command {

io::RunAttributes result_record(const SolveOptions& options, const io::ParticleSet& set, const RowRoles& roles,
                                const Evaluation& evaluation, double coulomb_constant);

/// The settings of the record that a later check must use as well.
struct RecordedSettings {
  double tolerance = 1e-6;
  double permittivity = 1;
  bool skip_coincident = false;
  InputOptions reading;
  SpeciesRoles roles;
  double total_energy = 0;  ///< J, NaN when not recorded
};
/// Throws Error(item_missing) when the file is no result of a solve.
RecordedSettings recorded_settings(const io::RunAttributes& run, const std::string& file);

}  // namespace farsum::command
