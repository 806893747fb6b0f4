#include "fmm/schedule/tree_evaluation.hpp"

#include <algorithm>
#include <cmath>

#include "fmm/schedule/stopwatch.hpp"
#include "fmm/schedule/tree_work.hpp"

namespace farsum {
namespace {

/// Pairs that projecting or evaluating one charge costs, per coefficient.
constexpr double kPairsPerTerm = 0.4;

/// Order that uniform charges need, for decisions taken before the data are known.
int typical_order(double tolerance) noexcept { return int(4.5 - 2 * std::log10(tolerance)); }

/// Highest order that any translation of the lists asks for.
int highest_order(const EvaluationJob& job, const NearLists& near, const DirectRule& rule, const BoxAccuracy& accuracy,
                  const OrderChoice& orders) {
  constexpr std::size_t kGrain = 256;
  constexpr int kNearestSquared = 4;   // expansions of unequal boxes are judged as the nearest far pair
  const std::vector<Box>&targets = job.targets.boxes, &sources = job.sources.boxes;
  std::vector<int> highest((targets.size() + kGrain - 1) / kGrain, kMinOrder);
  job.executor.for_each(targets.size(), kGrain, [&](std::size_t begin, std::size_t end, int) {
    int& top = highest[begin / kGrain];
    for (std::size_t b = std::max<std::size_t>(begin, 1); b < end; ++b) {
      const Box& target = targets[b];
      const double log_side = std::log2(job.targets.frame.box_side(target.level));
      const auto consider = [&](std::uint32_t s, int squared, double side) {
        top = std::max(top, orders.order(squared, side, accuracy.strength[s], accuracy.bearable_potential[b], accuracy.bearable_field[b]));
      };
      for_child_relations(
          job.sources, near.begin(target.parent), near.end(target.parent), target, rule, [](const ListEntry&) {},
          [&](std::uint32_t s, std::uint32_t) {
            const auto square = [&](std::size_t axis) {
              const int d = int(sources[s].place[axis] - target.place[axis]);
              return d * d;
            };
            consider(s, square(0) + square(1) + square(2), log_side);
          },
          [&](std::uint32_t s, std::uint32_t) { consider(s, kNearestSquared, log_side); });
      if (!target.leaf()) continue;
      for_leaf_relations(
          job.sources, near.begin(b), near.end(b), target, rule, [](std::uint32_t, std::uint32_t) {},
          [&](std::uint32_t s, std::uint32_t) {
            consider(s, kNearestSquared, std::log2(job.sources.frame.box_side(sources[s].level)));
          });
    }
  });
  return *std::max_element(highest.begin(), highest.end());
}

}  // namespace

std::uint32_t default_leaf_capacity(double tolerance) noexcept {
  const double digits = -std::log10(tolerance);
  return std::uint32_t(40 + 10 * digits);
}

bool single_precision_suffices(double tolerance) noexcept { return tolerance >= 5e-7; }

double direct_break_even(double tolerance) noexcept { return 2000 + 600 * std::max(0.0, -std::log10(tolerance) - 3); }

template <class Real>
struct TreeEvaluator::Tables {
  Tables(int order, Executor& executor) : translations(order, executor), gradients(order) {}
  TranslationTables<Real> translations;
  GradientRows<Real> gradients;
};

TreeEvaluator::TreeEvaluator() = default;
TreeEvaluator::~TreeEvaluator() = default;

template <class Real>
TreeEvaluator::Tables<Real>& TreeEvaluator::tables(int order, Executor& executor) {
  auto& kept = [this]() -> auto& {
    if constexpr (sizeof(Real) == sizeof(float))
      return single_;
    else
      return double_;
  }();
  if (!kept || kept->translations.order() != order) kept = std::make_unique<Tables<Real>>(order, executor);
  return *kept;
}

void TreeEvaluator::evaluate(const EvaluationJob& job, double charge_rms, double tolerance, Report& report) {
  TreePlan plan;
  plan.single_precision = single_precision_suffices(tolerance);
  plan.rule.terms = kPairsPerTerm * double(term_count(typical_order(tolerance)));
  BoxAccuracy accuracy;
  std::unique_ptr<NearLists> near;
  {
    const Stopwatch watch(report.seconds.lists);
    job.checkpoint(Phase::lists, 0);
    accuracy = box_accuracy(job, survey(job, charge_rms), tolerance);
    near = std::make_unique<NearLists>(job.sources, job.targets, plan.rule, job.executor);
    plan.order = highest_order(job, *near, plan.rule, accuracy, orders_);
  }
  const auto passes = [&](auto real) {
    using Real = decltype(real);
    std::unique_ptr<TreeWork<Real>> work;
    {
      const Stopwatch watch(report.seconds.far);
      const Tables<Real>& kept = tables<Real>(plan.order, job.executor);
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
