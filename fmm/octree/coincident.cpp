#include "fmm/octree/coincident.hpp"

#include <algorithm>
#include <numeric>
#include <tuple>

namespace farsum {
namespace {

auto coordinates(const Octree& tree, std::uint32_t k) {
  return std::tuple(tree.x[k], tree.y[k], tree.z[k]);
}

/// partner[k] = the tree place of the first point (in the caller's order) that equals point k.
void pair_up_leaf(const Octree& tree, const Box& leaf, std::uint32_t* partner) {
  std::vector<std::uint32_t> order(leaf.count());
  std::iota(order.begin(), order.end(), leaf.begin);
  std::sort(order.begin(), order.end(), [&](std::uint32_t a, std::uint32_t b) {
    const auto at_a = coordinates(tree, a), at_b = coordinates(tree, b);
    return at_a != at_b ? at_a < at_b : tree.index[a] < tree.index[b];
  });
  for (std::size_t i = 0; i < order.size(); ++i) {
    const bool same = i > 0 && coordinates(tree, order[i]) == coordinates(tree, order[i - 1]);
    partner[order[i]] = same ? partner[order[i - 1]] : order[i];
  }
}

}  // namespace

std::optional<DistinctPlaces> find_coincident(const Octree& tree, Executor& executor) {
  std::vector<std::uint32_t> partner(tree.count);
  executor.for_each(tree.boxes.size(), 64, [&](std::size_t begin, std::size_t end, int) {
    for (std::size_t b = begin; b < end; ++b)
      if (tree.boxes[b].leaf()) pair_up_leaf(tree, tree.boxes[b], partner.data());
  });
  DistinctPlaces places;
  places.place_of.resize(tree.count);
  for (std::uint32_t k = 0; k < tree.count; ++k)
    if (partner[k] == k) {
      places.place_of[tree.index[k]] = std::uint32_t(places.first.size());
      places.first.push_back(tree.index[k]);
    }
  if (places.first.size() == tree.count) return std::nullopt;
  for (std::uint32_t k = 0; k < tree.count; ++k) places.place_of[tree.index[k]] = places.place_of[tree.index[partner[k]]];
  return places;
}

std::optional<std::pair<std::uint32_t, std::uint32_t>> undividable_pair(const Octree& tree, std::uint32_t capacity) {
  for (const Box& box : tree.boxes) {
    if (!box.leaf() || box.count() <= capacity) continue;
    std::uint32_t second = box.begin + 1;
    while (second + 1 < box.end && coordinates(tree, second) != coordinates(tree, box.begin)) ++second;
    const std::uint32_t a = tree.index[box.begin], b = tree.index[second];
    return std::pair(std::min(a, b), std::max(a, b));
  }
  return std::nullopt;
}

}  // namespace farsum
