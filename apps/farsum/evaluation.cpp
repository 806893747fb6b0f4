#include "apps/farsum/evaluation.hpp"

#include <algorithm>

#include "fmm/solver.hpp"

namespace farsum::command {
namespace {

/// Rows of some species copied one after the other.
struct Gathered {
  std::vector<double> x, y, z, charge;
  PointsView points() const { return {x.data(), y.data(), z.data(), x.size(), 1}; }
  ChargesView charges() const { return {charge.data(), charge.size(), 1}; }
};

void append(std::vector<double>& to, const std::vector<double>& from, const io::SpeciesRange& range) {
  to.insert(to.end(), from.begin() + std::ptrdiff_t(range.begin), from.begin() + std::ptrdiff_t(range.end));
}

Gathered gather(const io::ParticleSet& set, const std::vector<io::SpeciesRange>& ranges) {
  Gathered rows;
  for (std::vector<double>* column : {&rows.x, &rows.y, &rows.z, &rows.charge}) column->reserve(count_rows(ranges));
  for (const io::SpeciesRange& range : ranges) {
    append(rows.x, set.x, range);
    append(rows.y, set.y, range);
    append(rows.z, set.z, range);
    append(rows.charge, set.charge, range);
  }
  return rows;
}

void resize_columns(Evaluation& evaluation, std::size_t count, Output outputs) {
  if (has(outputs, Output::potential)) evaluation.potential.resize(count);
  if (!has(outputs, Output::field)) return;
  for (std::vector<double>* column : {&evaluation.field_x, &evaluation.field_y, &evaluation.field_z}) column->resize(count);
}

double* data_or_null(std::vector<double>& column) {
  return column.empty() ? nullptr : column.data();
}

ResultView view(Evaluation& evaluation) {
  return {data_or_null(evaluation.potential), data_or_null(evaluation.field_x), data_or_null(evaluation.field_y),
          data_or_null(evaluation.field_z), 1};
}

/// Copies the rows of `wanted` out of results that run over `computed`, both in the order of the set.
void scatter(Evaluation& rows, const std::vector<io::SpeciesRange>& computed, const std::vector<io::SpeciesRange>& wanted,
             Evaluation& to) {
  const auto copy = [&](const std::vector<double>& source, std::vector<double>& target) {
    std::size_t at = 0;
    for (const io::SpeciesRange& range : computed) {
      const bool keep = std::any_of(wanted.begin(), wanted.end(),
                                    [&](const io::SpeciesRange& w) { return w.begin == range.begin && w.end == range.end; });
      if (keep && !source.empty())
        std::copy_n(source.begin() + std::ptrdiff_t(at), range.count(), target.begin() + std::ptrdiff_t(range.begin));
      at += range.count();
    }
  };
  copy(rows.potential, to.potential);
  copy(rows.field_x, to.field_x);
  copy(rows.field_y, to.field_y);
  copy(rows.field_z, to.field_z);
}

OutputError larger(const OutputError& a, const OutputError& b) {
  return {a.measured || b.measured, std::max(a.rms, b.rms), std::max(a.rms_upper, b.rms_upper), std::max(a.typical, b.typical),
          std::max(a.worst, b.worst)};
}

/// The second pass of one job: errors as the larger, times as the sum.
Report merged(const Report& first, const Report& second) {
  Report both = first;
  both.targets += second.targets;
  both.error.potential = larger(first.error.potential, second.error.potential);
  both.error.field = larger(first.error.field, second.error.field);
  both.error.samples += second.error.samples;
  both.error.met = first.error.met && second.error.met;
  const auto add = [&](double PhaseSeconds::*phase) { both.seconds.*phase += second.seconds.*phase; };
  for (const auto phase : {&PhaseSeconds::tree, &PhaseSeconds::lists, &PhaseSeconds::far, &PhaseSeconds::near,
                           &PhaseSeconds::solve, &PhaseSeconds::verify})
    add(phase);
  both.memory.predicted_bytes = std::max(first.memory.predicted_bytes, second.memory.predicted_bytes);
  both.memory.peak_bytes = std::max(first.memory.peak_bytes, second.memory.peak_bytes);
  both.notes.targets_on_charges += second.notes.targets_on_charges;
  both.warnings.insert(both.warnings.end(), second.warnings.begin(), second.warnings.end());
  return both;
}

/// Keeps the report of the solver's latest call, however that ended.
class ReportKeeper {
 public:
  ReportKeeper(const Solver& solver, Report& report) : solver_(solver), report_(report) {}
  ~ReportKeeper() { report_ = solver_.report(); }
  ReportKeeper(const ReportKeeper&) = delete;
  ReportKeeper& operator=(const ReportKeeper&) = delete;

 private:
  const Solver& solver_;
  Report& report_;
};

void evaluate_everything(const io::ParticleSet& set, Output outputs, Solver& solver, Evaluation& evaluation) {
  const ReportKeeper keeper(solver, evaluation.report);
  solver.set_charges(set.points(), set.charges());
  solver.evaluate(outputs, view(evaluation));
}

/// Evaluates the acting rows and keeps those that are wanted.
void evaluate_acting(const Gathered& sources, const RowRoles& roles, Output outputs, Solver& solver, Evaluation& evaluation) {
  Evaluation rows;
  resize_columns(rows, sources.x.size(), outputs);
  const ReportKeeper keeper(solver, evaluation.report);
  solver.evaluate(outputs, view(rows));
  scatter(rows, roles.acting, roles.both, evaluation);
}

void evaluate_others(const io::ParticleSet& set, const RowRoles& roles, Output outputs, Solver& solver,
                     Evaluation& evaluation) {
  const Gathered targets = gather(set, roles.only_evaluated);
  Evaluation rows;
  resize_columns(rows, targets.x.size(), outputs);
  Report report;
  {
    const ReportKeeper keeper(solver, report);
    solver.evaluate_at(targets.points(), outputs, view(rows));
  }
  scatter(rows, roles.only_evaluated, roles.only_evaluated, evaluation);
  evaluation.report = roles.both.empty() ? report : merged(evaluation.report, report);
}

}  // namespace

void evaluate(const io::ParticleSet& set, const RowRoles& roles, Output outputs, const Options& options,
              Evaluation& evaluation) {
  evaluation.acting = count_rows(roles.acting);
  evaluation.evaluated = count_rows(roles.both) + count_rows(roles.only_evaluated);
  resize_columns(evaluation, set.size(), outputs);
  Options each = options;
  each.verification = Verification::every;
  Solver solver(each);
  if (roles.everything) return evaluate_everything(set, outputs, solver, evaluation);
  const Gathered sources = gather(set, roles.acting);
  solver.set_charges(sources.points(), sources.charges());
  if (!roles.both.empty()) evaluate_acting(sources, roles, outputs, solver, evaluation);
  if (!roles.only_evaluated.empty()) evaluate_others(set, roles, outputs, solver, evaluation);
}

std::uint64_t result_bytes(std::uint64_t rows, Output outputs) {
  return rows * 8 * ((has(outputs, Output::potential) ? 1u : 0u) + (has(outputs, Output::field) ? 3u : 0u));
}

}  // namespace farsum::command
