#include <gtest/gtest.h>

#include <algorithm>
#include <cmath>
#include <string>
#include <vector>

#include "fmm/base/padding.hpp"
#include "tests/unit/tree_case.hpp"

namespace farsum {
namespace {

using reference::Charges;
using reference::Shape;
using reference::Signs;
using unit::Setting;
using unit::tree_of;

/// First broken rule of the structure, or nothing: ranges, parents, children, levels, capacity, permutation.
std::string broken_rule(const Octree& tree, std::uint32_t capacity) {
  std::vector<int> in_leaf(tree.count, 0), named(tree.count, 0);
  for (std::size_t k = 0; k < tree.count; ++k) ++named.at(tree.index[k]);
  for (std::uint32_t b = 0; b < tree.boxes.size(); ++b) {
    const Box& box = tree.boxes[b];
    if (box.begin >= box.end) return "an empty box";
    if (b < tree.level_begin.at(box.level) || b >= tree.level_begin.at(box.level + 1u)) return "a box outside its level";
    if (box.leaf()) {
      for (std::uint32_t k = box.begin; k < box.end; ++k) ++in_leaf.at(k);
      continue;
    }
    if (box.count() <= capacity) return "a divided box within capacity";
    std::uint32_t next = box.begin;
    int octant = -1;
    for (std::uint32_t c = box.first_child; c < box.first_child + box.children; ++c) {
      const Box& child = tree.boxes.at(c);
      if (child.parent != b || child.level != box.level + 1 || child.octant <= octant || child.begin != next)
        return "a wrong child";
      for (std::size_t axis = 0; axis < 3; ++axis)
        if (child.place[axis] != 2 * box.place[axis] + ((child.octant >> axis) & 1)) return "a child outside its parent";
      octant = child.octant;
      next = child.end;
    }
    if (next != box.end) return "children that miss points";
  }
  if (std::any_of(in_leaf.begin(), in_leaf.end(), [](int n) { return n != 1; })) return "a point not in exactly one leaf";
  if (std::any_of(named.begin(), named.end(), [](int n) { return n != 1; })) return "an index not named exactly once";
  return {};
}

/// Largest distance of a point from the centre of its leaf along an axis, in half sides.
double worst_place(const Octree& tree) {
  double worst = 0;
  for (const Box& box : tree.boxes) {
    const auto centre = tree.frame.centre(box.place, box.level);
    const double half = tree.frame.box_side(box.level) / 2;
    for (std::uint32_t k = box.begin; k < box.end; ++k) {
      const double at[3] = {tree.x[k], tree.y[k], tree.z[k]};
      for (std::size_t axis = 0; axis < 3; ++axis)
        worst = std::max(worst, std::abs((at[axis] - centre[axis].high) - centre[axis].low) / half);
    }
  }
  return worst;
}

TEST(Octree, IsSoundForEveryShape) {
  for (Shape shape : reference::all_shapes())
    for (std::uint32_t capacity : {1u, 10u, 200u}) {
      const Octree tree = tree_of(make_scene(shape, Signs::one, 1500, 3), capacity);
      EXPECT_EQ(broken_rule(tree, capacity), "") << reference::name_of(shape) << ", " << capacity;
    }
}

TEST(Octree, PointsLieInTheirBoxes) {
  for (Shape shape : reference::all_shapes())
    EXPECT_LE(worst_place(tree_of(make_scene(shape, Signs::one, 1500, 4), 8)), 1 + 1e-9) << reference::name_of(shape);
}

TEST(Octree, HoldsScaledCoordinatesInItsOrder) {
  Charges charges = make_scene(Shape::gaussian, Signs::random, 777, 1);
  for (double& x : charges.x) x *= 1024;
  const Setting setting({&charges});
  const Octree tree = tree_of(charges, setting, 20);
  for (std::size_t k = 0; k < tree.count; ++k) {
    EXPECT_EQ(tree.x[k], setting.scale(charges.x[tree.index[k]]));
    EXPECT_EQ(tree.z[k], setting.scale(charges.z[tree.index[k]]));
  }
  for (std::size_t k = tree.count; k < tree.x.size(); ++k) EXPECT_EQ(tree.y[k], setting.frame.padding_place()[1]);
}

TEST(Octree, OfNoPointsHasNoBoxes) {
  const Octree tree = tree_of(Charges{}, 10);
  EXPECT_TRUE(tree.boxes.empty());
  EXPECT_EQ(tree.count, 0u);
  EXPECT_EQ(tree.depth(), 0);
  EXPECT_EQ(tree.leaves(), 0u);
}

TEST(Octree, OfOnePointIsALeaf) {
  Charges one;
  one.add({5, -3, 1e7});
  const Octree tree = tree_of(one, 1);
  ASSERT_EQ(tree.boxes.size(), 1u);
  EXPECT_TRUE(tree.boxes[0].leaf());
  EXPECT_EQ(tree.x.size() % kSourcePad, 0u);
}

TEST(Octree, EqualPointsStayInOneLeaf) {
  Charges same;
  for (int i = 0; i < 500; ++i) same.add({0.1, 0.2, 0.3});
  EXPECT_EQ(tree_of(same, 8).boxes.size(), 1u);
}

TEST(Octree, DuplicatesShareALeaf) {
  Charges charges = make_scene(Shape::cube, Signs::one, 300, 2);
  for (std::size_t i = 0; i < 300; i += 3) charges.add(charges.place(i));
  const Octree tree = tree_of(charges, 1);
  EXPECT_EQ(broken_rule(tree, 1), "");
  for (const Box& box : tree.boxes) {
    if (!box.leaf()) continue;
    for (std::uint32_t k = box.begin; k < box.end; ++k) EXPECT_EQ(tree.x[k], tree.x[box.begin]);
  }
}

TEST(Octree, ReachesMoreThanFiftyLevelsForAClosePair) {
  Charges charges = make_scene(Shape::cube, Signs::one, 100, 2);
  charges.add({0, 0, 0});
  charges.add({0x1p-55, 0, 0});
  charges.add({1, 1, 1});
  const Octree tree = tree_of(charges, 1);
  EXPECT_GE(tree.depth(), 50);
  EXPECT_EQ(broken_rule(tree, 1), "");
}

TEST(Octree, EveryDepthBeyondAKeyIsSound) {
  Charges charges;
  charges.add({1, 1, 1});
  for (int exponent = 0; exponent <= 56; ++exponent)
    for (int i = 0; i < 3; ++i)
      charges.add({std::ldexp(1.0 + i, -exponent - 2), std::ldexp(1.5, -exponent - 2), std::ldexp(i, -exponent - 3)});
  charges.add({0, 0, 0});
  const Octree tree = tree_of(charges, 1);
  EXPECT_EQ(broken_rule(tree, 1), "");
  EXPECT_LE(worst_place(tree), 1 + 1e-9);
  EXPECT_GE(tree.depth(), 55);
}

/// The order of the points by plain recursion over the lattice coordinates: octants in order, the caller's order inside a leaf.
void recurse(const Octree& tree, const Charges& charges, const Setting& setting, std::vector<std::uint32_t> points, int level,
             std::uint32_t capacity, std::vector<std::uint32_t>& order) {
  if (points.size() <= capacity || level == kMaxLevel) {
    order.insert(order.end(), points.begin(), points.end());
    return;
  }
  std::vector<std::uint32_t> child[8];
  for (std::uint32_t i : points) {
    const double at[3] = {charges.x[i], charges.y[i], charges.z[i]};
    std::size_t octant = 0;
    for (int axis = 0; axis < 3; ++axis)
      octant |= std::size_t(tree.frame.lattice(axis, setting.scale(at[axis])) >> (kMaxLevel - 1 - level) & 1) << axis;
    child[octant].push_back(i);
  }
  for (std::vector<std::uint32_t>& part : child)
    if (!part.empty()) recurse(tree, charges, setting, std::move(part), level + 1, capacity, order);
}

void expect_recursive_order(const Charges& charges, std::uint32_t capacity) {
  const Setting setting({&charges});
  const Octree tree = tree_of(charges, setting, capacity);
  std::vector<std::uint32_t> all(charges.size()), order;
  for (std::uint32_t i = 0; i < all.size(); ++i) all[i] = i;
  recurse(tree, charges, setting, all, 0, capacity, order);
  EXPECT_TRUE(std::equal(order.begin(), order.end(), tree.index.begin(), tree.index.end()));
  EXPECT_EQ(broken_rule(tree, capacity), "");
}

TEST(Octree, OrderOfFewPointsIsThatOfTheRecursion) {
  for (Shape shape : {Shape::cube, Shape::droplets, Shape::line, Shape::scales_1e9, Shape::box_faces})
    expect_recursive_order(make_scene(shape, Signs::one, 3000, 8), 5);
}

TEST(Octree, OrderAfterTheFirstSortOfManyPointsIsThatOfTheRecursion) {
  for (Shape shape : {Shape::cube, Shape::droplets, Shape::plane})
    expect_recursive_order(make_scene(shape, Signs::one, 70000, 9), 60);
}

TEST(Octree, IsSoundAroundTheSizeOfTheFirstSort) {
  for (std::size_t n : {65535u, 65536u, 65537u, 131072u})
    EXPECT_EQ(broken_rule(tree_of(make_scene(Shape::cube, Signs::one, n, 9), 100, 2), 100), "") << n;
}

TEST(Octree, ManyEqualPointsOutnumberTheFirstSort) {
  Charges same;
  for (int i = 0; i < 70000; ++i) same.add({0.1, 0.2, 0.3});
  EXPECT_EQ(tree_of(same, 8).boxes.size(), 1u);
  same.add({0.4, 0.2, 0.3});
  const Octree tree = tree_of(same, 8);
  EXPECT_EQ(broken_rule(tree, 8), "");
  EXPECT_LE(tree.leaves(), 2u);
}

bool same_trees(const Octree& a, const Octree& b) {
  const auto equal_boxes = [](const Box& x, const Box& y) {
    return x.place == y.place && x.begin == y.begin && x.end == y.end && x.parent == y.parent &&
           x.first_child == y.first_child && x.children == y.children && x.level == y.level && x.octant == y.octant;
  };
  return std::equal(a.boxes.begin(), a.boxes.end(), b.boxes.begin(), b.boxes.end(), equal_boxes) &&
         a.level_begin == b.level_begin && std::equal(a.index.begin(), a.index.end(), b.index.begin(), b.index.end()) &&
         std::equal(a.x.begin(), a.x.end(), b.x.begin(), b.x.end());
}

TEST(Octree, IsTheSameFromAnyNumberOfThreads) {
  for (std::size_t n : {5000u, 80000u}) {
    const Charges charges = make_scene(Shape::droplets, Signs::one, n, 12);
    const Octree one = tree_of(charges, 30, 1);
    for (int threads : {2, 3}) EXPECT_TRUE(same_trees(one, tree_of(charges, 30, threads))) << n << ", " << threads;
  }
}

TEST(Octree, OfOtherPointsIsNotTheSame) {
  EXPECT_FALSE(same_trees(tree_of(make_scene(Shape::cube, Signs::one, 500, 1), 30),
                          tree_of(make_scene(Shape::cube, Signs::one, 500, 2), 30)));
}

TEST(Octree, ABrokenStructureIsNoticed) {
  Octree tree = tree_of(make_scene(Shape::cube, Signs::one, 500, 1), 30);
  std::swap(tree.index[3], tree.index[4]);
  EXPECT_EQ(broken_rule(tree, 30), "");
  tree.index[3] = tree.index[4];
  EXPECT_NE(broken_rule(tree, 30), "");
  tree = tree_of(make_scene(Shape::cube, Signs::one, 500, 1), 30);
  ++tree.boxes[3].place[1];
  EXPECT_NE(broken_rule(tree, 30), "");
}

TEST(GatherCharges, FollowsTheTreeAndPadsWithZero) {
  const Charges charges = make_scene(Shape::cube, Signs::random, 101, 1);
  const Octree tree = tree_of(charges, 10);
  Executor executor(2);
  MemoryLedger ledger;
  const AlignedArray<double> q = gather_charges(charges.values(), PowerOfTwo(3), tree, executor, ledger);
  for (std::size_t k = 0; k < 101; ++k) EXPECT_EQ(q[k], 8 * charges.q[tree.index[k]]);
  ASSERT_EQ(q.size(), 104u);
  for (std::size_t k = 101; k < 104; ++k) EXPECT_EQ(q[k], 0);
}

}  // namespace
}  // namespace farsum
