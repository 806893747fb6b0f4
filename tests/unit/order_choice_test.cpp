#include "fmm/expansion/order_choice.hpp"

#include <gtest/gtest.h>

#include "fmm/expansion/translation.hpp"

namespace farsum {
namespace {

/// Order for a wanted reduction of the field error by 2^-octaves in boxes of side one; the potential asks for nothing.
int order_for(const OrderChoice& choice, int squared, double octaves, double spread = 0) {
  return choice.order(squared, 0, {-1000, octaves, 1000, 0, spread});
}

TEST(OrderChoice, MoreAccuracyNeverLowersTheOrder) {
  const OrderChoice choice;
  for (int squared : {4, 5, 9, 27})
    for (double octaves = -10; octaves < 80; octaves += 0.5)
      EXPECT_LE(order_for(choice, squared, octaves), order_for(choice, squared, octaves + 0.5)) << squared << ", " << octaves;
}

TEST(OrderChoice, StaysBetweenTheLimits) {
  const OrderChoice choice;
  EXPECT_EQ(order_for(choice, 9, -500), kMinOrder);
  EXPECT_EQ(order_for(choice, 4, 500), kMaxOrder);
  EXPECT_EQ(choice.order(9, 0, {0, 0, 1e30, 1e30, 0}), kMinOrder);
}

TEST(OrderChoice, NearerBoxesNeedMore) {
  const OrderChoice choice;
  EXPECT_GT(order_for(choice, 4, 20), order_for(choice, 9, 20));
  EXPECT_GT(order_for(choice, 9, 20), order_for(choice, 27, 20));
}

TEST(OrderChoice, PointsCrowdedInCornersNeedMore) {
  const OrderChoice choice;
  EXPECT_GT(order_for(choice, 9, 20, 0.4), order_for(choice, 9, 20, 0));
}

TEST(OrderChoice, TheMoreDemandingOutputDecides) {
  const OrderChoice choice;
  const int field = order_for(choice, 9, 30);
  EXPECT_EQ(choice.order(9, 0, {5, 30, 0, 0, 0}), field);
  EXPECT_GT(choice.order(9, 0, {60, 30, 0, 0, 0}), field);
}

TEST(OrderChoice, SmallerBoxesErrMoreWithTheSameCharges) {
  const OrderChoice choice;
  EXPECT_GT(choice.order(9, -10, {10, 10, 0, 0, 0}), choice.order(9, 0, {10, 10, 0, 0, 0}));
}

TEST(OrderChoice, HasAnOrderForEveryFarOffset) {
  const OrderChoice choice;
  for (int index = 0; index < kOffsets; ++index)
    if (const BoxOffset o = offset_of(index); !o.near()) {
      EXPECT_GE(order_for(choice, o.squared(), 15), kMinOrder);
    }
}

}  // namespace
}  // namespace farsum
