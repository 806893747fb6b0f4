#include "apps/farsum/solve_summary.hpp"

#include <fmt/format.h>

#include "apps/farsum/display.hpp"
#include "apps/farsum/resources.hpp"

namespace farsum::command {
namespace {

constexpr double kLargeFieldRatio = 100;  // largest over median field from which close pairs are worth a word

std::string error_details(const char* name, const OutputError& error) {
  return fmt::format("{:<18}rms {} (95 % sure below {}), typical {}, worst {}", name, error_number(error.rms),
                     error_number(error.rms_upper), error_number(error.typical), error_number(error.worst));
}

std::string first_line(const RowRoles& roles, const Evaluation& evaluation, double tolerance) {
  const Report& report = evaluation.report;
  const double seconds = report.seconds.solve;
  const std::string what = roles.everything ? fmt::format("{} solved", counted(evaluation.evaluated, "charge"))
                                            : fmt::format("{} solved with {}", counted(evaluation.evaluated, "target"),
                                                          counted(evaluation.acting, "source"));
  return fmt::format("{} in {}; {}", what, duration(seconds), error_sentence(report.error, tolerance));
}

std::string seconds_line(const PhaseSeconds& seconds, double read, double write) {
  std::string text = fmt::format("read {}", duration(read));
  const auto add = [&](const char* name, double value) {
    if (value > 0) text += fmt::format(", {} {}", name, duration(value));
  };
  add("tree", seconds.tree);
  add("lists", seconds.lists);
  add("far", seconds.far);
  add("near", seconds.near);
  add("check", seconds.verify);
  add("write", write);
  return text;
}

std::string method_line(const Report& report) {
  const Plan& plan = report.plan;
  std::string text = plan.method;
  if (plan.method == "tree")
    text += fmt::format(" of order {}, {} levels, {} charges a leaf at most, far field in {} precision", plan.order, plan.depth,
                        plan.leaf_capacity, plan.precision);
  text += fmt::format(", {}, {}", plan.cpu_target, counted(std::uint64_t(report.threads), "thread"));
  if (plan.attempts > 1) text += fmt::format(", {} attempts", plan.attempts);
  return text;
}

double seconds_of(Run& run, const char* phase) {
  const auto& value = run.report().json()["seconds"][phase];
  return value.is_number() ? value.get<double>() : 0.0;
}

}  // namespace

std::string error_sentence(const ErrorMeasure& error, double tolerance) {
  if (error.samples == 0) return "no other charge acts: the results are exactly 0";
  const bool field = error.field.measured;
  return fmt::format("{} error {} (asked {}), measured at {}", field ? "field" : "potential",
                     error_number(field ? error.field.rms : error.potential.rms), error_number(tolerance),
                     counted(error.samples, "charge"));
}

void add_data_cautions(Run& run, const io::ParticleSet& set, const Evaluation& evaluation) {
  const FieldNotes& notes = evaluation.report.notes;
  for (const std::string& note : set.notes) run.caution(note);
  if (set.lost() > 0) run.caution(fmt::format("{} of the file left out", counted(set.lost(), "lost particle")));
  if (notes.field_median > 0 && notes.field_max > kLargeFieldRatio * notes.field_median)
    run.caution(fmt::format("largest field is {:.3g} x the median; consider a radius", notes.field_max / notes.field_median));
  if (notes.skipped_coincident > 0)
    run.caution(fmt::format("{} at the place of an earlier one: such pairs were left out",
                            counted(notes.skipped_coincident, "charge")));
  if (notes.targets_on_charges > 0)
    run.caution(
        fmt::format("{} exactly on a charge: given the value of all others", counted(notes.targets_on_charges, "target")));
  for (const std::string& warning : evaluation.report.warnings) run.caution(warning);
}

void say_solve_summary(Run& run, const SolveOptions& options, const io::ParticleSet& set, const RowRoles& roles,
                       const Evaluation& evaluation, double coulomb_constant) {
  const Report& report = evaluation.report;
  run.say(first_line(roles, evaluation, options.tolerance));
  if (set.size() > 0) {
    run.say(fmt::format("{:<18}{}", "total charge", with_unit(report.total_charge, "C", 6)));
    run.say(fmt::format("{:<18}{}", "extent", with_unit(report.extent, "m")));
  }
  if (roles.everything && report.energy.available)
    run.say(fmt::format("{:<18}{:.10g} J, error at most {} J", "energy", report.energy.value * coulomb_constant,
                        error_number(report.energy.error_bound * coulomb_constant)));
  if (report.error.potential.measured && report.error.samples > 0)
    run.say(error_details("potential error", report.error.potential));
  if (report.error.field.measured && report.error.samples > 0) run.say(error_details("field error", report.error.field));
  if (roles.everything && report.checks.available && report.error.samples > 0)
    run.say(fmt::format("{:<18}total force {}, total torque {}, virial {} (0 in exact arithmetic)", "checks",
                        error_number(report.checks.total_force), error_number(report.checks.total_torque),
                        error_number(report.checks.virial)));
  run.say(fmt::format("{:<18}{}", "time", seconds_line(report.seconds, seconds_of(run, "read"), seconds_of(run, "write"))));
  if (report.seconds.solve > 0)
    run.say(fmt::format("{:<18}{} charges per second", "rate",
                        short_number(double(evaluation.evaluated) / report.seconds.solve, 3)));
  run.say(fmt::format("{:<18}{} at peak", "memory", byte_size(peak_resident_bytes())));
  run.say(fmt::format("{:<18}{}", "method", method_line(report)));
  run.say(fmt::format("{:<18}{}", "written", printable(options.output)));
  run.say_cautions();
}

}  // namespace farsum::command
