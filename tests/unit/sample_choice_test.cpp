#include "fmm/verification/sample_choice.hpp"

#include <gtest/gtest.h>

#include <algorithm>
#include <cmath>
#include <set>
#include <vector>

#include "tests/reference/random.hpp"

namespace farsum {
namespace {

/// Targets with random strengths and nearest distances, and the samples of them.
struct Choice {
  std::vector<double> strength, nearest;
  std::vector<Sample> samples;

  Choice(std::uint32_t n, std::size_t wanted, std::uint64_t seed = 3) {
    reference::Random random(seed);
    for (std::uint32_t i = 0; i < n; ++i) {
      strength.push_back(random.uniform());
      nearest.push_back(random.uniform());
    }
    samples = choose_samples(n, wanted, [&](std::uint32_t place) { return strength[place]; }, nearest.data(), {}, {});
  }
  std::set<std::uint32_t> places(bool certain_only) const {
    std::set<std::uint32_t> found;
    for (const Sample& s : samples)
      if (s.certain || !certain_only) found.insert(s.place);
    return found;
  }
  double weight() const {
    double sum = 0;
    for (const Sample& s : samples) sum += s.weight;
    return sum;
  }
};

TEST(SampleChoice, TakesAllWhenThereAreFew) {
  for (std::uint32_t n : {0u, 1u, 199u, 200u}) {
    const Choice choice(n, 200);
    ASSERT_EQ(choice.samples.size(), n);
    for (std::uint32_t i = 0; i < n; ++i)
      EXPECT_TRUE(choice.samples[i].place == i && choice.samples[i].certain && choice.samples[i].weight == 1);
  }
}

TEST(SampleChoice, PlacesAreDistinctAndWeightsSumToTheNumber) {
  for (std::uint32_t n : {201u, 250u, 1000u, 100000u})
    for (std::size_t wanted : {1u, 3u, 4u, 50u, 200u}) {
      const Choice choice(n, wanted);
      EXPECT_EQ(choice.places(false).size(), choice.samples.size()) << n << ", " << wanted;
      EXPECT_LE(choice.samples.size(), wanted);
      EXPECT_DOUBLE_EQ(choice.weight(), n) << n << ", " << wanted;
    }
}

TEST(SampleChoice, HoldsTheStrongestQuarter) {
  const Choice choice(5000, 200);
  std::vector<std::uint32_t> order(5000);
  for (std::uint32_t i = 0; i < 5000; ++i) order[i] = i;
  std::sort(order.begin(), order.end(),
            [&](std::uint32_t a, std::uint32_t b) { return choice.strength[a] > choice.strength[b]; });
  const std::set<std::uint32_t> certain = choice.places(true);
  for (std::size_t i = 0; i < 50; ++i) EXPECT_TRUE(certain.count(order[i])) << i;
}

TEST(SampleChoice, HoldsThoseOfNearestNeighbours) {
  const Choice choice(5000, 200);
  std::vector<std::uint32_t> order(5000);
  for (std::uint32_t i = 0; i < 5000; ++i) order[i] = i;
  std::sort(order.begin(), order.end(),
            [&](std::uint32_t a, std::uint32_t b) { return choice.nearest[a] < choice.nearest[b]; });
  const std::set<std::uint32_t> certain = choice.places(true);
  for (std::size_t i = 0; i < 50; ++i) EXPECT_TRUE(certain.count(order[i])) << i;
}

TEST(SampleChoice, TheRestIsSpreadOverTheTreeOrder) {
  const Choice choice(10000, 200);
  std::vector<std::uint32_t> slices;
  for (const Sample& s : choice.samples)
    if (!s.certain) slices.push_back(s.place);
  ASSERT_EQ(slices.size(), 100u);
  EXPECT_TRUE(std::is_sorted(slices.begin(), slices.end()));
  EXPECT_LT(slices.front(), 110u);
  EXPECT_GT(slices.back(), 9890u);
  for (std::size_t i = 1; i < slices.size(); ++i) EXPECT_LE(slices[i] - slices[i - 1], 220u);
}

TEST(SampleChoice, IsAPureFunctionOfTheData) {
  const Choice a(3000, 200), b(3000, 200);
  for (std::size_t i = 0; i < a.samples.size(); ++i) EXPECT_EQ(a.samples[i].place, b.samples[i].place);
}

/// Estimate of a sum over 2000 targets from the samples, averaged over shifted data; a tenth of the targets holds most of the
/// sum.
double mean_estimate(double& spread) {
  const auto value = [](std::uint32_t place) { return place % 10 == 3 ? 100.0 : 1.0; };
  constexpr int kTrials = 200;
  double sum = 0, squares = 0;
  for (int trial = 0; trial < kTrials; ++trial) {
    const auto shifted = [&](std::uint32_t place) { return value(place + 7919u * std::uint32_t(trial)); };
    const std::vector<double> nearest(2000, 1.0);
    std::vector<float> expected;
    for (std::uint32_t place = 0; place < 2000; ++place) expected.push_back(float(shifted(place)));
    double estimate = 0;
    for (const Sample& s : choose_samples(2000, 100, [](std::uint32_t) { return 1.0; }, nearest.data(), expected, {}))
      estimate += s.weight * shifted(s.place);
    sum += estimate;
    squares += estimate * estimate;
  }
  spread = std::sqrt(squares / kTrials - sum / kTrials * (sum / kTrials));
  return sum / kTrials;
}

TEST(SampleChoice, ImportantTargetsAreDrawnMoreOftenAndWeighLess) {
  double spread = 0;
  const double exact = 200 * 100.0 + 1800;
  EXPECT_NEAR(mean_estimate(spread) / exact, 1, 0.05);  // without bias
  EXPECT_LT(spread / exact, 0.25);                      // by chance alone it would be 0.4
}

TEST(SampleChoice, TiesAreBrokenByPlace) {
  const std::vector<double> nearest(1000, 1.0);
  const auto samples = choose_samples(1000, 40, [](std::uint32_t) { return 2.0; }, nearest.data(), {}, {});
  std::set<std::uint32_t> certain;
  for (const Sample& s : samples)
    if (s.certain) certain.insert(s.place);
  EXPECT_EQ(certain.size(), 20u);
  EXPECT_EQ(*certain.rbegin(), 19u);
}

}  // namespace
}  // namespace farsum
