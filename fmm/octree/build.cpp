// Building the octree: Morton keys, one parallel counting sort by the top levels, then level by level a counting sort of each
// box that is divided. A key reaches kKeyLevels levels; boxes of that depth that must be divided get new keys inside
// themselves.
#include <algorithm>
#include <array>
#include <cmath>

#include "fmm/base/padding.hpp"
#include "fmm/octree/octree.hpp"

namespace farsum {
namespace {

constexpr std::size_t kGrain = 1 << 14;
constexpr int kPresortLevels = 4;  // 8^4 buckets of the first sort
constexpr std::size_t kBuckets = std::size_t{1} << (3 * kPresortLevels);
constexpr std::size_t kPresortFrom = 1 << 16;  // fewer points go straight to the sort by levels

struct Children {
  std::array<std::uint32_t, 9> begin{};
};

class Builder {
 public:
  Builder(const PointsView& points, const PowerOfTwo& scale, const Frame& frame, OctreeLimits limits, Executor& executor,
          MemoryLedger& ledger)
      : count_(points.count),
        frame_(frame),
        limits_(limits),
        executor_(executor),
        ledger_(ledger),
        scaled_(ledger, 3 * points.count),
        key_(ledger, points.count),
        key_other_(ledger, points.count),
        index_(ledger, points.count),
        index_other_(ledger, points.count) {
    copy_scaled(points, scale);
  }

  Octree build() {
    make_first_keys();
    if (count_ >= kPresortFrom) presort();
    grow_boxes();
    tree_.frame = frame_;
    tree_.count = count_;
    key_ = {};
    key_other_ = {};
    index_other_ = {};
    tree_.index = std::move(index_);
    tree_.boxes_share = LedgerShare(ledger_, tree_.boxes.capacity() * sizeof(Box));
    gather_points();
    return std::move(tree_);
  }

 private:
  /// Scaled coordinates of a point side by side: later look-ups in random order touch one cache line a point.
  void copy_scaled(const PointsView& points, const PowerOfTwo& scale) {
    executor_.for_each(count_, kGrain, [&](std::size_t begin, std::size_t end, int) {
      for (std::size_t i = begin; i < end; ++i) {
        const std::ptrdiff_t at = std::ptrdiff_t(i) * points.stride;
        scaled_[3 * i] = scale(points.x[at]);
        scaled_[3 * i + 1] = scale(points.y[at]);
        scaled_[3 * i + 2] = scale(points.z[at]);
      }
    });
  }

  double coordinate(int axis, std::uint32_t i) const noexcept { return scaled_[3 * std::size_t(i) + std::size_t(axis)]; }

  /// Key of the kKeyLevels levels below `level` for point i, which lies in the box `place` of that level.
  std::uint64_t key_below(std::uint32_t i, int level, const BoxCoordinates& place) const noexcept {
    constexpr std::int64_t kLast = (std::int64_t{1} << kKeyLevels) - 1;
    std::array<std::uint32_t, 3> part;
    for (int axis = 0; axis < 3; ++axis) {
      const std::int64_t inside = (frame_.lattice(axis, coordinate(axis, i)) >> (kMaxLevel - level - kKeyLevels)) -
                                  (place[std::size_t(axis)] << kKeyLevels);
      part[std::size_t(axis)] = std::uint32_t(std::clamp<std::int64_t>(inside, 0, kLast));
    }
    return interleave(part[0], part[1], part[2]);
  }

  std::uint64_t first_key(std::uint32_t i) const noexcept {
    const auto part = [&](int axis) { return std::uint32_t(frame_.coarse_lattice(axis, coordinate(axis, i))); };
    return interleave(part(0), part(1), part(2));
  }

  void make_first_keys() {
    executor_.for_each(count_, kGrain, [&](std::size_t begin, std::size_t end, int) {
      for (std::size_t i = begin; i < end; ++i) {
        key_[i] = first_key(std::uint32_t(i));
        index_[i] = std::uint32_t(i);
      }
    });
  }

  /// Stable counting sort of all points by the top kPresortLevels levels; bucket_begin_ keeps the bucket limits.
  void presort() {
    constexpr int kShift = 3 * (kKeyLevels - kPresortLevels);
    constexpr std::size_t kPieceSize = 1 << 16;
    const std::size_t n = count_, pieces = (n + kPieceSize - 1) / kPieceSize;
    std::vector<std::uint32_t> counts(pieces * kBuckets, 0);
    executor_.for_each(n, kPieceSize, [&](std::size_t begin, std::size_t end, int) {
      std::uint32_t* count = &counts[begin / kPieceSize * kBuckets];
      for (std::size_t i = begin; i < end; ++i) ++count[key_[i] >> kShift];
    });
    bucket_begin_.resize(kBuckets + 1);
    std::uint32_t next = 0;
    for (std::size_t bucket = 0; bucket < kBuckets; ++bucket) {
      bucket_begin_[bucket] = next;
      for (std::size_t piece = 0; piece < pieces; ++piece) next += std::exchange(counts[piece * kBuckets + bucket], next);
    }
    bucket_begin_[kBuckets] = next;
    executor_.for_each(n, kPieceSize, [&](std::size_t begin, std::size_t end, int) {
      std::uint32_t* place = &counts[begin / kPieceSize * kBuckets];
      for (std::size_t i = begin; i < end; ++i) {
        const std::uint32_t to = place[key_[i] >> kShift]++;
        key_other_[to] = key_[i];
        index_other_[to] = index_[i];
      }
    });
    std::swap(key_, key_other_);
    std::swap(index_, index_other_);
  }

  bool all_equal(const Box& box) const noexcept {
    for (std::uint32_t k = box.begin + 1; k < box.end; ++k)
      for (int axis = 0; axis < 3; ++axis)
        if (coordinate(axis, index_[k]) != coordinate(axis, index_[box.begin])) return false;
    return true;
  }

  bool to_be_divided(const Box& box) const noexcept {
    return box.count() > limits_.leaf_capacity && box.level < kMaxLevel && !all_equal(box);
  }

  /// Ranges of the eight children; sorts the box's points by octant unless the first sort did.
  Children divide(const Box& box) {
    const int depth_in_key = box.level % kKeyLevels, shift = 3 * (kKeyLevels - 1 - depth_in_key);
    if (box.level < kPresortLevels && !bucket_begin_.empty()) return presorted_children(box);
    if (depth_in_key == 0 && box.level > 0)
      for (std::uint32_t k = box.begin; k < box.end; ++k) key_[k] = key_below(index_[k], box.level, box.place);
    std::array<std::uint32_t, 8> count{};
    for (std::uint32_t k = box.begin; k < box.end; ++k) ++count[(key_[k] >> shift) & 7];
    Children children;
    children.begin[0] = box.begin;
    for (std::size_t octant = 0; octant < 8; ++octant) children.begin[octant + 1] = children.begin[octant] + count[octant];
    if (*std::max_element(count.begin(), count.end()) == box.count()) return children;
    std::array<std::uint32_t, 8> next;
    std::copy_n(children.begin.begin(), 8, next.begin());
    for (std::uint32_t k = box.begin; k < box.end; ++k) {
      const std::uint32_t to = next[(key_[k] >> shift) & 7]++;
      key_other_[to] = key_[k];
      index_other_[to] = index_[k];
    }
    std::copy(key_other_.begin() + box.begin, key_other_.begin() + box.end, key_.begin() + box.begin);
    std::copy(index_other_.begin() + box.begin, index_other_.begin() + box.end, index_.begin() + box.begin);
    return children;
  }

  Children presorted_children(const Box& box) const noexcept {
    const std::size_t prefix =
        std::size_t(interleave(std::uint32_t(box.place[0]), std::uint32_t(box.place[1]), std::uint32_t(box.place[2])));
    const int shift = 3 * (kPresortLevels - 1 - box.level);
    Children children;
    for (std::size_t octant = 0; octant <= 8; ++octant)
      children.begin[octant] = bucket_begin_[((prefix << 3) + octant) << shift];
    return children;
  }

  void grow_boxes() {
    if (count_ == 0) {
      tree_.level_begin = {0, 0};
      return;
    }
    Box root;
    root.end = std::uint32_t(count_);
    tree_.boxes.push_back(root);
    tree_.level_begin = {0, 1};
    while (grow_level()) {
    }
  }

  /// Divides the boxes of the deepest level; false if none had to be.
  bool grow_level() {
    const std::uint32_t first = tree_.level_begin[tree_.level_begin.size() - 2], last = tree_.level_begin.back();
    std::vector<Children> children(last - first);
    executor_.for_each(last - first, 8, [&](std::size_t begin, std::size_t end, int) {
      for (std::size_t b = begin; b < end; ++b) {
        const Box& box = tree_.boxes[first + b];
        if (to_be_divided(box)) children[b] = divide(box);
      }
    });
    for (std::uint32_t b = 0; b < last - first; ++b)
      if (children[b].begin[8] != children[b].begin[0]) append_children(first + b, children[b]);
    if (tree_.boxes.size() == last) return false;
    tree_.level_begin.push_back(std::uint32_t(tree_.boxes.size()));
    return true;
  }

  void append_children(std::uint32_t parent, const Children& children) {
    tree_.boxes[parent].first_child = std::uint32_t(tree_.boxes.size());
    for (std::size_t octant = 0; octant < 8; ++octant) {
      if (children.begin[octant] == children.begin[octant + 1]) continue;
      Box child;
      for (std::size_t axis = 0; axis < 3; ++axis)
        child.place[axis] = 2 * tree_.boxes[parent].place[axis] + std::int64_t((octant >> axis) & 1);
      child.begin = children.begin[octant];
      child.end = children.begin[octant + 1];
      child.parent = parent;
      child.level = std::uint8_t(tree_.boxes[parent].level + 1);
      child.octant = std::uint8_t(octant);
      tree_.boxes.push_back(child);
      ++tree_.boxes[parent].children;
    }
  }

  void gather_points() {
    const std::size_t n = count_, padded = round_up(n, kSourcePad);
    const std::array<double, 3> pad = frame_.padding_place();
    AlignedArray<double>* const arrays[3] = {&tree_.x, &tree_.y, &tree_.z};
    for (int axis = 0; axis < 3; ++axis) {
      *arrays[axis] = AlignedArray<double>(ledger_, padded);
      std::fill(arrays[axis]->begin() + n, arrays[axis]->end(), pad[std::size_t(axis)]);
    }
    executor_.for_each(n, kGrain, [&](std::size_t begin, std::size_t end, int) {
      for (std::size_t k = begin; k < end; ++k)
        for (int axis = 0; axis < 3; ++axis) (*arrays[axis])[k] = coordinate(axis, tree_.index[k]);
    });
  }

  const std::size_t count_;
  const Frame frame_;
  const OctreeLimits limits_;
  Executor& executor_;
  MemoryLedger& ledger_;
  AlignedArray<double> scaled_;
  AlignedArray<std::uint64_t> key_, key_other_;
  AlignedArray<std::uint32_t> index_, index_other_;
  std::vector<std::uint32_t> bucket_begin_;
  Octree tree_;
};

}  // namespace

std::size_t Octree::leaves() const noexcept {
  return std::size_t(std::count_if(boxes.begin(), boxes.end(), [](const Box& box) { return box.leaf(); }));
}

Octree build_octree(const PointsView& points, const PowerOfTwo& scale, const Frame& frame, OctreeLimits limits,
                    Executor& executor, MemoryLedger& ledger) {
  return Builder(points, scale, frame, limits, executor, ledger).build();
}

AlignedArray<double> gather_charges(const ChargesView& charges, const PowerOfTwo& scale, const Octree& tree, Executor& executor,
                                    MemoryLedger& ledger) {
  AlignedArray<double> values(ledger, round_up(tree.count, kSourcePad));
  std::fill(values.begin() + tree.count, values.end(), 0.0);
  executor.for_each(tree.count, kGrain, [&](std::size_t begin, std::size_t end, int) {
    for (std::size_t k = begin; k < end; ++k) values[k] = scale(charges.q[std::ptrdiff_t(tree.index[k]) * charges.stride]);
  });
  return values;
}

}  // namespace farsum
