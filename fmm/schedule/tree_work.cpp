#include "fmm/schedule/tree_work.hpp"

namespace farsum {

template <class Real>
TreeWork<Real>::TreeWork(const EvaluationJob& evaluation_job, const TreePlan& tree_plan, const NearLists& near_lists,
                         const BoxAccuracy& box_accuracy_, const OrderChoice& order_choice,
                         const TranslationTables<Real>& translation_tables, const GradientRows<Real>& gradient_rows)
    : job(evaluation_job),
      plan(tree_plan),
      near(near_lists),
      accuracy(box_accuracy_),
      orders(order_choice),
      tables(translation_tables),
      gradients(gradient_rows),
      multipole(job.ledger, job.sources.boxes.size(), plan.order),
      local(job.ledger, job.targets.boxes.size(), plan.order, kernels::kRealPad<Real>),
      has_local(job.targets.boxes.size(), 0),
      scratch(std::size_t(job.executor.threads())) {
  for (WorkerScratch<Real>& s : scratch) {
    s.kernel = {job.ledger, kernels::expansion_scratch(plan.order + 1)};
    s.gradient = {job.ledger, 3 * row_length<Real>(plan.order + 1)};
  }
}

template <class Real>
kernels::PointBlock<Real> relative_points(const Octree& tree, const double* charges, std::uint32_t begin, std::uint32_t end,
                                          const std::array<DoubleDouble, 3>& centre, double side, MemoryLedger& ledger,
                                          AlignedArray<Real>& buffer, std::size_t extra_columns) {
  const std::size_t count = end - begin, padded = round_up(count, kernels::kRealPad<Real>),
                    needed = (4 + extra_columns) * padded;
  if (buffer.size() < needed) buffer = AlignedArray<Real>(ledger, needed + needed / 2);
  const double inverse = 1 / side;
  const double* const from[3] = {tree.x.data() + begin, tree.y.data() + begin, tree.z.data() + begin};
  for (std::size_t axis = 0; axis < 3; ++axis) {
    Real* to = buffer.data() + axis * padded;
    const double high = centre[axis].high, low = centre[axis].low;
    for (std::size_t k = 0; k < count; ++k) to[k] = Real(((from[axis][k] - high) - low) * inverse);
    for (std::size_t k = count; k < padded; ++k) to[k] = Real(1);
  }
  Real* q = buffer.data() + 3 * padded;
  for (std::size_t k = 0; k < padded; ++k) q[k] = charges && k < count ? Real(charges[begin + k]) : Real(0);
  return {buffer.data(), buffer.data() + padded, buffer.data() + 2 * padded, q, padded};
}

template struct TreeWork<float>;
template struct TreeWork<double>;
template kernels::PointBlock<float> relative_points(const Octree&, const double*, std::uint32_t, std::uint32_t,
                                                    const std::array<DoubleDouble, 3>&, double, MemoryLedger&,
                                                    AlignedArray<float>&, std::size_t);
template kernels::PointBlock<double> relative_points(const Octree&, const double*, std::uint32_t, std::uint32_t,
                                                     const std::array<DoubleDouble, 3>&, double, MemoryLedger&,
                                                     AlignedArray<double>&, std::size_t);

}  // namespace farsum
