#pragma once
// One evaluation as the passes see it: sources and targets in tree order, and where the results go.
#include <atomic>
#include <cstddef>
#include <functional>

#include "fmm/base/aligned_array.hpp"
#include "fmm/domain/scaling.hpp"
#include "fmm/error.hpp"
#include "fmm/kernels/kernel_table.hpp"
#include "fmm/octree/octree.hpp"
#include "fmm/options.hpp"
#include "fmm/parallel/executor.hpp"

namespace farsum {

/// Results in tree order, delivered to the caller at the end. Distinct targets may be stored by several threads.
/// Storing straight to the caller's arrays costs far more: the tree's order is random to the caller's, and each of the four
/// stores of a target misses the address cache (0.2 s for 10^6 targets in small pages, against 0.03 s this way).
class ResultBuffer {
 public:
  ResultBuffer(std::size_t targets, MemoryLedger& ledger)
      : ledger_(ledger), potential_(ledger, targets), field_(ledger, 3 * targets) {}

  void store(std::size_t place, double potential, double x, double y, double z) noexcept {
    potential_[place] = potential;
    double* const row = &field_[3 * place];
    row[0] = x;
    row[1] = y;
    row[2] = z;
  }

  /// view[index[place]] = unit(stored value) for all targets.
  void deliver(const ResultView& view, const std::uint32_t* index, PowerOfTwo potential_unit, PowerOfTwo field_unit,
               Executor& executor) const;

 private:
  MemoryLedger& ledger_;
  AlignedArray<double> potential_, field_;
};

struct EvaluationJob {
  const Octree& sources;
  const double* charges;  ///< in tree order, scaled, padded
  const Octree& targets;  ///< the same object where targets are the charges
  bool with_field;
  bool mask_zero;  ///< pairs at zero distance are left out instead of found and refused
  kernels::RootAccuracy root_accuracy;
  const kernels::KernelTable& kernels;
  Executor& executor;
  MemoryLedger& ledger;
  ResultBuffer& results;
  double* nearest_squared;  ///< per target in tree order; smallest squared distance to a source that is not the target itself
  const Options& options;

  bool same_points() const noexcept { return &sources == &targets; }

  /// Progress and cancellation, from the calling thread between pieces of work.
  void checkpoint(Phase phase, double fraction) const {
    if (options.on_progress) options.on_progress(phase, fraction);
    if (options.should_stop && options.should_stop())
      throw Error(ErrorCode::cancelled, "the evaluation was cancelled by the caller");
  }
};

}  // namespace farsum
