#include "fmm/schedule/close_pairs.hpp"

#include <gtest/gtest.h>

#include <algorithm>
#include <string>
#include <vector>

#include "fmm/error.hpp"
#include "tests/unit/tree_case.hpp"

namespace farsum {
namespace {

using reference::Charges;
using reference::Shape;
using reference::Signs;
using unit::tree_of;

/// Smallest squared distance of every point of the tree to another one, by all pairs.
std::vector<double> nearest_of_all(const Octree& tree) {
  std::vector<double> nearest(tree.count, 1e300);
  for (std::size_t i = 0; i < tree.count; ++i)
    for (std::size_t j = 0; j < tree.count; ++j) {
      const double dx = tree.x[i] - tree.x[j], dy = tree.y[i] - tree.y[j], dz = tree.z[i] - tree.z[j];
      if (i != j) nearest[i] = std::min(nearest[i], dx * dx + dy * dy + dz * dz);
    }
  return nearest;
}

TEST(ClosestPair, OfDistinctPointsIsNotTooClose) {
  const Octree tree = tree_of(make_scene(Shape::cube, Signs::one, 300, 1), 10);
  const std::vector<double> nearest = nearest_of_all(tree);
  const ClosestPair pair = closest_pair(tree, tree, nearest.data());
  EXPECT_FALSE(pair.too_close);
  EXPECT_EQ(pair.squared, *std::min_element(nearest.begin(), nearest.end()));
}

TEST(ClosestPair, NamesTheFirstOfSeveralCoincidentPairs) {
  Charges charges = make_scene(Shape::cube, Signs::one, 300, 1);
  charges.add(charges.place(40));
  charges.add(charges.place(20));
  const Octree tree = tree_of(charges, 10);
  const ClosestPair pair = closest_pair(tree, tree, nearest_of_all(tree).data());
  ASSERT_TRUE(pair.too_close);
  EXPECT_EQ(pair.squared, 0);
  EXPECT_EQ(std::minmax(pair.target, pair.source), std::minmax(20u, 301u));
}

TEST(ClosestPair, NamesAPairBelowTheRangeOfTheContract) {
  Charges charges = make_scene(Shape::cube, Signs::one, 50, 1);
  charges.add({0, 0, 0});
  charges.add({0, 0x1p-62, 0});
  const Octree tree = tree_of(charges, 10);
  const ClosestPair pair = closest_pair(tree, tree, nearest_of_all(tree).data());
  ASSERT_TRUE(pair.too_close);
  EXPECT_EQ(std::min(pair.target, pair.source), 50u);
  EXPECT_EQ(std::max(pair.target, pair.source), 51u);
}

TEST(NearestInLeaves, IsTheNearestOfTheSameLeaf) {
  const Octree whole = tree_of(make_scene(Shape::cube, Signs::one, 200, 1), 1000),
               fine = tree_of(make_scene(Shape::cube, Signs::one, 200, 1), 1);
  Executor executor(2);
  std::vector<double> nearest(200);
  nearest_in_leaves(whole, nearest.data(), executor);
  EXPECT_EQ(nearest, nearest_of_all(whole));
  nearest_in_leaves(fine, nearest.data(), executor);
  EXPECT_EQ(nearest, std::vector<double>(200, 1e300));
}

/// Code and text of what a call throws.
template <class Call>
std::pair<ErrorCode, std::string> thrown(const Call& call) {
  try {
    call();
  } catch (const Error& error) {
    return {error.code(), error.what()};
  }
  return {ErrorCode::internal, "nothing was thrown"};
}

TEST(ThrowClosePair, NamesBothChargesAndThePlace) {
  Charges charges;
  charges.add({1, 2, 3});
  charges.add({0.5, -2, 1e-9});
  charges.add({0.5, -2, 1e-9});
  const auto [code, text] = thrown([&] { throw_close_pair(charges.points(), 2, 1); });
  EXPECT_EQ(code, ErrorCode::coincident_charges);
  EXPECT_NE(text.find("charges 1 and 2"), std::string::npos) << text;
  EXPECT_NE(text.find("(0.5, -2, 1e-09)"), std::string::npos) << text;
}

TEST(ThrowClosePair, TellsNearPairsFromEqualOnes) {
  Charges charges;
  charges.add({0, 0, 0});
  charges.add({0, 0, 0x1p-80});
  EXPECT_EQ(thrown([&] { throw_close_pair(charges.points(), 0, 1); }).first, ErrorCode::range_exceeded);
}

TEST(ThrowTargetOnCharge, NamesTargetAndCharge) {
  Charges charges;
  charges.add({0, 0, 0});
  charges.add({4, 0, 0});
  const auto [code, text] = thrown([&] { throw_target_on_charge(charges.points(), 17, 1, true); });
  EXPECT_EQ(code, ErrorCode::target_on_charge);
  EXPECT_NE(text.find("target 17 and charge 1"), std::string::npos) << text;
  EXPECT_EQ(thrown([&] { throw_target_on_charge(charges.points(), 17, 1, false); }).first, ErrorCode::range_exceeded);
}

TEST(ShortNumber, IsWhatAPersonWrites) {
  EXPECT_EQ(short_number(1e-6), "1e-6");
  EXPECT_EQ(short_number(2.5e-12), "2.5e-12");
  EXPECT_EQ(short_number(0.01), "0.01");
  EXPECT_EQ(short_number(158.4), "158");
  EXPECT_EQ(short_number(0), "0");
}

}  // namespace
}  // namespace farsum
