#include "fmm/verification/error_norms.hpp"

#include <gtest/gtest.h>

#include <cmath>
#include <limits>
#include <vector>

namespace farsum {
namespace {

using Samples = std::vector<SampledError>;

double median(std::vector<double> values, std::vector<double> weights) {
  return weighted_median(values, weights);
}

TEST(WeightedMedian, IsTheSmallestValueThatReachesHalfTheWeight) {
  EXPECT_EQ(median({3, 1, 2}, {1, 1, 1}), 2);
  EXPECT_EQ(median({4, 1, 3, 2}, {1, 1, 1, 1}), 2);
  EXPECT_EQ(median({10, 20}, {1, 3}), 20);
  EXPECT_EQ(median({10, 20}, {3, 1}), 10);
  EXPECT_EQ(median({5}, {0.1}), 5);
  EXPECT_EQ(median({}, {}), 0);
}

TEST(ErrorNorms, OfTwoTargetsByHand) {
  // Errors 3 and 4 of values 30 and 40; floors far below.
  const NormsResult norms = error_norms(Samples{{3, 30, 1, 100, 1, true}, {4, 40, 1, 100, 1, true}});
  EXPECT_TRUE(norms.error.measured);
  EXPECT_DOUBLE_EQ(norms.error.rms, std::sqrt(12.5) / std::sqrt(1250));
  EXPECT_DOUBLE_EQ(norms.error.rms_upper, norms.error.rms);  // nothing is sampled
  EXPECT_DOUBLE_EQ(norms.error.worst, 4 / std::sqrt(1250));
  EXPECT_DOUBLE_EQ(norms.error.typical, 0.1);  // 3/30 and 4/40, the median size is 30
  EXPECT_DOUBLE_EQ(norms.median_size, 30);
  EXPECT_DOUBLE_EQ(norms.floor_tolerance, 8 * 0x1p-53 * 100 / std::sqrt(1250));
}

TEST(ErrorNorms, VanishingValuesAreMeasuredByTheFloor) {
  const NormsResult norms = error_norms(Samples{{1e-3, 0, 2, 5, 1, true}, {1e-3, 0, 2, 5, 1, true}});
  EXPECT_DOUBLE_EQ(norms.error.rms, 5e-4);
  EXPECT_DOUBLE_EQ(norms.error.typical, 5e-4);
  EXPECT_DOUBLE_EQ(norms.error.worst, 5e-4);
}

TEST(ErrorNorms, TypicalMeasuresSmallValuesByTheMedian) {
  // Sizes 1, 10, 1000: the median 10 stands under the error at the smallest.
  const NormsResult norms = error_norms(Samples{{1, 1, 0.1, 0, 1, true}, {1, 10, 0.1, 0, 1, true}, {1, 1000, 0.1, 0, 1, true}});
  EXPECT_DOUBLE_EQ(norms.error.typical, std::sqrt((0.01 + 0.01 + 1e-6) / 3));
}

TEST(ErrorNorms, WeightsCountAsCopies) {
  const SampledError a{3, 30, 1, 7, 1, true}, b{4, 40, 1, 9, 1, true};
  SampledError heavy = b;
  heavy.weight = 3;
  const NormsResult weighted = error_norms(Samples{a, heavy}), copied = error_norms(Samples{a, b, b, b});
  EXPECT_DOUBLE_EQ(weighted.error.rms, copied.error.rms);
  EXPECT_DOUBLE_EQ(weighted.error.typical, copied.error.typical);
  EXPECT_DOUBLE_EQ(weighted.error.worst, copied.error.worst);
  EXPECT_DOUBLE_EQ(weighted.floor_tolerance, copied.floor_tolerance);
  EXPECT_DOUBLE_EQ(weighted.median_size, copied.median_size);
}

TEST(ErrorNorms, UpperBoundOfSampledTargetsByHand) {
  // Squares 1 and 9 from two slices of 5: mean 5, variance 32, standard error sqrt(16) = 4.
  const NormsResult norms = error_norms(Samples{{1, 1, 1, 0, 5, false}, {3, 1, 1, 0, 5, false}});
  EXPECT_DOUBLE_EQ(norms.error.rms, std::sqrt(5.0));
  EXPECT_NEAR(norms.error.rms_upper, std::sqrt(5 + 1.6448536269514722 * 4), 1e-12);
}

TEST(ErrorNorms, NoSamplesOrZeroValuesGiveZero) {
  EXPECT_EQ(error_norms({}).error.rms, 0);
  const NormsResult norms = error_norms(Samples{{0, 0, 0, 0, 1, true}});
  EXPECT_TRUE(norms.error.measured);
  EXPECT_EQ(norms.error.rms + norms.error.typical + norms.error.worst + norms.floor_tolerance, 0);
}

TEST(ErrorNorms, ANotANumberIsNoticed) {
  const double nan = std::numeric_limits<double>::quiet_NaN();
  const NormsResult norms = error_norms(Samples{{nan, 30, 1, 100, 1, true}, {4, 40, 1, 100, 1, true}});
  EXPECT_FALSE(norms.error.rms <= 1e300);
}

}  // namespace
}  // namespace farsum
