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

/// Stores results of targets in the caller's arrays and units. Distinct targets may be stored by several threads.
class ResultWriter {
 public:
  ResultWriter(const ResultView& view, const std::uint32_t* index, PowerOfTwo potential_unit, PowerOfTwo field_unit)
      : view_(view), index_(index), potential_unit_(potential_unit), field_unit_(field_unit) {}

  void store(std::size_t place, double potential, double x, double y, double z) const noexcept {
    const std::ptrdiff_t at = std::ptrdiff_t(index_[place]) * view_.stride;
    if (view_.potential) view_.potential[at] = potential_unit_(potential);
    if (!view_.field_x) return;
    view_.field_x[at] = field_unit_(x);
    view_.field_y[at] = field_unit_(y);
    view_.field_z[at] = field_unit_(z);
  }

 private:
  ResultView view_;
  const std::uint32_t* index_;
  PowerOfTwo potential_unit_, field_unit_;
};

struct EvaluationJob {
  const Octree& sources;
  const double* charges;      ///< in tree order, scaled, padded
  const Octree& targets;      ///< the same object where targets are the charges
  bool with_field;
  bool mask_zero;             ///< pairs at zero distance are left out instead of found and refused
  kernels::RootAccuracy root_accuracy;
  const kernels::KernelTable& kernels;
  Executor& executor;
  MemoryLedger& ledger;
  ResultWriter writer;
  double* nearest_squared;    ///< per target in tree order; smallest squared distance to a source that is not the target itself
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
