#pragma once
// What the user asks of a solve, and its meaning in the words of the engine.
#include <CLI/CLI.hpp>
#include <string>

#include "apps/farsum/input_options.hpp"
#include "apps/farsum/run.hpp"
#include "apps/farsum/species_roles.hpp"
#include "fmm/options.hpp"

namespace farsum::command {

struct SolveOptions {
  CommonOptions common;
  InputOptions reading;
  std::string input, output;
  double tolerance = 1e-6;
  std::string outputs;           ///< comma-separated, empty: all
  std::string sources, targets;  ///< comma-separated species, empty: all
  double permittivity = 1;
  std::string method = "auto", coincident = "error";
  long long samples = 200;
  bool best_effort = false;
  bool as_static = false;
};

/// Records to write.
struct WantedRecords {
  bool potential = true, field = true, force = true, energy = true;
  /// What the engine must compute for them.
  Output engine() const;
};

void add_solve_options(CLI::App& app, SolveOptions& options);

/// All of these throw UsageError for a value that makes no sense.
WantedRecords wanted_records(const SolveOptions& options);
SpeciesRoles species_roles(const SolveOptions& options);
/// Without memory limit and callbacks, which the run adds.
Options engine_options(const SolveOptions& options);

/// Throws UsageError unless 1e-13 <= tolerance <= 1e-2.
void require_tolerance(double tolerance);
/// Throws UsageError unless at least 1.
std::size_t sample_count(long long samples);

}  // namespace farsum::command
