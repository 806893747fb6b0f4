#include "apps/farsum/solve_options.hpp"

#include <fmt/format.h>

#include <cmath>

#include "apps/farsum/display.hpp"
#include "apps/farsum/exit_status.hpp"
#include "apps/farsum/resources.hpp"

namespace farsum::command {

Output WantedRecords::engine() const {
  Output outputs = Output::none;
  if (potential || energy) outputs = outputs | Output::potential;
  if (field || force) outputs = outputs | Output::field;
  return outputs;
}

void add_solve_options(CLI::App& app, SolveOptions& options) {
  app.add_option("IN", options.input, "Particle file: openPMD (HDF5), or text with a header line.")->required()->type_name("");
  app.add_option("-o,--output", options.output, "File to write (openPMD, HDF5): the particles and their results.")
      ->required()
      ->type_name("OUT");
  add_tolerance_option(
      app, options.tolerance,
      "Largest relative error of potential and field (rms over the charges),\nfrom 1e-2 to 1e-13. Default: 1e-6.");
  app.add_option("--outputs", options.outputs,
                 "What to write, separated by commas: potential (V), field (V/m),\nforce (N, on the whole macroparticle), "
                 "energy (J, half of charge x potential).\nDefault: all.")
      ->type_name("LIST");
  app.add_option("--sources", options.sources, "Only these species act, separated by commas. Default: all.")->type_name("LIST");
  app.add_option("--targets", options.targets, "Only these species are evaluated and written. Default: all.")
      ->type_name("LIST");
  app.add_option("--permittivity", options.permittivity, "Relative permittivity of the medium. Default: 1 (vacuum).")
      ->type_name("EPS");
  app.add_flag("--static", options.as_static, "Sum charges that move fast (mean above 0.05 c) as if at rest.");
  app.add_option("--coincident", options.coincident,
                 "Charges at exactly the same place: error names them, skip leaves\nsuch pairs out. Default: error.")
      ->type_name("error|skip");
  app.add_option("--method", options.method, "Direct sum, tree, or the faster one. Default: auto.")
      ->type_name("auto|direct|tree");
  app.add_option("--samples", options.samples, "Charges at which the error is measured by exact sums. Default: 200.")
      ->type_name("M");
  app.add_flag("--best-effort", options.best_effort, "Write the best reachable result when the tolerance cannot be met.");
}

WantedRecords wanted_records(const SolveOptions& options) {
  WantedRecords wanted;
  if (!options.outputs.empty()) {
    wanted = {false, false, false, false};
    for (const std::string& name : split_list(options.outputs)) {
      if (name == "potential")
        wanted.potential = true;
      else if (name == "field")
        wanted.field = true;
      else if (name == "force")
        wanted.force = true;
      else if (name == "energy")
        wanted.energy = true;
      else
        throw UsageError(fmt::format("--outputs: there is no output '{}'", name),
                         "choose from potential, field, force, energy");
    }
    if (wanted.engine() == Output::none)
      throw UsageError("--outputs: the list is empty", "choose from potential, field, force, energy");
  }
  return wanted;
}

SpeciesRoles species_roles(const SolveOptions& options) {
  const SpeciesRoles roles{split_list(options.sources), split_list(options.targets)};
  if (!options.sources.empty() && roles.sources.empty()) throw UsageError("--sources: the list is empty");
  if (!options.targets.empty() && roles.targets.empty()) throw UsageError("--targets: the list is empty");
  return roles;
}

Options engine_options(const SolveOptions& options) {
  require_tolerance(options.tolerance);
  Options engine;
  engine.tolerance = options.tolerance;
  if (options.method == "direct")
    engine.method = Method::direct;
  else if (options.method == "tree")
    engine.method = Method::tree;
  else if (options.method != "auto")
    throw UsageError(fmt::format("--method: '{}' is none of auto, direct, tree", options.method));
  if (options.coincident == "skip")
    engine.coincident = Coincident::skip;
  else if (options.coincident != "error")
    throw UsageError(fmt::format("--coincident: '{}' is neither error nor skip", options.coincident));
  if (!(options.permittivity > 0) || !std::isfinite(options.permittivity))
    throw UsageError(fmt::format("--permittivity: {} is not a positive number", options.permittivity));
  engine.samples = sample_count(options.samples);
  engine.best_effort = options.best_effort;
  engine.threads = options.common.threads > 0 ? options.common.threads : usable_processors();
  return engine;
}

void require_tolerance(double tolerance) {
  if (!(tolerance >= 1e-13 && tolerance <= 1e-2))
    throw UsageError(fmt::format("--tolerance: {} is not between 1e-13 and 1e-2", tolerance));
}

std::size_t sample_count(long long samples) {
  if (samples < 1) throw UsageError(fmt::format("--samples: {} is not a number of charges from 1 up", samples));
  return std::size_t(samples);
}

}  // namespace farsum::command
