#include "fmm/octree/coincident.hpp"

#include <gtest/gtest.h>

#include "tests/unit/tree_case.hpp"

namespace farsum {
namespace {

using reference::Charges;
using reference::Shape;
using reference::Signs;
using unit::tree_of;

TEST(FindCoincident, IsEmptyForDistinctPoints) {
  Executor executor(2);
  EXPECT_FALSE(find_coincident(tree_of(make_scene(Shape::cube, Signs::one, 1000, 1), 20), executor).has_value());
  EXPECT_FALSE(find_coincident(tree_of(Charges{}, 20), executor).has_value());
}

/// 400 points and copies of every third, every copy of the first twice.
Charges with_copies() {
  Charges charges = make_scene(Shape::droplets, Signs::one, 400, 1);
  for (std::size_t i = 0; i < 400; i += 3) charges.add(charges.place(i));
  charges.add(charges.place(0));
  return charges;
}

TEST(FindCoincident, GivesEqualPointsOnePlaceAndOthersTheirOwn) {
  const Charges charges = with_copies();
  for (std::uint32_t capacity : {1u, 30u, 100000u}) {
    Executor executor(2);
    const auto places = find_coincident(tree_of(charges, capacity), executor);
    ASSERT_TRUE(places.has_value());
    EXPECT_EQ(places->first.size(), 400u);
    for (std::size_t i = 0; i < charges.size(); ++i)
      for (std::size_t j = 0; j < i; ++j)
        ASSERT_EQ(places->place_of[i] == places->place_of[j], charges.place(i) == charges.place(j)) << i << ", " << j;
  }
}

TEST(FindCoincident, TheFirstInTheCallersOrderStandsForAPlace) {
  const Charges charges = with_copies();
  Executor executor(1);
  const auto places = find_coincident(tree_of(charges, 10), executor);
  ASSERT_TRUE(places.has_value());
  for (std::size_t p = 0; p < places->first.size(); ++p) EXPECT_LT(places->first[p], 400u);
  for (std::size_t i = 0; i < charges.size(); ++i)
    EXPECT_EQ(charges.place(places->first[places->place_of[i]]), charges.place(i));
}

TEST(FindCoincident, ManyEqualPointsAreOnePlace) {
  Charges same;
  for (int i = 0; i < 20000; ++i) same.add({1, 2, 3});
  Executor executor(2);
  const auto places = find_coincident(tree_of(same, 8), executor);
  ASSERT_TRUE(places.has_value());
  EXPECT_EQ(places->first, std::vector<std::uint32_t>{0});
}

TEST(FindCoincident, ZerosOfBothSignsAreOnePlace) {
  Charges charges;
  charges.add({0.0, 1, 1});
  charges.add({-0.0, 1, 1});
  charges.add({2, 0, 0});
  Executor executor(1);
  const auto places = find_coincident(tree_of(charges, 1), executor);
  ASSERT_TRUE(places.has_value());
  EXPECT_EQ(places->place_of[0], places->place_of[1]);
}

TEST(UndividablePair, IsEmptyWhereAllLeavesAreWithinCapacity) {
  EXPECT_FALSE(undividable_pair(tree_of(make_scene(Shape::cube, Signs::one, 500, 1), 7), 7).has_value());
}

TEST(UndividablePair, NamesTwoEqualPoints) {
  Charges charges = make_scene(Shape::cube, Signs::one, 50, 1);
  for (int i = 0; i < 10; ++i) charges.add(charges.place(17));
  const auto pair = undividable_pair(tree_of(charges, 4), 4);
  ASSERT_TRUE(pair.has_value());
  EXPECT_LT(pair->first, pair->second);
  EXPECT_EQ(charges.place(pair->first), charges.place(pair->second));
}

TEST(UndividablePair, NamesTwoPointsThatTheLatticeCannotTellApart) {
  Charges charges;
  charges.add({1, 1, 1});
  charges.add({0, 0, 0});
  charges.add({0x1p-70, 0, 0});
  const auto pair = undividable_pair(tree_of(charges, 1), 1);
  ASSERT_TRUE(pair.has_value());
  EXPECT_EQ(*pair, std::pair(1u, 2u));
}

}  // namespace
}  // namespace farsum
