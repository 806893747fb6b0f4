#include "fmm/expansion/rotation.hpp"

#include <gtest/gtest.h>

#include <algorithm>
#include <cmath>

#include "tests/unit/harmonics.hpp"

namespace farsum {
namespace {

/// Largest entry of D_n D_n^T - 1.
long double defect(const AxisTurn& turn, int n) {
  long double worst = 0;
  for (int a = -n; a <= n; ++a)
    for (int b = -n; b <= a; ++b) {
      long double sum = a == b ? -1 : 0;
      for (int k = -n; k <= n; ++k) sum += turn.entry(n, a, k) * turn.entry(n, b, k);
      worst = std::max(worst, std::abs(sum));
    }
  return worst;
}

TEST(AxisTurn, IsOrthogonalUpToTheHighestDegree) {
  for (long double angle :
       {0.0L, 0.3L, 0.9553166181245092781639L, 1.5707963267948966192313L, 2.7L, 3.1415926535897932384626L}) {
    const AxisTurn turn(48, std::cos(angle), std::sin(angle));
    for (int n : {1, 2, 10, 20}) EXPECT_LE(defect(turn, n), 2e-18L * n) << n << ", " << angle;
    for (int n : {30, 48})
      EXPECT_LE(defect(turn, n), 2e-15L) << n << ", " << angle;  // the recursion loses digits with the degree
  }
}

TEST(AxisTurn, RotatesHarmonicsAsItRotatesPoints) {
  const long double cosine = 0.6L, sine = 0.8L;
  const AxisTurn turn(24, cosine, sine);
  const unit::Vector v{0.48L, -0.6L, 0.64L}, image{cosine * v[0] - sine * v[2], v[1], sine * v[0] + cosine * v[2]};
  for (int n = 0; n <= 24; ++n)
    for (int row = -n; row <= n; ++row) {
      long double sum = 0;
      for (int k = -n; k <= n; ++k) sum += turn.entry(n, row, k) * unit::regular(n, k, v);
      ASSERT_NEAR(double(sum - unit::regular(n, row, image)), 0, 1e-16) << n << ", " << row;
    }
}

TEST(AxisTurn, TakesItsDirectionToTheZAxis) {
  const AxisTurn turn(6, 0.6L, 0.8L);
  const unit::Vector direction{0.8L, 0, 0.6L};
  for (int n = 0; n <= 6; ++n)
    for (int row = -n; row <= n; ++row) {
      long double sum = 0;
      for (int k = -n; k <= n; ++k) sum += turn.entry(n, row, k) * unit::regular(n, k, direction);
      EXPECT_NEAR(double(sum), row == 0 ? 1 : 0, 1e-17);
    }
}

TEST(AxisTurn, ByNothingIsTheIdentity) {
  const AxisTurn turn(12, 1, 0);
  for (int row = -12; row <= 12; ++row)
    for (int k = -12; k <= 12; ++k) EXPECT_NEAR(double(turn.entry(12, row, k)), row == k ? 1 : 0, 1e-17);
}

TEST(AxisTurn, KeepsCosineAndSineHarmonicsApart) {
  const AxisTurn turn(9, 0.28L, 0.96L);
  for (int row = 0; row <= 9; ++row)
    for (int k = 1; k <= 9; ++k) {
      EXPECT_EQ(turn.entry(9, row, -k), 0);
      EXPECT_EQ(turn.entry(9, -k, row), 0);
    }
}

TEST(AxisTurn, TwoTurnsAreOneByTheSumOfTheAngles) {
  const AxisTurn a(16, std::cos(0.4L), std::sin(0.4L)), b(16, std::cos(1.1L), std::sin(1.1L)),
      c(16, std::cos(1.5L), std::sin(1.5L));
  for (int row = -16; row <= 16; ++row)
    for (int k = -16; k <= 16; ++k) {
      long double sum = 0;
      for (int i = -16; i <= 16; ++i) sum += a.entry(16, row, i) * b.entry(16, i, k);
      ASSERT_NEAR(double(sum - c.entry(16, row, k)), 0, 1e-17);
    }
}

TEST(AxisTurn, AWrongAngleIsNoticed) {
  EXPECT_GT(defect(AxisTurn(4, 0.6L, 0.81L), 4), 1e-3L);
}

}  // namespace
}  // namespace farsum
