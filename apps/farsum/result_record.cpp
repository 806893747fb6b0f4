#include "apps/farsum/result_record.hpp"

#include <fmt/format.h>

#include <cmath>
#include <limits>

#include "apps/farsum/display.hpp"
#include "fmm/error.hpp"
#include "io/units.hpp"

namespace farsum::command {
namespace {

constexpr const char* kTolerance = "requestedTolerance";
constexpr const char* kPermittivity = "relativePermittivity";
constexpr const char* kCoincident = "coincidentCharges";
constexpr const char* kIteration = "inputIteration";
constexpr const char* kSpecies = "inputSpecies";
constexpr const char* kSources = "sources";
constexpr const char* kTargets = "targets";
constexpr const char* kLengthUnit = "lengthUnit";
constexpr const char* kChargeUnit = "chargeUnit";
constexpr const char* kParticleCharge = "particleCharge";
constexpr const char* kTimes = "recordedTimes";
constexpr const char* kAdvanceTo = "advancedTo";
constexpr const char* kEnergy = "totalEnergy";

/// Attributes hold no empty text.
void add_text(io::RunAttributes& run, const char* name, const std::string& text) {
  if (!text.empty()) run.push_back({name, text});
}

void add_reading(io::RunAttributes& run, const SolveOptions& options, const io::ParticleSet& set) {
  add_text(run, "inputFile", valid_utf8(options.input));
  add_text(run, kIteration, set.iteration);
  add_text(run, kSpecies, options.reading.species);
  add_text(run, kSources, options.sources);
  add_text(run, kTargets, options.targets);
  add_text(run, kLengthUnit, options.reading.length_unit);
  add_text(run, kChargeUnit, options.reading.charge_unit);
  if (options.reading.particle_charge) run.push_back({kParticleCharge, *options.reading.particle_charge});
  if (options.reading.as_snapshot) add_text(run, kTimes, "as snapshot");
  if (options.reading.advance_to) run.push_back({kAdvanceTo, *options.reading.advance_to});
}

void add_error(io::RunAttributes& run, const std::string& name, const OutputError& error) {
  if (!error.measured) return;
  run.push_back({name + "ErrorRms", error.rms});
  run.push_back({name + "ErrorRmsUpper95", error.rms_upper});
  run.push_back({name + "ErrorTypical", error.typical});
  run.push_back({name + "ErrorWorst", error.worst});
}

}  // namespace

io::RunAttributes result_record(const SolveOptions& options, const io::ParticleSet& set, const RowRoles& roles,
                                const Evaluation& evaluation, double coulomb_constant) {
  const Report& report = evaluation.report;
  io::RunAttributes run;
  add_text(run, "program", fmt::format("farsum {}", FARSUM_VERSION));
  add_reading(run, options, set);
  run.push_back({kTolerance, options.tolerance});
  add_error(run, "potential", report.error.potential);
  add_error(run, "field", report.error.field);
  run.push_back({"errorSamples", std::int64_t(report.error.samples)});
  run.push_back({"toleranceMet", std::int64_t(report.error.met)});
  run.push_back({"totalCharge", report.total_charge});
  if (roles.everything && report.energy.available) {
    run.push_back({kEnergy, report.energy.value * coulomb_constant});
    run.push_back({"totalEnergyErrorBound", report.energy.error_bound * coulomb_constant});
  }
  add_text(run, "constants", std::string(io::kConstantsName));
  run.push_back({"eps0", io::kVacuumPermittivity});
  run.push_back({kPermittivity, options.permittivity});
  add_text(run, kCoincident, options.coincident);
  run.push_back({"staticSum", std::int64_t(options.as_static)});
  add_text(run, "method", report.plan.method);
  add_text(run, "cpuTarget", report.plan.cpu_target);
  return run;
}

RecordedSettings recorded_settings(const io::RunAttributes& run, const std::string& file) {
  RecordedSettings settings;
  settings.tolerance = io::number_or(run, kTolerance, std::numeric_limits<double>::quiet_NaN());
  if (!(settings.tolerance > 0))
    throw Error(ErrorCode::item_missing, "the tolerance of the solve is not recorded", file, std::string("/run/") + kTolerance,
                "check a file that farsum solve wrote");
  settings.permittivity = io::number_or(run, kPermittivity, 1.0);
  if (!(settings.permittivity > 0) || !std::isfinite(settings.permittivity))
    throw Error(ErrorCode::item_bad_value, fmt::format("the relative permittivity {} is not positive", settings.permittivity),
                file, std::string("/run/") + kPermittivity, "solve again");
  settings.skip_coincident = io::text_or(run, kCoincident, "error") == "skip";
  settings.reading.iteration = io::text_or(run, kIteration, "");
  settings.reading.species = io::text_or(run, kSpecies, "");
  settings.reading.length_unit = io::text_or(run, kLengthUnit, "");
  settings.reading.charge_unit = io::text_or(run, kChargeUnit, "");
  if (io::find_value(run, kParticleCharge)) settings.reading.particle_charge = io::number_or(run, kParticleCharge, 0);
  settings.reading.as_snapshot = io::text_or(run, kTimes, "") == "as snapshot";
  if (io::find_value(run, kAdvanceTo)) settings.reading.advance_to = io::number_or(run, kAdvanceTo, 0);
  settings.roles = {split_list(io::text_or(run, kSources, "")), split_list(io::text_or(run, kTargets, ""))};
  settings.total_energy = io::number_or(run, kEnergy, std::numeric_limits<double>::quiet_NaN());
  return settings;
}

}  // namespace farsum::command
