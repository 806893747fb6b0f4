#include "fmm/traversal/interactions.hpp"

#include <gtest/gtest.h>

#include <algorithm>
#include <cstdlib>
#include <vector>

#include "tests/unit/tree_case.hpp"

namespace farsum {
namespace {

using reference::Charges;
using reference::Shape;
using reference::Signs;
using unit::Setting;
using unit::tree_of;

constexpr std::size_t kNone = ~std::size_t{0};

DirectRule rule_of(double terms) {
  DirectRule rule;
  rule.terms = terms;
  return rule;
}

/// How often each (target, source) pair is covered, and how the pairs are shared out.
struct Coverage {
  std::vector<int> marks;
  std::size_t sources = 0;
  std::size_t direct = 0, far = 0, coarse = 0, fine = 0;  ///< relations
  bool far_apart = true;                                  ///< no expansion acts between touching boxes

  bool once() const {
    return std::all_of(marks.begin(), marks.end(), [](int n) { return n == 1; });
  }
};

/// Walks all relations as the passes of the engine do; leaves out the relation of number `dropped`.
class Walk {
 public:
  Walk(const Octree& sources, const Octree& targets, double terms, int threads, std::size_t dropped = kNone)
      : sources_(sources),
        targets_(targets),
        rule_(rule_of(terms)),
        executor_(threads),
        near_(sources, targets, rule_, executor_),
        dropped_(dropped) {
    coverage_.marks.assign(targets.count * sources.count, 0);
    coverage_.sources = sources.count;
  }

  Coverage run() {
    for (std::uint32_t b = 0; b < targets_.boxes.size(); ++b) {
      const Box& box = targets_.boxes[b];
      if (b > 0)
        for_child_relations(
            sources_, near_.begin(box.parent), near_.end(box.parent), box, rule_, [](const ListEntry&) {},
            [&](std::uint32_t s, std::uint32_t) { expansion(box, s, coverage_.far); },
            [&](std::uint32_t s, std::uint32_t) { expansion(box, s, coverage_.coarse); });
      if (box.leaf())
        for_leaf_relations(
            sources_, near_.begin(b), near_.end(b), box, rule_,
            [&](std::uint32_t s, std::uint32_t) { mark(box, s, coverage_.direct); },
            [&](std::uint32_t s, std::uint32_t) { expansion(box, s, coverage_.fine); });
    }
    return coverage_;
  }

 private:
  void expansion(const Box& target, std::uint32_t s, std::size_t& relations) {
    if (touching(target, sources_.boxes[s])) coverage_.far_apart = false;
    mark(target, s, relations);
  }
  void mark(const Box& target, std::uint32_t s, std::size_t& relations) {
    ++relations;
    if (relation_++ == dropped_) return;
    const Box& source = sources_.boxes[s];
    for (std::size_t i = target.begin; i < target.end; ++i)
      for (std::size_t j = source.begin; j < source.end; ++j) ++coverage_.marks[i * sources_.count + j];
  }

  const Octree &sources_, &targets_;
  const DirectRule rule_;
  Executor executor_;
  const NearLists near_;
  const std::size_t dropped_;
  std::size_t relation_ = 0;
  Coverage coverage_;
};

TEST(Interactions, CoverEveryPairOfOneTreeOnce) {
  for (Shape shape :
       {Shape::cube, Shape::droplets, Shape::line, Shape::far_pair, Shape::scales_1e9, Shape::shell, Shape::box_faces})
    for (double terms : {0.0, 3.0, 1e9}) {
      const Octree tree = tree_of(make_scene(shape, Signs::one, 600, 2), 4);
      const Coverage coverage = Walk(tree, tree, terms, 1).run();
      EXPECT_TRUE(coverage.once()) << reference::name_of(shape) << ", " << terms;
      EXPECT_TRUE(coverage.far_apart) << reference::name_of(shape) << ", " << terms;
    }
}

TEST(Interactions, CoverEveryPairOfTwoTreesOnce) {
  for (Shape of_sources : {Shape::cube, Shape::line, Shape::far_pair, Shape::droplets})
    for (Shape of_targets : {Shape::plane, Shape::scales_1e9, Shape::cube, Shape::outlier})
      for (double terms : {0.0, 5.0}) {
        const Charges a = make_scene(of_sources, Signs::one, 500, 2), b = make_scene(of_targets, Signs::one, 300, 3);
        const Setting setting({&a, &b});
        const Octree sources = tree_of(a, setting, 4), targets = tree_of(b, setting, 7);
        const Coverage coverage = Walk(sources, targets, terms, 1).run();
        EXPECT_TRUE(coverage.once()) << reference::name_of(of_sources) << " on " << reference::name_of(of_targets);
        EXPECT_TRUE(coverage.far_apart) << reference::name_of(of_sources) << " on " << reference::name_of(of_targets);
      }
}

TEST(Interactions, CoverOneTargetAmongManySources) {
  const Charges a = make_scene(Shape::cube, Signs::one, 900, 2);
  Charges one;
  one.add({0.3, 0.3, 0.9});
  const Setting setting({&a, &one});
  const Coverage coverage = Walk(tree_of(a, setting, 4), tree_of(one, setting, 4), 0, 1).run();
  EXPECT_TRUE(coverage.once());
  EXPECT_EQ(coverage.fine + coverage.far, 0u);  // the only target box is the root, and every source lies in it
}

TEST(Interactions, CoverManyTargetsOfOneSource) {
  const Charges a = make_scene(Shape::cube, Signs::one, 900, 2);
  Charges one;
  one.add({0.3, 0.3, 0.9});
  const Setting setting({&a, &one});
  const Coverage coverage = Walk(tree_of(one, setting, 4), tree_of(a, setting, 4), 0, 1).run();
  EXPECT_TRUE(coverage.once());
  EXPECT_EQ(coverage.coarse + coverage.far, 0u);
}

TEST(Interactions, UseAllFourKindsOnClusteredCharges) {
  const Octree tree = tree_of(make_scene(Shape::droplets, Signs::one, 1200, 5), 4);
  const Coverage coverage = Walk(tree, tree, 0, 1).run();
  EXPECT_TRUE(coverage.once());
  for (std::size_t relations : {coverage.direct, coverage.far, coverage.coarse, coverage.fine}) EXPECT_GT(relations, 0u);
}

TEST(Interactions, ARuleThatSumsAllSmallLeavesKeepsOnlyFarBoxesAndPairs) {
  const Octree tree = tree_of(make_scene(Shape::droplets, Signs::one, 800, 5), 4);
  const Coverage coverage = Walk(tree, tree, 1e9, 1).run();
  EXPECT_TRUE(coverage.once());
  EXPECT_EQ(coverage.coarse + coverage.fine, 0u);
}

TEST(Interactions, ARelationLeftOutIsNoticed) {
  const Octree tree = tree_of(make_scene(Shape::droplets, Signs::one, 300, 5), 4);
  const Coverage whole = Walk(tree, tree, 0, 1).run();
  const std::size_t relations = whole.direct + whole.far + whole.coarse + whole.fine;
  for (std::size_t dropped = 0; dropped < relations; dropped += relations / 7)
    EXPECT_FALSE(Walk(tree, tree, 0, 1, dropped).run().once());
}

TEST(Interactions, FarBoxesAreWithinTheReachOfTheTranslationTables) {
  const Octree tree = tree_of(make_scene(Shape::scales_1e9, Signs::one, 1000, 5), 5);
  Executor executor(1);
  const DirectRule rule = rule_of(0);
  const NearLists near(tree, tree, rule, executor);
  for (std::uint32_t b = 1; b < tree.boxes.size(); ++b) {
    const Box& box = tree.boxes[b];
    for_child_relations(
        tree, near.begin(box.parent), near.end(box.parent), box, rule, [](const ListEntry&) {},
        [&](std::uint32_t s, std::uint32_t) {
          ASSERT_EQ(tree.boxes[s].level, box.level);
          for (std::size_t axis = 0; axis < 3; ++axis) ASSERT_LE(std::abs(tree.boxes[s].place[axis] - box.place[axis]), 3);
        },
        [](std::uint32_t, std::uint32_t) {});
  }
}

TEST(Interactions, ListsAreTheSameFromAnyNumberOfThreads) {
  const Octree tree = tree_of(make_scene(Shape::droplets, Signs::one, 20000, 5), 6);
  Executor one(1), many(3);
  const NearLists a(tree, tree, rule_of(8), one), b(tree, tree, rule_of(8), many);
  const auto equal = [](const ListEntry& x, const ListEntry& y) {
    return x.box == y.box && x.shift == y.shift && x.direct == y.direct;
  };
  for (std::size_t box = 0; box < tree.boxes.size(); ++box)
    ASSERT_TRUE(std::equal(a.begin(box), a.end(box), b.begin(box), b.end(box), equal)) << box;
}

TEST(Interactions, WithoutSourcesAreEmpty) {
  const Octree nothing = tree_of(Charges{}, 4), tree = tree_of(make_scene(Shape::cube, Signs::one, 100, 5), 4);
  Executor executor(1);
  const NearLists none(nothing, tree, rule_of(0), executor);
  for (std::size_t box = 0; box < tree.boxes.size(); ++box) EXPECT_EQ(none.begin(box), none.end(box));
}

TEST(Touching, ComparesBoxesOfAnyLevels) {
  Box a, b;
  a.level = 2;
  a.place = {1, 1, 1};
  b.level = 4;
  b.place = {8, 4, 4};
  EXPECT_TRUE(touching(a, b));  // shares a face: the coarse box covers 4..7
  EXPECT_TRUE(touching(b, a));
  b.place = {9, 4, 4};
  EXPECT_FALSE(touching(a, b));
  b.place = {3, 3, 3};  // a corner
  EXPECT_TRUE(touching(a, b));
  b.place = {5, 6, 7};  // inside
  EXPECT_TRUE(touching(a, b));
}

TEST(Touching, HoldsAtTheDeepestLevel) {
  Box a, b;
  b.level = 60;
  b.place = {(std::int64_t{1} << 60) - 1, 0, 0};
  EXPECT_TRUE(touching(a, b));
  a.level = 1;
  EXPECT_FALSE(touching(a, b));
  a.place = {1, 0, 0};
  EXPECT_TRUE(touching(a, b));
}

}  // namespace
}  // namespace farsum
