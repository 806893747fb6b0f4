// Multipole expansions of all source boxes: charges to multipole at the leaves, children to parents level by level.
#include "fmm/schedule/tree_work.hpp"

namespace farsum {
namespace {

constexpr std::size_t kLeavesPerTask = 32;
constexpr std::size_t kParentsPerTask = 128;  // enough boxes of one octant for full vectors

template <class Real>
void project_leaf(TreeWork<Real>& work, std::size_t b, WorkerScratch<Real>& scratch) {
  const Octree& tree = work.job.sources;
  const Box& box = tree.boxes[b];
  const kernels::PointBlock<Real> points =
      relative_points<Real>(tree, work.job.charges, box.begin, box.end, tree.frame.centre(box.place, box.level),
                            tree.frame.box_side(box.level), work.job.ledger, scratch.points);
  work.kernels().project(points, work.plan.order, false, work.tables.recurrence(), work.multipole.row(b),
                         scratch.kernel.data());
}

template <class Real>
void join_children(TreeWork<Real>& work, std::size_t begin, std::size_t end, WorkerScratch<Real>& scratch) {
  const std::vector<Box>& boxes = work.job.sources.boxes;
  for (int octant = 0; octant < 8; ++octant) {
    scratch.rows.clear();
    scratch.targets.clear();
    for (std::size_t parent = begin; parent < end; ++parent)
      for (std::uint32_t child = boxes[parent].first_child; child < boxes[parent].first_child + boxes[parent].children; ++child)
        if (boxes[child].octant == octant) {
          scratch.rows.push_back(work.multipole.row(child));
          scratch.targets.push_back(work.multipole.row(parent));
        }
    work.kernels().translate(work.tables.child_to_parent(octant), scratch.rows.data(), scratch.targets.data(),
                             scratch.rows.size(), scratch.kernel.data());
  }
}

}  // namespace

template <class Real>
void upward_pass(TreeWork<Real>& work) {
  const Octree& tree = work.job.sources;
  work.job.executor.for_each(tree.boxes.size(), kLeavesPerTask, [&](std::size_t begin, std::size_t end, int worker) {
    for (std::size_t b = begin; b < end; ++b) {
      work.multipole.clear_row(b);
      if (tree.boxes[b].leaf()) project_leaf(work, b, work.scratch[std::size_t(worker)]);
    }
  });
  for (int level = tree.depth() - 1; level >= 0; --level) {
    const std::size_t first = tree.level_begin[std::size_t(level)], count = tree.level_begin[std::size_t(level) + 1] - first;
    work.job.executor.for_each(count, kParentsPerTask, [&](std::size_t begin, std::size_t end, int worker) {
      join_children(work, first + begin, first + end, work.scratch[std::size_t(worker)]);
    });
  }
}

template void upward_pass(TreeWork<float>&);
template void upward_pass(TreeWork<double>&);

}  // namespace farsum
