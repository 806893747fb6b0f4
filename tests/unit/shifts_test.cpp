#include "fmm/medium/coulomb/shifts.hpp"

#include <gtest/gtest.h>

#include <cmath>

#include "tests/unit/harmonics.hpp"

namespace farsum {
namespace {

using coulomb::Shifts;

/// Largest difference between R_nm(v + e_z) and sum_l child(n, l, m) R_lm(v) for degrees n <= order.
double child_error(int order, const unit::Vector& v) {
  const Shifts shifts(order);
  const unit::Vector moved{v[0], v[1], v[2] + 1};
  long double worst = 0;
  for (int n = 0; n <= order; ++n)
    for (int m = 0; m <= n; ++m) {
      long double sum = 0, size = 0;
      for (int l = m; l <= n; ++l) {
        const long double term = shifts.child(n, l, m) * unit::regular(l, m, v);
        sum += term;
        size += std::abs(term);
      }
      worst =
          std::max(worst, std::abs(sum - unit::regular(n, m, moved)) / (size + std::abs(unit::regular(n, m, moved)) + 1e-30L));
    }
  return double(worst);
}

TEST(Shifts, ChildMovesRegularHarmonicsAlongZ) {
  EXPECT_LE(child_error(20, {0.3L, -0.4L, 0.25L}), 1e-17);
  EXPECT_LE(child_error(48, {1.1L, 0.7L, -0.6L}), 1e-16);
}

TEST(Shifts, ChildIsZeroAboveTheDiagonal) {
  const Shifts shifts(5);
  EXPECT_EQ(shifts.child(2, 3, 0), 0);
  EXPECT_EQ(shifts.child(3, 2, 3), 0);
}

TEST(Shifts, ChildOfEqualDegreesIsOne) {
  const Shifts shifts(48);
  for (int n = 0; n <= 48; ++n) EXPECT_NEAR(double(shifts.child(n, n, n / 2)), 1, 1e-18);
}

TEST(Shifts, TwoHalfStepsAreOneStep) {
  const Shifts shifts(30);
  for (int m : {0, 1, 7})
    for (int n = m; n <= 30; ++n)
      for (int l = m; l <= n; ++l) {
        long double sum = 0;
        for (int i = l; i <= n; ++i) sum += shifts.child(n, i, m) * shifts.child(i, l, m);
        ASSERT_NEAR(double(sum * std::pow(0.5L, n - l) / shifts.child(n, l, m)), 1, 1e-16) << n << ", " << l << ", " << m;
      }
}

TEST(Shifts, FarExpandsIrregularHarmonicsAboutThePlaceBelow) {
  const Shifts shifts(60);
  const unit::Vector v{0.03L, -0.05L, 0.04L}, from_source{v[0], v[1], v[2] - 1};
  for (int n = 0; n <= 12; ++n)
    for (int m = 0; m <= n; ++m) {
      long double sum = 0;
      for (int l = m; l <= 40; ++l) sum += shifts.far(l, n, m) * unit::regular(l, m, v);
      const long double exact = unit::irregular(n, m, from_source);
      ASSERT_NEAR(double(sum / exact), 1, 1e-15) << n << ", " << m;
    }
}

TEST(Shifts, FarOnTheAxisIsABinomialCoefficient) {
  const Shifts shifts(48);
  for (int n : {0, 1, 5, 20})
    for (int l : {0, 1, 4, 25}) {
      long double binomial = 1;
      for (int i = 1; i <= n; ++i) binomial = binomial * (l + i) / i;
      EXPECT_NEAR(double(shifts.far(l, n, 0) / binomial), n % 2 ? -1 : 1, 1e-17);
    }
}

TEST(Shifts, FarIsReciprocalUpToTheSignOfTheDegrees) {
  const Shifts shifts(40);
  for (int n = 0; n <= 40; n += 5)
    for (int l = 0; l <= 40; l += 3)
      for (int m = 0; m <= std::min(n, l); m += 4) {
        EXPECT_NEAR(double(shifts.far(l, n, m) / shifts.far(n, l, m)), (n + l) % 2 ? -1 : 1, 1e-17);
      }
}

TEST(Shifts, StayFiniteAtTheHighestOrder) {
  const Shifts shifts(48);
  EXPECT_TRUE(std::isfinite(shifts.far(48, 48, 0)));
  EXPECT_TRUE(std::isfinite(shifts.far(48, 48, 48)));
  EXPECT_TRUE(std::isfinite(double(shifts.far(48, 48, 48))));
}

}  // namespace
}  // namespace farsum
