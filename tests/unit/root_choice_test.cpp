#include "fmm/octree/root_choice.hpp"

#include <gtest/gtest.h>

#include <algorithm>
#include <cmath>

namespace farsum {
namespace {

Bounds box(double a, double b, double c) {
  return {{0.1, -0.2, 0.3}, {0.1 + a, -0.2 + b, 0.3 + c}, false};
}

/// True if the cube of the frame holds the bounds.
bool holds(const Frame& frame, const Bounds& bounds) {
  for (std::size_t axis = 0; axis < 3; ++axis)
    if (bounds.low[axis] < frame.corner()[axis] || bounds.high[axis] > frame.corner()[axis] + frame.side()) return false;
  return true;
}

TEST(ChooseFrame, HoldsTheBounds) {
  for (std::size_t n : {2u, 1000u, 54321u, 1000000u})
    for (const Bounds& bounds : {box(1, 1, 1), box(0.6, 0.1, 0.001), box(0, 0.7, 0), box(0.5, 0, 1)})
      EXPECT_TRUE(holds(choose_frame(bounds, n, 60), bounds)) << n;
}

TEST(ChooseFrame, SideStaysWithinTwoOctaveSteps) {
  for (std::size_t n = 10; n < 10000000; n = n * 3 / 2) {
    const double side = choose_frame(box(1, 0.8, 0.9), n, 60).side();
    EXPECT_GE(side, 1.0);
    EXPECT_LE(side, 2.5);
  }
}

TEST(ChooseFrame, BoxesOfSomeLevelOfAUniformCubeHoldTheFill) {
  for (std::size_t n : {10000u, 33333u, 200000u, 1000000u}) {
    const Frame frame = choose_frame(box(1, 1, 1), n, 60);
    double nearest = 1e300;
    for (int level = 0; level < 20; ++level)
      nearest = std::min(nearest, std::abs(std::log(double(n) * std::pow(frame.box_side(level), 3) / 60)));
    EXPECT_LT(nearest, 0.05) << n;
  }
}

TEST(ChooseFrame, OfOnePlaceIsAUnitCubeAroundIt) {
  const Frame frame = choose_frame(box(0, 0, 0), 5, 60);
  EXPECT_EQ(frame.side(), 1.0);
  EXPECT_TRUE(holds(frame, box(0, 0, 0)));
}

}  // namespace
}  // namespace farsum
