#pragma once
// Who is near, who is far. Source boxes and target boxes lie on one lattice (octree/frame.hpp), in one tree or in two.
// For a target box the source tree is covered without gap or overlap by
//   near entries:  boxes of the same level that are near it, and leaves of lower level that touch it (or are summed directly
//   anyway); far boxes:     boxes of the same level that are not near it but whose parents are near its parent (multipole to
//   local); coarse boxes:  leaves of lower level that do not touch it, but touch its parent (charges to local); and what its
//   ancestors have as far or coarse boxes.
// A target leaf with a divided near box goes down into that: leaves that touch it are near, the first box below that does not
// touch it is fine (multipole to targets).
#include <algorithm>
#include <cstdint>
#include <vector>

#include "fmm/domain/box_offset.hpp"
#include "fmm/octree/octree.hpp"
#include "fmm/parallel/executor.hpp"

namespace farsum {

/// A source box as seen from a target box.
struct ListEntry {
  std::uint32_t box;
  std::uint16_t shift;   ///< index into the image shifts of the domain; 0 = none, the only one in open space
  std::uint16_t direct;  ///< 1: summed pair by pair with all that is below, whether it touches or not
};

/// True if the boxes touch or overlap.
bool touching(const Box& a, const Box& b) noexcept;

/// How relations are decided: which boxes of one level are near, and when charges of a leaf are summed pair by pair although
/// expansions would do.
struct DirectRule {
  double terms = 0;  ///< pairs that one charge's projection or evaluation costs
  Separation separation;

  /// Boxes of one level by the separation, of different levels if they touch.
  bool near(const Box& a, const Box& b) const noexcept {
    return touching(a, b) || (a.level == b.level && separation.near_squared > 3 && separation.near(offset(a, b)));
  }
  /// Offset of boxes of one level, cut at a distance that is far in any case.
  static BoxOffset offset(const Box& target, const Box& source) noexcept {
    const auto component = [&](std::size_t axis) {
      return int(std::clamp<std::int64_t>(source.place[axis] - target.place[axis], -100, 100));
    };
    return {component(0), component(1), component(2)};
  }

  bool coarse_direct(const Box& target, const Box& /*source*/) const noexcept { return target.count() <= terms; }
  bool fine_direct(const Box& /*target*/, const Box& source) const noexcept { return source.count() <= terms; }
};

/// Near entries of every target box, by box.
class NearLists {
 public:
  NearLists(const Octree& sources, const Octree& targets, const DirectRule& rule, Executor& executor);

  const ListEntry* begin(std::size_t box) const noexcept { return entries_.data() + first_[box]; }
  const ListEntry* end(std::size_t box) const noexcept { return entries_.data() + first_[box + 1]; }
  std::size_t bytes() const noexcept { return entries_.size() * sizeof(ListEntry) + first_.size() * sizeof(first_[0]); }

 private:
  void add_level(const Octree& sources, const Octree& targets, const DirectRule& rule, int level, Executor& executor);

  std::vector<std::uint64_t> first_;
  std::vector<ListEntry> entries_;
};

/// Splits the near entries of a divided target box among relations to its child `child`:
/// near(ListEntry), far(source box index, shift), coarse(source box index, shift).
template <class Near, class Far, class Coarse>
void for_child_relations(const Octree& sources, const ListEntry* begin, const ListEntry* end, const Box& child,
                         const DirectRule& rule, const Near& near, const Far& far, const Coarse& coarse) {
  for (const ListEntry* entry = begin; entry != end; ++entry) {
    const Box& box = sources.boxes[entry->box];
    if (entry->direct) {
      near(*entry);
    } else if (!box.leaf()) {
      for (std::uint32_t b = box.first_child; b < box.first_child + box.children; ++b) {
        if (rule.near(child, sources.boxes[b]))
          near(ListEntry{b, entry->shift, 0});
        else
          far(b, entry->shift);
      }
    } else if (touching(child, box)) {
      near(*entry);
    } else if (rule.coarse_direct(child, box)) {
      near(ListEntry{entry->box, entry->shift, 1});
    } else {
      coarse(entry->box, entry->shift);
    }
  }
}

/// The near entries of a target leaf, taken apart: direct(source box index, shift) for all that is summed pair by pair,
/// fine(source box index, shift) for boxes whose multipole acts on the targets.
template <class Direct, class Fine>
void for_leaf_relations(const Octree& sources, const ListEntry* begin, const ListEntry* end, const Box& leaf,
                        const DirectRule& rule, const Direct& direct, const Fine& fine) {
  const auto descend = [&](const auto& self, std::uint32_t b, std::uint32_t shift) -> void {
    const Box& box = sources.boxes[b];
    if (rule.near(leaf, box)) {
      if (box.leaf()) return direct(b, shift);
      for (std::uint32_t c = box.first_child; c < box.first_child + box.children; ++c) self(self, c, shift);
    } else if (rule.fine_direct(leaf, box)) {
      direct(b, shift);
    } else {
      fine(b, shift);
    }
  };
  for (const ListEntry* entry = begin; entry != end; ++entry) {
    if (entry->direct)
      direct(entry->box, entry->shift);
    else
      descend(descend, entry->box, entry->shift);
  }
}

}  // namespace farsum
