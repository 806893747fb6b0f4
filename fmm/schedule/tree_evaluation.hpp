#pragma once
// One evaluation by the tree: survey, lists, orders, passes. Keeps the translation tables between calls.
#include <memory>

#include "fmm/expansion/gradient.hpp"
#include "fmm/expansion/order_choice.hpp"
#include "fmm/expansion/translation.hpp"
#include "fmm/report.hpp"
#include "fmm/schedule/evaluation_job.hpp"

namespace farsum {

/// Order that uniform charges need, for decisions taken before the data are known.
int typical_order(double tolerance) noexcept;
/// Leaf capacity that suits a tolerance: balances near pairs against translations. See DEVELOPERS.md for the measurement.
std::uint32_t default_leaf_capacity(double tolerance) noexcept;
/// True if the far field of this tolerance is computed in single precision.
bool single_precision_suffices(double tolerance) noexcept;
/// Number of charges below which direct summation is faster.
double direct_break_even(double tolerance) noexcept;

class TreeEvaluator {
 public:
  TreeEvaluator();
  ~TreeEvaluator();

  /// tolerance: what the expansions aim at (tightened in a retry). Fills seconds and plan of the report.
  void evaluate(const EvaluationJob& job, double charge_rms, double tolerance, Report& report);

 private:
  template <class Real>
  struct Tables;
  template <class Real>
  Tables<Real>& tables(int order, Separation separation, Executor& executor);

  OrderChoice orders_;
  std::unique_ptr<Tables<float>> single_;
  std::unique_ptr<Tables<double>> double_;
};

}  // namespace farsum
