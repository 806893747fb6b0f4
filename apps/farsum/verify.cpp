// farsum verify: an independent check of a result file against exact sums over its input.
#include <fmt/format.h>

#include <cmath>
#include <memory>
#include <optional>

#include "apps/farsum/display.hpp"
#include "apps/farsum/exit_status.hpp"
#include "apps/farsum/resources.hpp"
#include "apps/farsum/result_check.hpp"
#include "apps/farsum/result_record.hpp"
#include "apps/farsum/solve_options.hpp"
#include "apps/farsum/solve_summary.hpp"
#include "apps/farsum/subcommands.hpp"
#include "io/particle_reader.hpp"
#include "io/units.hpp"

namespace farsum::command {
namespace {

constexpr std::uint64_t kProgramBytes = 48ULL << 20;
constexpr std::uint64_t kBytesForMatching = 24;  // a row: partner, and the ids where orders differ
constexpr double kEnergyRounding = 1e-10;        // of half the sum of |q phi|: far above rounding, far below a changed value

struct VerifyOptions {
  CommonOptions common;
  InputOptions reading;
  std::string input, result;
  std::optional<double> tolerance;
  long long samples = 200;
};

/// What the user gives wins over what the result remembers.
InputOptions combined(const InputOptions& given, const InputOptions& recorded) {
  InputOptions reading = recorded;
  if (!given.iteration.empty()) reading.iteration = given.iteration;
  if (!given.species.empty()) reading.species = given.species;
  if (!given.length_unit.empty()) reading.length_unit = given.length_unit;
  if (!given.charge_unit.empty()) reading.charge_unit = given.charge_unit;
  if (given.particle_charge) reading.particle_charge = given.particle_charge;
  if (given.as_snapshot || given.advance_to) {
    reading.as_snapshot = given.as_snapshot;
    reading.advance_to = given.advance_to;
  }
  return reading;
}

void require_memory_for(Run& run, const std::string& file) {
  const io::FileSummary summary = io::inspect(file, {}, io::Depth::counts);
  const std::uint64_t rows = summary.live();
  run.require_memory(kProgramBytes + 2 * summary.memory_bytes() + result_bytes(rows, Output::potential | Output::field) +
                         kBytesForMatching * rows,
                     fmt::format("{} and their results", counted(rows, "charge")));
}

Options engine_options(const VerifyOptions& options, const RecordedSettings& settings, std::uint64_t rows,
                       std::uint64_t ceiling) {
  Options engine;
  engine.tolerance = settings.tolerance;
  engine.samples = sample_count(options.samples);
  engine.coincident = settings.skip_coincident ? Coincident::skip : Coincident::error;
  engine.best_effort = true;  // the command itself judges
  engine.threads = options.common.threads > 0 ? options.common.threads : usable_processors();
  const std::uint64_t held = kProgramBytes + rows * (72 + kBytesForMatching);
  engine.memory_limit = ceiling > held ? ceiling - held : 1;
  return engine;
}

void fill_report(Run& run, const VerifyOptions& options, const io::ParticleSet& set, std::size_t count,
                 const RecordedSettings& settings, const Options& engine) {
  std::vector<std::string> names;
  for (const io::SpeciesRange& species : set.species) names.push_back(species.name);
  run.report().set_input(options.input, set.iteration, names);
  auto& json = run.report().json();
  json["output"]["file"] = valid_utf8(options.result);
  json["count"] = count;
  json["tolerance"] = settings.tolerance;
  json["permittivity"] = settings.permittivity;
  json["threads"] = engine.threads;
  json["constants"] = {{"source", io::kConstantsName}, {"vacuum_permittivity", io::kVacuumPermittivity}, {"unit", "F/m"}};
}

void say_errors(Run& run, const char* name, const OutputError& error) {
  if (error.measured)
    run.say(fmt::format("{:<18}rms {} (95 % sure below {}), typical {}, worst {}", name, error_number(error.rms),
                        error_number(error.rms_upper), error_number(error.typical), error_number(error.worst)));
}

/// Potentials that do not add up to the energy that the solve recorded were changed since, wherever in the file.
void check_energy(Run& run, const CheckedResult& checked, const RecordedSettings& settings) {
  if (checked.result.potential.empty() || !std::isfinite(settings.total_energy)) return;
  const EnergySum sum = energy_sum(checked);
  run.report().set_quantity("energy", sum.value, "J");
  run.say(fmt::format("{:<18}{:.10g} J, as the solve recorded {:.10g} J", "energy", sum.value, settings.total_energy));
  if (std::abs(sum.value - settings.total_energy) > kEnergyRounding * sum.scale)
    throw Error(ErrorCode::accuracy_not_reached,
                fmt::format("the potentials add up to an energy of {:.10g} J, but the solve recorded {:.10g} J", sum.value,
                            settings.total_energy),
                checked.result.particles.file, "potential", "values were changed after the solve; solve again");
}

/// Throws when the measured errors miss the tolerance. Written so that a NaN counts as a miss.
void require_met(const ErrorMeasure& error, const RecordedSettings& settings, const std::string& file) {
  if (error.samples == 0 || error.met) return;
  const auto words = [](const char* name, const OutputError& e) {
    return e.measured ? fmt::format("{} rms {}, typical {}", name, error_number(e.rms), error_number(e.typical))
                      : std::string();
  };
  const std::string potential = words("potential", error.potential), field = words("field", error.field);
  throw Error(ErrorCode::accuracy_not_reached,
              fmt::format("the measured error ({}{}{}) exceeds the tolerance {}", potential,
                          potential.empty() || field.empty() ? "" : "; ", field, error_number(settings.tolerance)),
              file, {}, "do not use this result; solve again");
}

void verify(Run& run, const VerifyOptions& options) {
  run.report().set_input(options.input, options.reading.iteration, {});
  run.report().json()["output"]["file"] = valid_utf8(options.result);
  sample_count(options.samples);
  if (options.tolerance) require_tolerance(*options.tolerance);
  require_memory_for(run, options.result);
  run.progress().show("reading", -1);
  io::ResultTable table = io::read_result(options.result);
  RecordedSettings settings = recorded_settings(table.run, options.result);
  if (options.tolerance) settings.tolerance = *options.tolerance;
  const io::ParticleSet set = io::read_particles(options.input, read_options(combined(options.reading, settings.reading)));
  const RowRoles roles = assign_roles(set, settings.roles);
  const Options engine = engine_options(options, settings, set.size(), run.memory_ceiling());
  const std::size_t count = table.size();
  fill_report(run, options, set, count, settings, engine);
  require_finite_results(table);

  run.progress().show("exact sums", -1);
  std::vector<std::size_t> partners = io::match_rows(set, table);
  CheckedResult checked{set, table, std::move(partners), io::kCoulombConstant / settings.permittivity};
  const ErrorMeasure error = roles.everything ? check_all_charges(checked, engine) : check_limited(checked, roles, engine);
  run.report().set_errors(error);
  run.say(fmt::format("{} {}; {}", counted(count, "result"), error.met || error.samples == 0 ? "hold" : "do NOT hold",
                      error_sentence(error, settings.tolerance)));
  say_errors(run, "potential error", error.potential);
  say_errors(run, "field error", error.field);
  require_met(error, settings, options.result);
  if (roles.everything) check_energy(run, checked, settings);
}

}  // namespace

void add_verify(CLI::App& app, int& status) {
  auto options = std::make_shared<VerifyOptions>();
  CLI::App& sub = *app.add_subcommand("verify", "Check a result file against exact sums over its input.");
  sub.add_option("IN", options->input, "The particle file that was solved.")->required()->type_name("");
  sub.add_option("RESULT", options->result, "The file that solve wrote.")->required()->type_name("");
  sub.add_option("--tolerance", options->tolerance,
                 "Largest error to accept. Default: the tolerance that the result was solved for.")
      ->type_name("T");
  sub.add_option("--samples", options->samples, "Charges at which exact sums are formed. Default: 200.")->type_name("M");
  add_input_options(sub, options->reading);
  add_common_options(sub, options->common);
  sub.footer(
      "Rows are matched by species and id. How the input was read (iteration, species, units, times) and which\n"
      "species act is taken from the result; options given here win. Also checked over all rows: every value is\n"
      "finite, and the potentials add up to the energy that the solve recorded.\n\n" +
      help_footer("  farsum verify bunch.h5 result.h5\n  farsum verify bunch.h5 result.h5 --samples 2000 --json check.json\n"));
  sub.callback(
      [options, &status] { status = run_guarded("verify", options->common, [&](Run& run) { verify(run, *options); }); });
}

}  // namespace farsum::command
