#include "fmm/traversal/interactions.hpp"

#include <algorithm>

namespace farsum {

bool touching(const Box& a, const Box& b) noexcept {
  const Box& fine = a.level >= b.level ? a : b;
  const Box& coarse = a.level >= b.level ? b : a;
  const int shift = fine.level - coarse.level;
  for (std::size_t axis = 0; axis < 3; ++axis) {
    const std::int64_t low = coarse.place[axis] << shift, high = (coarse.place[axis] + 1) << shift;
    if (fine.place[axis] + 1 < low || fine.place[axis] > high) return false;
  }
  return true;
}

NearLists::NearLists(const Octree& sources, const Octree& targets, const DirectRule& rule, Executor& executor) {
  first_.assign(targets.boxes.size() + 1, 0);
  if (targets.boxes.empty() || sources.boxes.empty()) return;
  entries_.push_back({0, 0, 0});
  first_[1] = 1;
  for (int level = 1; level <= targets.depth(); ++level) add_level(sources, targets, rule, level, executor);
}

void NearLists::add_level(const Octree& sources, const Octree& targets, const DirectRule& rule, int level, Executor& executor) {
  constexpr std::size_t kGrain = 256;
  const std::size_t first = targets.level_begin[std::size_t(level)],
                    count = targets.level_begin[std::size_t(level) + 1] - first;
  std::vector<std::vector<ListEntry>> pieces((count + kGrain - 1) / kGrain);
  executor.for_each(count, kGrain, [&](std::size_t begin, std::size_t end, int) {
    std::vector<ListEntry>& found = pieces[begin / kGrain];
    for (std::size_t b = first + begin; b < first + end; ++b) {
      const Box& child = targets.boxes[b];
      const std::size_t before = found.size();
      for_child_relations(
          sources, this->begin(child.parent), this->end(child.parent), child, rule,
          [&](const ListEntry& e) { found.push_back(e); }, [](std::uint32_t, std::uint32_t) {},
          [](std::uint32_t, std::uint32_t) {});
      first_[b + 1] = found.size() - before;
    }
  });
  for (std::size_t b = first; b < first + count; ++b) first_[b + 1] += first_[b];
  entries_.resize(first_[first + count]);
  executor.for_each(pieces.size(), 1, [&](std::size_t piece, std::size_t, int) {
    std::copy(pieces[piece].begin(), pieces[piece].end(), entries_.begin() + std::ptrdiff_t(first_[first + piece * kGrain]));
  });
}

}  // namespace farsum
