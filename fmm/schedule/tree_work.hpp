#pragma once
// What the passes of one tree evaluation share: plan, lists, tables and the coefficients of all boxes.
#include <cstring>
#include <vector>

#include "fmm/expansion/gradient.hpp"
#include "fmm/expansion/order_choice.hpp"
#include "fmm/expansion/translation.hpp"
#include "fmm/schedule/box_accuracy.hpp"
#include "fmm/schedule/evaluation_job.hpp"
#include "fmm/traversal/interactions.hpp"

namespace farsum {

/// Decisions of one tree evaluation that do not depend on the arithmetic.
struct TreePlan {
  int order = 0;  ///< of every stored expansion
  bool single_precision = false;
  DirectRule rule;
};

/// Rows of coefficients, one for each box, in box order. Rows are plain arrays: copying row_length() reals packs or unpacks a
/// box.
template <class Real>
class CoefficientRows {
 public:
  /// extra: reals kept behind the coefficients of each row.
  CoefficientRows(MemoryLedger& ledger, std::size_t boxes, int order, std::size_t extra = 0)
      : stride_(row_length<Real>(order) + extra), values_(ledger, boxes * stride_) {}
  Real* row(std::size_t box) noexcept { return values_.data() + box * stride_; }
  const Real* row(std::size_t box) const noexcept { return values_.data() + box * stride_; }
  void clear_row(std::size_t box) noexcept { std::memset(row(box), 0, stride_ * sizeof(Real)); }

 private:
  std::size_t stride_;
  AlignedArray<Real> values_;
};

/// Scratch of one worker.
template <class Real>
struct WorkerScratch {
  AlignedArray<Real> kernel;    ///< for translate and project
  AlignedArray<Real> points;    ///< coordinates and charges of one leaf, results of evaluate
  AlignedArray<Real> gradient;  ///< rows of derivatives
  std::vector<const Real*> rows;
  std::vector<Real*> targets;
};

template <class Real>
struct TreeWork {
  TreeWork(const EvaluationJob& evaluation_job, const TreePlan& tree_plan, const NearLists& near_lists,
           const BoxAccuracy& box_accuracy_, const OrderChoice& order_choice, const TranslationTables<Real>& translation_tables,
           const GradientRows<Real>& gradient_rows);

  const kernels::ExpansionKernels<Real>& kernels() const { return kernels::expansion_kernels<Real>(job.kernels); }

  const EvaluationJob& job;
  const TreePlan& plan;
  const NearLists& near;
  const BoxAccuracy& accuracy;
  const OrderChoice& orders;
  const TranslationTables<Real>& tables;
  const GradientRows<Real>& gradients;
  CoefficientRows<Real> multipole, local;
  std::vector<std::uint8_t> has_local;  ///< by target box: its local row holds something
  std::vector<WorkerScratch<Real>> scratch;
};

/// Points of a range of a tree relative to a centre, in sides of the box; padded with charge 0 at (1, 1, 1).
template <class Real>
kernels::PointBlock<Real> relative_points(const Octree& tree, const double* charges, std::uint32_t begin, std::uint32_t end,
                                          const std::array<DoubleDouble, 3>& centre, double side, MemoryLedger& ledger,
                                          AlignedArray<Real>& buffer, std::size_t extra_columns = 0);

/// P2M of all leaves, then M2M from the deepest level to the root.
template <class Real>
void upward_pass(TreeWork<Real>& work);
/// M2L and P2L of all boxes, and L2L down to the leaves.
template <class Real>
void far_pass(TreeWork<Real>& work);
/// L2P, M2P and P2P of all target leaves; stores the results.
template <class Real>
void leaf_pass(TreeWork<Real>& work);

}  // namespace farsum
