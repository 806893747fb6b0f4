#pragma once
// The engine's front door: potentials and fields of point charges in open space to a tolerance that is measured.
//   phi_i = sum_{j != i} q_j / |x_i - x_j|,   E_i = -grad phi_i.
// No physical constant enters here; multiply by 1/(4 pi eps0) in your units (io/units.hpp has them).
#include <memory>

#include "fmm/options.hpp"
#include "fmm/points.hpp"
#include "fmm/report.hpp"

namespace farsum {

/// One set of charges and everything prepared for it. Not for use by two threads at a time; any number of solvers may work side
/// by side.
class Solver {
 public:
  /// Throws Error(invalid_argument) for an option out of range.
  explicit Solver(Options options = {});
  ~Solver();
  Solver(Solver&&) noexcept;
  Solver& operator=(Solver&&) noexcept;

  /// Sets places and values of the charges; the arrays are viewed, not copied, and must stay alive and unchanged until the next
  /// set_charges or the solver's end. Zero charges are legal.
  /// Throws invalid_argument (sizes differ, null pointer) and not_finite (names the first bad index).
  void set_charges(PointsView positions, ChargesView charges);

  /// New values at the same places: tree and lists stay. The array is viewed as in set_charges.
  void update_charges(ChargesView charges);

  /// Outputs at the charges themselves; a charge does not act on itself. Results are in the caller's order.
  /// Error: Options::tolerance in the norms of fmm/report.hpp. Throws coincident_charges, range_exceeded,
  /// tolerance_unreachable, accuracy_not_reached, memory_refused, cancelled; the result arrays then hold unspecified finite or
  /// partial values.
  void evaluate(Output outputs, ResultView result);

  /// Outputs at other places; every charge acts. Throws also target_on_charge, unless Options::coincident is skip:
  /// such a target then gets the value of all other charges.
  void evaluate_at(PointsView targets, Output outputs, ResultView result);

  /// Facts about the latest evaluation (also filled as far as it came when that ended with an error).
  const Report& report() const noexcept;

 private:
  struct Impl;
  std::unique_ptr<Impl> impl_;
};

/// Measures any result against exact sums, independently of how it was made: `result` holds outputs at the charges.
/// Same choice of targets and same norms as the solver's own measurement; `met` compares with options.tolerance.
/// Cost: samples x charges pairs. Throws like Solver::evaluate.
ErrorMeasure measure_error(PointsView positions, ChargesView charges, Output outputs, ResultView result,
                           const Options& options);

}  // namespace farsum
