// farsum solve: from a particle file to a result file.
#include <fmt/format.h>

#include <chrono>
#include <limits>
#include <memory>

#include "apps/farsum/display.hpp"
#include "apps/farsum/evaluation.hpp"
#include "apps/farsum/exit_status.hpp"
#include "apps/farsum/motion.hpp"
#include "apps/farsum/result_record.hpp"
#include "apps/farsum/signals.hpp"
#include "apps/farsum/solve_options.hpp"
#include "apps/farsum/solve_summary.hpp"
#include "apps/farsum/subcommands.hpp"
#include "io/particle_reader.hpp"
#include "io/result_writer.hpp"
#include "io/units.hpp"

namespace farsum::command {
namespace {

constexpr std::uint64_t kProgramBytes = 48ULL << 20;  // code, HDF5, slabs of the reader and the writer

/// Seconds since the object was made.
class Clock {
 public:
  double seconds() const { return std::chrono::duration<double>(std::chrono::steady_clock::now() - start_).count(); }

 private:
  std::chrono::steady_clock::time_point start_ = std::chrono::steady_clock::now();
};

/// One solve, step by step.
class SolveJob {
 public:
  SolveJob(Run& run, const SolveOptions& options)
      : run_(run),
        options_(options),
        wanted_(wanted_records(options)),
        roles_(species_roles(options)),
        engine_(engine_options(options)),
        read_(read_options(options.reading)),
        coulomb_constant_(io::kCoulombConstant / options.permittivity) {
    if (roles_.limited() && options.outputs.empty()) wanted_.energy = false;
    if (roles_.limited() && wanted_.energy)
      throw UsageError("--outputs: the energy of a charge is half of charge x potential only when all charges act on all",
                       "leave out energy, or leave out --sources and --targets");
  }

  void start_report();
  void check_before_reading();
  void read();
  void solve();
  void write();
  void finish();

 private:
  Run& run_;
  const SolveOptions& options_;
  WantedRecords wanted_;
  SpeciesRoles roles_;
  Options engine_;
  io::ReadOptions read_;
  double coulomb_constant_;
  io::FileSummary summary_;
  io::ParticleSet set_;
  RowRoles rows_;
  Evaluation evaluation_;
  Clock reading_;

  void fill_report();
  void check_motion();
  void limit_memory();
};

void SolveJob::start_report() {
  RunReport& report = run_.report();
  report.set_input(options_.input, options_.reading.iteration, read_.species);
  auto& json = report.json();
  json["output"]["file"] = valid_utf8(options_.output);
  json["tolerance"] = options_.tolerance;
  json["permittivity"] = options_.permittivity;
  json["threads"] = engine_.threads;
  json["constants"] = {{"source", io::kConstantsName}, {"vacuum_permittivity", io::kVacuumPermittivity}, {"unit", "F/m"}};
}

void SolveJob::check_before_reading() {
  io::check_output_target(options_.output, options_.common.overwrite, 0, {options_.input});
  summary_ = io::inspect(options_.input, read_, io::Depth::counts);
  if (read_.non_snapshot == io::NonSnapshot::refuse) require_snapshot(summary_);
  io::check_output_target(options_.output, options_.common.overwrite, io::predict_result_bytes(summary_.live()),
                          {options_.input});
  limit_memory();
  check_motion();
}

/// The reader and the engine get what is left of the ceiling after what the command itself holds.
void SolveJob::limit_memory() {
  const std::uint64_t particles = summary_.memory_bytes(), results = result_bytes(summary_.live(), wanted_.engine());
  run_.require_memory(kProgramBytes + particles + results,
                      fmt::format("{} and their results", counted(summary_.live(), "charge")));
  const std::uint64_t copies = roles_.limited() ? particles + results : 0;
  const std::uint64_t held = kProgramBytes + particles + results + copies;
  read_.memory_limit = run_.memory_ceiling();
  engine_.memory_limit = run_.memory_ceiling() > held ? run_.memory_ceiling() - held : 1;
}

void SolveJob::check_motion() {
  bool has_momentum = false;
  for (const io::SpeciesSummary& species : summary_.species) has_momentum = has_momentum || species.has_momentum;
  if (!has_momentum) return;
  run_.progress().show("looking at the motion", -1);
  summary_ = io::inspect(options_.input, read_, io::Depth::contents);
  require_slow_charges(summary_, options_.as_static);
  const std::string caution = motion_caution(summary_);
  if (!caution.empty()) run_.caution(caution);
}

void SolveJob::read() {
  read_.hooks.on_progress = [this](double fraction) { run_.progress().show("reading", fraction); };
  set_ = io::read_particles(options_.input, read_);
  run_.report().set_number("seconds", "read", reading_.seconds());
  std::vector<std::string> names;
  for (const io::SpeciesRange& species : set_.species) names.push_back(species.name);
  run_.report().set_input(options_.input, set_.iteration, names);
  rows_ = assign_roles(set_, roles_);
  run_.report().json()["count"] = count_rows(rows_.both) + count_rows(rows_.only_evaluated);
}

void SolveJob::solve() {
  engine_.on_progress = [this](Phase phase, double fraction) {
    constexpr const char* kStages[] = {"building the tree", "finding neighbours", "far field", "near field",
                                       "measuring the error"};
    run_.progress().show(kStages[std::size_t(phase)], fraction);
  };
  try {
    evaluate(set_, rows_, wanted_.engine(), engine_, evaluation_);
  } catch (...) {
    fill_report();
    throw;
  }
  fill_report();
}

void SolveJob::fill_report() {
  Report report = evaluation_.report;
  if (!rows_.everything) report.checks.available = report.energy.available = false;
  run_.report().set_engine(report);
  if (report.threads == 0) run_.report().json()["threads"] = engine_.threads;
  run_.report().set_quantity("total_charge", report.total_charge, "C");
  run_.report().set_quantity("extent", report.extent, "m");
  if (!report.energy.available) return;
  run_.report().set_quantity("energy", report.energy.value * coulomb_constant_, "J");
  run_.report().set_number("energy", "error_bound", report.energy.error_bound * coulomb_constant_);
}

void SolveJob::write() {
  const Clock writing;
  // A set without particles has its records too: empty ones.
  static constexpr double kNothing = 0;
  const auto data = [this](const std::vector<double>& column, Output output) {
    return !has(wanted_.engine(), output) ? nullptr : column.empty() ? &kNothing : column.data();
  };
  const io::ResultColumns columns{data(evaluation_.potential, Output::potential),
                                  data(evaluation_.field_x, Output::field),
                                  data(evaluation_.field_y, Output::field),
                                  data(evaluation_.field_z, Output::field),
                                  coulomb_constant_,
                                  wanted_.potential,
                                  wanted_.field,
                                  wanted_.force,
                                  wanted_.energy};
  io::WriteOptions write;
  write.overwrite = options_.common.overwrite;
  write.inputs = {options_.input};
  write.on_temporary = temporary_hook();
  write.hooks.on_progress = [this](double fraction) { run_.progress().show("writing", fraction); };
  write.software_version = FARSUM_VERSION;
  io::write_result(options_.output, set_, columns, result_record(options_, set_, rows_, evaluation_, coulomb_constant_), write,
                   rows_.everything ? std::vector<std::string>() : rows_.evaluated_names);
  run_.report().set_number("seconds", "write", writing.seconds());
}

void SolveJob::finish() {
  add_data_cautions(run_, set_, evaluation_);
  say_solve_summary(run_, options_, set_, rows_, evaluation_, coulomb_constant_);
}

void solve(Run& run, const SolveOptions& options) {
  run.report().set_input(options.input, options.reading.iteration, {});
  SolveJob job(run, options);
  job.start_report();
  job.check_before_reading();
  job.read();
  job.solve();
  job.write();
  job.finish();
}

}  // namespace

void add_solve(CLI::App& app, int& status) {
  auto options = std::make_shared<SolveOptions>();
  CLI::App& sub = *app.add_subcommand("solve", "Potential, field, force and energy at every charge of a file.");
  add_solve_options(sub, *options);
  add_input_options(sub, options->reading);
  add_common_options(sub, options->common);
  sub.footer(
      "The result file holds the live particles in input order with their id, what the input says of them, and\n"
      "potential (V, zero at infinity), electricField (V/m), force (N) and potentialEnergy (J). The measured error,\n"
      "the settings and the constants (CODATA 2022) are in its group /run.\n"
      "The tolerance is met when for potential and field the rms error is below it and the error that a typical\n"
      "charge sees is below three times it; both are measured by exact sums.\n\n"
      "Cautions: high voltage, ionising radiation and vacuum hazards are not modelled; results of an idealised\n"
      "model do not replace local safety codes and licensed practice.\n\n" +
      help_footer("  farsum solve bunch.h5 -o result.h5\n"
                  "  farsum solve bunch.h5 -o result.h5 --tolerance 1e-9 --outputs field --json report.json\n"
                  "  farsum solve bunch.h5 -o halo.h5 --sources proton_core --targets proton_halo\n"
                  "  farsum solve ions.txt -o result.h5 --length-unit um --charge-unit e --permittivity 2.1\n"));
  sub.callback([options, &status] { status = run_guarded("solve", options->common, [&](Run& run) { solve(run, *options); }); });
}

}  // namespace farsum::command
