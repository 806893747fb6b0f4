// What target leaves get at the end: their local expansion at the targets, multipoles of fine boxes, and all near charges pair
// by pair.
#include <algorithm>
#include <array>
#include <numeric>

#include "fmm/schedule/tree_work.hpp"

namespace farsum {
namespace {

constexpr std::size_t kLeavesPerTask = 16;
constexpr std::size_t kTasksBetweenCheckpoints = 512;
constexpr double kFarSquared = 1e300;
constexpr std::size_t kSourceBuffer = 4096;  // sources gathered before the kernel runs: 128 KiB in second-level cache

/// Results of the targets of one leaf, and the near sources gathered for them.
struct LeafScratch {
  std::vector<double> potential, x, y, z;
  AlignedArray<double> sources;  // x, y, z, q columns
  std::size_t capacity = 0, count = 0;

  void start(std::size_t targets) {
    for (std::vector<double>* values : {&potential, &x, &y, &z}) values->assign(targets, 0.0);
    count = 0;
  }
  double* column(std::size_t c) { return sources.data() + c * capacity; }
};

template <class Real>
class LeafTask {
 public:
  LeafTask(TreeWork<Real>& work, WorkerScratch<Real>& scratch, LeafScratch& sums)
      : work_(work), job_(work.job), scratch_(scratch), sums_(sums) {}

  void run(std::size_t b) {
    const Box& leaf = job_.targets.boxes[b];
    sums_.start(leaf.count());
    std::fill(job_.nearest_squared + leaf.begin, job_.nearest_squared + leaf.end, kFarSquared);
    if (work_.has_local[b]) add_local(b, leaf);
    self_pending_ = job_.same_points();
    if (self_pending_) append_sources(leaf, leaf.begin, leaf.end);
    for_leaf_relations(
        job_.sources, work_.near.begin(b), work_.near.end(b), leaf, work_.plan.rule,
        [&](std::uint32_t s, std::uint32_t) {
          const Box& source = job_.sources.boxes[s];
          if (job_.same_points() && s == b) return;
          append_sources(leaf, source.begin, source.end);
        },
        [&](std::uint32_t s, std::uint32_t) { add_multipole(leaf, s); });
    sum_pairs(leaf);
    for (std::uint32_t i = 0; i < leaf.count(); ++i)
      job_.results.store(leaf.begin + i, sums_.potential[i], sums_.x[i], sums_.y[i], sums_.z[i]);
  }

 private:
  /// Adds (1/h) sum rows[0] and, for the field, -(1/h^2) of the gradient rows at the targets of the leaf.
  void add_expansion(const Box& leaf, const std::array<DoubleDouble, 3>& centre, double side, int order, bool irregular,
                     const Real* const (&rows)[4]) {
    const int n_rows = job_.with_field ? 4 : 1;
    const kernels::PointBlock<Real> points =
        relative_points<Real>(job_.targets, nullptr, leaf.begin, leaf.end, centre, side, job_.ledger, scratch_.points, 4);
    Real* const base = scratch_.points.data() + 4 * points.count;
    Real* const values[4] = {base, base + points.count, base + 2 * points.count, base + 3 * points.count};
    work_.kernels().evaluate(points, order, irregular, work_.tables.recurrence(), rows, n_rows, values);
    const double per_length = 1 / side, per_area = per_length * per_length;
    for (std::uint32_t i = 0; i < leaf.count(); ++i) {
      sums_.potential[i] += per_length * double(values[0][i]);
      if (n_rows == 1) continue;
      sums_.x[i] -= per_area * double(values[1][i]);
      sums_.y[i] -= per_area * double(values[2][i]);
      sums_.z[i] -= per_area * double(values[3][i]);
    }
  }

  std::array<Real*, 3> gradient_rows() {
    const std::size_t length = row_length<Real>(work_.plan.order + 1);
    Real* const base = scratch_.gradient.data();
    return {base, base + length, base + 2 * length};
  }

  void add_local(std::size_t b, const Box& leaf) {
    const std::array<Real*, 3> g = gradient_rows();
    if (job_.with_field) work_.gradients.of_local(work_.local.row(b), work_.plan.order, {g[0], g[1], g[2]});
    const Frame& frame = job_.targets.frame;
    add_expansion(leaf, frame.centre(leaf.place, leaf.level), frame.box_side(leaf.level), work_.plan.order, false,
                  {work_.local.row(b), g[0], g[1], g[2]});
  }

  void add_multipole(const Box& leaf, std::uint32_t s) {
    // The potential's row is copied to the length of the derivatives, which have one degree more.
    const std::size_t length = row_length<Real>(work_.plan.order + 1);
    const std::array<Real*, 3> g = gradient_rows();
    const Real* row = work_.multipole.row(s);
    int order = work_.plan.order;
    if (job_.with_field) {
      work_.gradients.of_multipole(row, order, {g[0], g[1], g[2]});
      extended_.assign(length, Real(0));
      std::copy_n(row, term_count(order), extended_.begin());
      row = extended_.data();
      ++order;
    }
    const Box& source = job_.sources.boxes[s];
    const Frame& frame = job_.sources.frame;
    add_expansion(leaf, frame.centre(source.place, source.level), frame.box_side(source.level), order, true,
                  {row, g[0], g[1], g[2]});
  }

  void append_sources(const Box& leaf, std::uint32_t begin, std::uint32_t end) {
    while (begin < end) {
      if (sums_.count + (end - begin) > kSourceBuffer && sums_.count > 0) sum_pairs(leaf);
      // The leaf's own sources stay together: they are the partners of the targets.
      const std::uint32_t n =
          self_pending_ && sums_.count == 0 ? end - begin : std::min<std::uint32_t>(end - begin, kSourceBuffer);
      reserve(sums_.count + n);
      const Octree& s = job_.sources;
      std::copy_n(s.x.data() + begin, n, sums_.column(0) + sums_.count);
      std::copy_n(s.y.data() + begin, n, sums_.column(1) + sums_.count);
      std::copy_n(s.z.data() + begin, n, sums_.column(2) + sums_.count);
      std::copy_n(job_.charges + begin, n, sums_.column(3) + sums_.count);
      sums_.count += n;
      begin += n;
    }
  }

  void reserve(std::size_t n) {
    const std::size_t needed = round_up(std::max(n, kSourceBuffer), kSourcePad);
    if (needed <= sums_.capacity) return;
    AlignedArray<double> larger(job_.ledger, 4 * needed);
    for (std::size_t c = 0; c < 4; ++c)
      std::copy_n(sums_.sources.data() + c * sums_.capacity, sums_.count, larger.data() + c * needed);
    sums_.sources = std::move(larger);
    sums_.capacity = needed;
  }

  void sum_pairs(const Box& leaf) {
    if (sums_.count == 0) return;
    const std::size_t padded = round_up(sums_.count, kSourcePad);
    const std::array<double, 3> pad = job_.sources.frame.padding_place();
    for (std::size_t k = sums_.count; k < padded; ++k) {
      for (std::size_t axis = 0; axis < 3; ++axis) sums_.column(axis)[k] = pad[axis];
      sums_.column(3)[k] = 0;
    }
    const Octree& t = job_.targets;
    job_.kernels.pair_sums(
        {sums_.column(0), sums_.column(1), sums_.column(2), sums_.column(3), padded, t.x.data() + leaf.begin,
         t.y.data() + leaf.begin, t.z.data() + leaf.begin, leaf.count(), self_pending_ ? 0 : -1, sums_.potential.data(),
         sums_.x.data(), sums_.y.data(), sums_.z.data(), job_.nearest_squared + leaf.begin},
        job_.root_accuracy, job_.mask_zero, job_.with_field);
    sums_.count = 0;
    self_pending_ = false;
  }

  TreeWork<Real>& work_;
  const EvaluationJob& job_;
  WorkerScratch<Real>& scratch_;
  LeafScratch& sums_;
  std::vector<Real> extended_;
  bool self_pending_ = false;  ///< the buffer begins with the leaf's own sources
};

}  // namespace

template <class Real>
void leaf_pass(TreeWork<Real>& work) {
  const Octree& tree = work.job.targets;
  std::vector<std::uint32_t> leaves;
  for (std::uint32_t b = 0; b < tree.boxes.size(); ++b)
    if (tree.boxes[b].leaf()) leaves.push_back(b);
  std::sort(leaves.begin(), leaves.end(),
            [&](std::uint32_t a, std::uint32_t b) { return tree.boxes[a].begin < tree.boxes[b].begin; });
  std::vector<LeafScratch> sums(work.scratch.size());
  constexpr std::size_t kStride = kLeavesPerTask * kTasksBetweenCheckpoints;
  for (std::size_t first = 0; first < leaves.size(); first += kStride) {
    work.job.checkpoint(Phase::near, double(first) / double(leaves.size()));
    work.job.executor.for_each(std::min(kStride, leaves.size() - first), kLeavesPerTask,
                               [&](std::size_t begin, std::size_t end, int worker) {
                                 LeafTask<Real> task(work, work.scratch[std::size_t(worker)], sums[std::size_t(worker)]);
                                 for (std::size_t i = begin; i < end; ++i) task.run(leaves[first + i]);
                               });
  }
}

template void leaf_pass(TreeWork<float>&);
template void leaf_pass(TreeWork<double>&);

}  // namespace farsum
