#include "tests/reference/run_solver.hpp"

namespace farsum::reference {
namespace {

template <typename Call>
Outcome run(const Charges& charges, const Options& options, std::size_t targets, Call&& call) {
  Outcome outcome{Result(targets), {}, {}, {}};
  try {
    Solver solver(options);
    try {
      solver.set_charges(charges.points(), charges.values());
      call(solver, outcome.result.view());
    } catch (const Error& error) {
      outcome.code = error.code();
      outcome.message = error.what();
    }
    outcome.report = solver.report();
  } catch (const Error& error) {
    outcome.code = error.code();
    outcome.message = error.what();
  }
  return outcome;
}

}  // namespace

Outcome solve(const Charges& charges, const Options& options, Output outputs) {
  return run(charges, options, charges.size(), [&](Solver& solver, ResultView view) { solver.evaluate(outputs, view); });
}

Outcome solve_at(const Charges& sources, const Charges& targets, const Options& options, Output outputs) {
  return run(sources, options, targets.size(),
             [&](Solver& solver, ResultView view) { solver.evaluate_at(targets.points(), outputs, view); });
}

}  // namespace farsum::reference
