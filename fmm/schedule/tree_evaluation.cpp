#include "fmm/schedule/tree_evaluation.hpp"

#include <algorithm>
#include <cmath>

#include "fmm/schedule/memory_plan.hpp"
#include "fmm/schedule/order_bound.hpp"
#include "fmm/schedule/stopwatch.hpp"
#include "fmm/schedule/tree_work.hpp"

namespace farsum {
namespace {

/// Pairs that projecting or evaluating one charge costs, per coefficient.
constexpr double kPairsPerTerm = 0.4;
/// Tolerances below this count the six offsets (2, 0, 0) as near (domain/box_offset.hpp).
constexpr double kWideBelow = 1e-7;

}  // namespace

int typical_order(double tolerance) noexcept {
  return int(4.5 - 2 * std::log10(tolerance));
}

std::uint32_t default_leaf_capacity(double tolerance) noexcept {
  const double digits = -std::log10(tolerance);
  return std::uint32_t(40 + 10 * digits);
}

bool single_precision_suffices(double tolerance) noexcept {
  return tolerance >= 5e-7;
}

double direct_break_even(double tolerance) noexcept {
  return 2000 + 600 * std::max(0.0, -std::log10(tolerance) - 3);
}

template <class Real>
struct TreeEvaluator::Tables {
  Tables(int order, Separation separation, Executor& executor) : translations(order, executor, separation), gradients(order) {}
  TranslationTables<Real> translations;
  GradientRows<Real> gradients;
};

TreeEvaluator::TreeEvaluator() = default;
TreeEvaluator::~TreeEvaluator() = default;

template <class Real>
TreeEvaluator::Tables<Real>& TreeEvaluator::tables(int order, Separation separation, Executor& executor) {
  auto& kept = [this]() -> auto& {
    if constexpr (sizeof(Real) == sizeof(float))
      return single_;
    else
      return double_;
  }
  ();
  if (!kept || kept->translations.order() != order || kept->translations.separation().near_squared != separation.near_squared)
    kept = std::make_unique<Tables<Real>>(order, separation, executor);
  return *kept;
}

void TreeEvaluator::evaluate(const EvaluationJob& job, double charge_rms, double tolerance, Report& report) {
  TreePlan plan;
  plan.single_precision = single_precision_suffices(tolerance);
  plan.rule.terms = kPairsPerTerm * double(term_count(typical_order(tolerance)));
  plan.rule.separation.near_squared = tolerance < kWideBelow ? 4 : 3;
  BoxAccuracy accuracy;
  std::unique_ptr<NearLists> near;
  {
    const Stopwatch watch(report.seconds.lists);
    job.checkpoint(Phase::lists, 0);
    near = std::make_unique<NearLists>(job.sources, job.targets, plan.rule, job.executor);
    accuracy = box_accuracy(job, *near, plan.rule, survey(job, charge_rms), tolerance);
    const OrderSurvey wanted = order_bound(job, *near, plan.rule, accuracy, orders_);
    plan.order = wanted.order;
    report.memory.predicted_bytes = predicted_bytes(job.sources, job.targets, plan.order, plan.single_precision);
    refuse_above(report.memory.predicted_bytes, job.options.memory_limit);
  }
  const LedgerShare lists_share(job.ledger, near->bytes() + accuracy.bytes());
  const auto passes = [&](auto real) {
    using Real = decltype(real);
    std::unique_ptr<TreeWork<Real>> work;
    {
      const Stopwatch watch(report.seconds.far);
      const Tables<Real>& kept = tables<Real>(plan.order, plan.rule.separation, job.executor);
      work = std::make_unique<TreeWork<Real>>(job, plan, *near, accuracy, orders_, kept.translations, kept.gradients);
      upward_pass(*work);
      far_pass(*work);
    }
    const Stopwatch watch(report.seconds.near);
    leaf_pass(*work);
  };
  if (plan.single_precision)
    passes(float{});
  else
    passes(double{});
  report.plan.method = "tree";
  report.plan.order = plan.order;
  report.plan.precision = plan.single_precision ? "single" : "double";
  report.plan.depth = job.targets.depth();
  report.plan.boxes = job.targets.boxes.size();
  report.plan.leaves = job.targets.leaves();
}

}  // namespace farsum
