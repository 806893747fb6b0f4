#pragma once
// What a Solver keeps between calls and the order of work of one evaluation: check, scale, tree, plan, passes, identities,
// verification, retry.
#include <functional>
#include <memory>
#include <optional>
#include <vector>

#include "fmm/base/aligned_array.hpp"
#include "fmm/domain/scaling.hpp"
#include "fmm/kernels/kernel_table.hpp"
#include "fmm/octree/coincident.hpp"
#include "fmm/octree/octree.hpp"
#include "fmm/options.hpp"
#include "fmm/report.hpp"
#include "fmm/schedule/evaluation_job.hpp"
#include "fmm/schedule/plan.hpp"
#include "fmm/schedule/tree_evaluation.hpp"

namespace farsum {

class Session {
 public:
  explicit Session(Options options);
  ~Session();

  void set_charges(const PointsView& positions, const ChargesView& charges);
  void update_charges(const ChargesView& charges);
  void evaluate(Output outputs, const ResultView& result);
  void evaluate_at(const PointsView& targets, Output outputs, const ResultView& result);
  ErrorMeasure measure(Output outputs, const ResultView& result);
  const Report& report() const noexcept { return report_; }

 private:
  /// Powers of two between the caller's units and the scaled ones.
  struct Units {
    int length = 0, charge = 0;
    PowerOfTwo scale_length() const { return PowerOfTwo(-length); }
    PowerOfTwo scale_charge() const { return PowerOfTwo(-charge); }
    PowerOfTwo potential() const { return PowerOfTwo(charge - length); }
    PowerOfTwo field() const { return PowerOfTwo(charge - 2 * length); }
    PowerOfTwo energy() const { return PowerOfTwo(2 * charge - length); }
  };
  /// Sources and targets of one evaluation, prepared.
  struct Prepared {
    const Octree& sources;
    const AlignedArray<double>& charges;
    const Octree& targets;
    Units units;
  };
  struct Merged;  // charges at equal places as one, where the caller wants their mutual pairs left out

  void start_report(const PointsView& targets);
  bool trivial() const noexcept;
  void write_zeros(std::size_t count, const ResultView& result);
  void prepare_tree(Executor& executor);
  void refuse_undividable(const Octree& tree) const;
  void merge_coincident(Executor& executor);
  void evaluate_merged(Output outputs, const ResultView& result);

  void run_attempts(const Prepared& prepared, const ResultView& result, Executor& executor,
                    const std::function<void()>& after_pass);
  std::uint32_t leaf_capacity() const noexcept;
  double leaf_fill() const noexcept;
  Method chosen_method(std::size_t sources, std::size_t targets) const noexcept;
  void predict_memory(std::size_t targets, bool same_points);
  double charge_rms(const Units& units) const noexcept;
  EvaluationPlan choose_plan(const Prepared& prepared, double tolerance) const noexcept;
  void run_passes(const Prepared& prepared, const EvaluationPlan& plan, const ResultView& result, Executor& executor);
  void refuse_close_pairs(const Prepared& prepared);
  void verify(const Prepared& prepared, const ResultView& result, Executor& executor);
  bool accept_or_retry(const Prepared& prepared, int attempt);
  void check_results(const ResultView& result, Executor& executor);
  bool verification_wanted(const Prepared& prepared) const noexcept;
  static bool same_points(const Prepared& prepared) noexcept;

  Options options_;
  CpuTarget cpu_target_;
  const kernels::KernelTable& kernels_;
  MemoryLedger ledger_;
  Report report_;

  PointsView positions_;
  ChargesView charges_;
  Bounds bounds_;
  ChargeSums charge_sums_;
  Units units_;
  std::optional<Octree> tree_;
  AlignedArray<double> ordered_charges_;
  AlignedArray<double> nearest_squared_;
  TreeEvaluator tree_evaluator_;
  std::unique_ptr<Merged> merged_;
  bool verified_ = false, verified_targets_ = false;  ///< for Verification::first: at charges, at other targets
  double aimed_tolerance_ = 0;  ///< tightened where a first attempt missed; kept until charges or places change
};

}  // namespace farsum
