#include "fmm/domain/scaling.hpp"

#include <gtest/gtest.h>

#include <cmath>
#include <limits>
#include <string>
#include <vector>

#include "fmm/error.hpp"
#include "tests/reference/random.hpp"

namespace farsum {
namespace {

constexpr double kInfinity = std::numeric_limits<double>::infinity();
constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();

TEST(PowerOfTwo, MultipliesExactly) {
  reference::Random random(1);
  for (int exponent : {-1500, -1023, -600, -53, -1, 0, 1, 52, 600, 1023, 1500}) {
    const PowerOfTwo scale(exponent);
    for (int i = 0; i < 100; ++i) {
      const double value = std::ldexp(random.uniform(-1, 1), -exponent);
      if (std::abs(value) < 1e-290 || !std::isfinite(value)) continue;
      EXPECT_EQ(scale(value), std::ldexp(value, exponent)) << exponent;
    }
  }
}

TEST(PowerOfTwo, ReachesBeyondTheRangeOfOneFactor) {
  EXPECT_EQ(PowerOfTwo(2000)(0x1.8p-1000), 0x1.8p1000);
  EXPECT_EQ(PowerOfTwo(-2000)(0x1.8p1000), 0x1.8p-1000);
  EXPECT_EQ(PowerOfTwo(-1201)(0x1.4p701), 0x1.4p-500);
}

TEST(PowerOfTwo, KeepsZeroAndSigns) {
  EXPECT_EQ(PowerOfTwo(900)(0.0), 0.0);
  EXPECT_EQ(PowerOfTwo(3)(-1.25), -10.0);
}

TEST(PowerOfTwo, OverflowIsInfinityNotGarbage) {
  EXPECT_EQ(PowerOfTwo(1024)(1.0), kInfinity);
}

TEST(BinaryExponent, BracketsTheValue) {
  EXPECT_EQ(binary_exponent(1.0), 1);
  EXPECT_EQ(binary_exponent(0.75), 0);
  EXPECT_EQ(binary_exponent(0x1p-1074), -1073);
  EXPECT_EQ(binary_exponent(std::numeric_limits<double>::max()), 1024);
  EXPECT_EQ(binary_exponent(0.0), 0);
}

TEST(Bounds, JoinIgnoresEmptyOnes) {
  Bounds box;
  box.join(Bounds{});
  EXPECT_TRUE(box.empty);
  EXPECT_EQ(box.extent(), 0.0);
  box.join(Bounds{{1, 2, 3}, {4, 2, 3}, false});
  box.join(Bounds{});
  EXPECT_EQ(box.extent(), 3.0);
  EXPECT_EQ(box.low[0], 1.0);
}

TEST(CheckedBounds, EqualsTheExtremesOverManyPieces) {
  Executor executor(2);
  reference::Random random(2);
  std::vector<double> xyz(3 * 100000);
  for (double& value : xyz) value = random.normal();
  xyz[3 * 77777 + 1] = -50;
  xyz[3 * 99999 + 2] = 60;
  const Bounds box = checked_bounds({&xyz[0], &xyz[1], &xyz[2], 100000, 3}, "position", executor);
  EXPECT_EQ(box.low[1], -50.0);
  EXPECT_EQ(box.high[2], 60.0);
  EXPECT_LT(box.high[0], 10.0);
  EXPECT_FALSE(box.empty);
}

TEST(CheckedBounds, OfNoPointsAreEmpty) {
  Executor executor(1);
  EXPECT_TRUE(checked_bounds({}, "position", executor).empty);
}

/// Message of the error that a bad coordinate causes; empty if none was thrown.
std::string refusal(std::size_t index, std::size_t axis, double value, std::size_t second_bad = 99999) {
  Executor executor(2);
  std::vector<double> xyz(3 * 100000, 0.5);
  xyz[3 * index + axis] = value;
  xyz[3 * second_bad] = kNaN;
  try {
    checked_bounds({&xyz[0], &xyz[1], &xyz[2], 100000, 3}, "target", executor);
  } catch (const Error& error) {
    EXPECT_EQ(error.code(), ErrorCode::not_finite);
    return error.what();
  }
  return {};
}

TEST(CheckedBounds, NameTheFirstBadIndexAndComponent) {
  EXPECT_NE(refusal(40000, 1, kNaN).find("target 40000 has y = NaN"), std::string::npos);
  EXPECT_NE(refusal(0, 2, -kInfinity).find("target 0 has z = -infinity"), std::string::npos);
  EXPECT_NE(refusal(70000, 0, kInfinity).find("target 70000 has x = +infinity"), std::string::npos);
}

TEST(CheckedBounds, TheLaterAxisMayHoldTheEarlierIndex) {
  EXPECT_NE(refusal(31, 2, kNaN, 32).find("target 31 has z = NaN"), std::string::npos);
}

TEST(CheckedBounds, HugeFiniteCoordinatesPass) {
  Executor executor(1);
  const std::vector<double> x{-1e308, 1e308};
  EXPECT_EQ(checked_bounds({x.data(), x.data(), x.data(), 2, 1}, "position", executor).high[0], 1e308);
}

TEST(ChargeSums, FollowTheStride) {
  Executor executor(1);
  const std::vector<double> rows{1, 9, -3, 9, 2, 9};
  const ChargeSums sums = checked_charge_sums({rows.data(), 3, 2}, executor);
  EXPECT_EQ(sums.max_abs, 3.0);
  EXPECT_EQ(sums.sum, 0.0);
  EXPECT_DOUBLE_EQ(sums.sum_squares, 14.0 / 9);
}

TEST(ChargeSums, SquaresOfTinyAndHugeChargesNeitherVanishNorOverflow) {
  Executor executor(1);
  for (double unit : {1e-300, 1e300}) {
    const std::vector<double> q{unit, -unit, unit / 2};
    EXPECT_DOUBLE_EQ(checked_charge_sums({q.data(), 3, 1}, executor).sum_squares, 2.25) << unit;
  }
}

TEST(ChargeSums, NameTheFirstBadIndex) {
  Executor executor(2);
  std::vector<double> q(100000, 1.0);
  q[65000] = kNaN;
  q[90000] = kInfinity;
  try {
    checked_charge_sums({q.data(), q.size(), 1}, executor);
    FAIL();
  } catch (const Error& error) {
    EXPECT_EQ(error.code(), ErrorCode::not_finite);
    EXPECT_NE(std::string(error.what()).find("charge 65000 has value = NaN"), std::string::npos) << error.what();
  }
}

TEST(ChargeSums, AllZeroIsLegal) {
  Executor executor(1);
  const std::vector<double> q(5, 0.0);
  EXPECT_EQ(checked_charge_sums({q.data(), 5, 1}, executor).sum_squares, 0.0);
}

}  // namespace
}  // namespace farsum
