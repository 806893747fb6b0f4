// Local expansions of all target boxes: far boxes of the same level by translations grouped by offset and order, coarse leaves
// by their charges, and what the parent has, level by level from the root.
#include <algorithm>
#include <cmath>

#include "fmm/schedule/tree_work.hpp"

namespace farsum {
namespace {

constexpr std::size_t kKeys = std::size_t(kOffsets) * (kMaxOrder + 1);
constexpr std::size_t kSmallestTask = 64, kLargestTask = 512, kTasksWanted = 32;
constexpr std::size_t kParentsPerTask = 128;

struct FarPair {
  std::uint32_t key, source, target;
};

/// Translations of one task, sorted by offset and order.
class PairBins {
 public:
  void clear() { pairs_.clear(); }
  void add(int offset, int order, std::uint32_t source, std::uint32_t target) {
    pairs_.push_back({std::uint32_t(offset * (kMaxOrder + 1) + order), source, target});
  }
  void sort() {
    first_.assign(kKeys + 1, 0);
    for (const FarPair& pair : pairs_) ++first_[pair.key + 1];
    for (std::size_t key = 0; key < kKeys; ++key) first_[key + 1] += first_[key];
    sorted_.resize(pairs_.size());
    for (const FarPair& pair : pairs_) sorted_[first_[pair.key]++] = pair;
  }
  /// body(offset, order, begin, end) for each group of equal keys.
  template <class Body>
  void for_groups(const Body& body) const {
    for (std::size_t i = 0, j; i < sorted_.size(); i = j) {
      for (j = i; j < sorted_.size() && sorted_[j].key == sorted_[i].key;) ++j;
      body(int(sorted_[i].key) / (kMaxOrder + 1), int(sorted_[i].key) % (kMaxOrder + 1), &sorted_[i], &sorted_[i] + (j - i));
    }
  }

 private:
  std::vector<FarPair> pairs_, sorted_;
  std::vector<std::uint32_t> first_;
};

template <class Real>
class LevelTask {
 public:
  LevelTask(TreeWork<Real>& work, WorkerScratch<Real>& scratch, PairBins& bins) : work_(work), scratch_(scratch), bins_(bins) {}

  void run(std::size_t begin, std::size_t end) {
    bins_.clear();
    for (std::size_t b = begin; b < end; ++b) {
      work_.local.clear_row(b);
      if (b > 0) collect(b);
    }
    bins_.sort();
    bins_.for_groups(
        [&](int offset, int order, const FarPair* first, const FarPair* last) { translate(offset, order, first, last); });
    for (std::size_t b = begin; b < end; ++b) add_carry(work_.local.row(b));
  }

 private:
  /// Where a local row keeps the rounding errors of its lowest degrees; without them, adding hundreds of boxes in single
  /// precision costs 6e-7 of the potential of 10^6 charges of both signs.
  std::size_t carry() const { return row_length<Real>(work_.plan.order); }
  void add_carry(Real* row) const {
    for (std::size_t i = 0; i < kernels::kRealPad<Real>; ++i) row[i] += row[carry() + i];
  }

  void collect(std::size_t b) {
    const Box& target = work_.job.targets.boxes[b];
    const std::vector<Box>& sources = work_.job.sources.boxes;
    const double log_side = std::log2(work_.job.targets.frame.box_side(target.level));
    for_child_relations(
        work_.job.sources, work_.near.begin(target.parent), work_.near.end(target.parent), target, work_.plan.rule,
        [](const ListEntry&) {},
        [&](std::uint32_t s, std::uint32_t) {
          const Box& source = sources[s];
          const BoxOffset offset = DirectRule::offset(target, source);
          const int order = work_.orders.order(offset.squared(), log_side, work_.accuracy.demand(b, s));
          bins_.add(offset_index(offset), std::min(order, work_.plan.order), s, std::uint32_t(b));
          work_.has_local[b] = 1;
        },
        [&](std::uint32_t s, std::uint32_t) {
          project_coarse(b, sources[s]);
          work_.has_local[b] = 1;
        });
  }

  void project_coarse(std::size_t b, const Box& source) {
    const Octree& targets = work_.job.targets;
    const Box& target = targets.boxes[b];
    const kernels::PointBlock<Real> points = relative_points<Real>(
        work_.job.sources, work_.job.charges, source.begin, source.end, targets.frame.centre(target.place, target.level),
        targets.frame.box_side(target.level), work_.job.ledger, scratch_.points);
    work_.kernels().project(points, work_.plan.order, true, work_.tables.recurrence(), work_.local.row(b),
                            scratch_.kernel.data());
  }

  void translate(int offset, int order, const FarPair* first, const FarPair* last) {
    scratch_.rows.clear();
    scratch_.targets.clear();
    for (const FarPair* pair = first; pair != last; ++pair) {
      scratch_.rows.push_back(work_.multipole.row(pair->source));
      scratch_.targets.push_back(work_.local.row(pair->target));
    }
    kernels::Translation<Real> translation = work_.tables.far(offset, order);
    translation.carry = carry();
    work_.kernels().translate(translation, scratch_.rows.data(), scratch_.targets.data(), scratch_.rows.size(),
                              scratch_.kernel.data());
  }

  TreeWork<Real>& work_;
  WorkerScratch<Real>& scratch_;
  PairBins& bins_;
};

template <class Real>
void hand_down(TreeWork<Real>& work, std::size_t begin, std::size_t end, WorkerScratch<Real>& scratch) {
  const std::vector<Box>& boxes = work.job.targets.boxes;
  for (int octant = 0; octant < 8; ++octant) {
    scratch.rows.clear();
    scratch.targets.clear();
    for (std::size_t parent = begin; parent < end; ++parent) {
      if (!work.has_local[parent]) continue;
      for (std::uint32_t child = boxes[parent].first_child; child < boxes[parent].first_child + boxes[parent].children; ++child)
        if (boxes[child].octant == octant) {
          scratch.rows.push_back(work.local.row(parent));
          scratch.targets.push_back(work.local.row(child));
          work.has_local[child] = 1;
        }
    }
    work.kernels().translate(work.tables.parent_to_child(octant), scratch.rows.data(), scratch.targets.data(),
                             scratch.rows.size(), scratch.kernel.data());
  }
}

}  // namespace

template <class Real>
void far_pass(TreeWork<Real>& work) {
  const Octree& tree = work.job.targets;
  std::vector<PairBins> bins(work.scratch.size());
  for (int level = 0; level <= tree.depth(); ++level) {
    work.job.checkpoint(Phase::far, double(level) / (tree.depth() + 1));
    const std::size_t first = tree.level_begin[std::size_t(level)], count = tree.level_begin[std::size_t(level) + 1] - first;
    const std::size_t grain = std::clamp(count / kTasksWanted, kSmallestTask, kLargestTask);
    work.job.executor.for_each(count, grain, [&](std::size_t begin, std::size_t end, int worker) {
      LevelTask<Real>(work, work.scratch[std::size_t(worker)], bins[std::size_t(worker)]).run(first + begin, first + end);
    });
  }
  for (int level = 0; level < tree.depth(); ++level) {
    const std::size_t first = tree.level_begin[std::size_t(level)], count = tree.level_begin[std::size_t(level) + 1] - first;
    work.job.executor.for_each(count, kParentsPerTask, [&](std::size_t begin, std::size_t end, int worker) {
      hand_down(work, first + begin, first + end, work.scratch[std::size_t(worker)]);
    });
  }
}

template void far_pass(TreeWork<float>&);
template void far_pass(TreeWork<double>&);

}  // namespace farsum
