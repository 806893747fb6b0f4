#include "fmm/solver.hpp"

#include "fmm/schedule/session.hpp"

namespace farsum {

struct Solver::Impl {
  explicit Impl(Options options) : session(std::move(options)) {}
  Session session;
};

Solver::Solver(Options options) : impl_(std::make_unique<Impl>(std::move(options))) {}
Solver::~Solver() = default;
Solver::Solver(Solver&&) noexcept = default;
Solver& Solver::operator=(Solver&&) noexcept = default;

void Solver::set_charges(PointsView positions, ChargesView charges) {
  impl_->session.set_charges(positions, charges);
}
void Solver::update_charges(ChargesView charges) {
  impl_->session.update_charges(charges);
}
void Solver::evaluate(Output outputs, ResultView result) {
  impl_->session.evaluate(outputs, result);
}
void Solver::evaluate_at(PointsView targets, Output outputs, ResultView result) {
  impl_->session.evaluate_at(targets, outputs, result);
}
const Report& Solver::report() const noexcept {
  return impl_->session.report();
}

ErrorMeasure measure_error(PointsView positions, ChargesView charges, Output outputs, ResultView result,
                           const Options& options) {
  Session session(options);
  session.set_charges(positions, charges);
  return session.measure(outputs, result);
}

}  // namespace farsum
