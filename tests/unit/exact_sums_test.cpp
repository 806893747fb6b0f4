#include "fmm/verification/exact_sums.hpp"

#include <gtest/gtest.h>

#include <cmath>
#include <vector>

#include "fmm/kernels/dispatch.hpp"
#include "tests/reference/direct_sum.hpp"
#include "tests/reference/random.hpp"

namespace farsum {
namespace {

using reference::Charges;

/// Padded sources at random places.
struct Sources {
  Charges charges;
  std::vector<double> x, y, z, q;

  explicit Sources(std::size_t n) {
    reference::Random random(n);
    for (std::size_t i = 0; i < n; ++i)
      charges.add({random.uniform(), random.uniform(), random.uniform()}, random.uniform(-1, 1));
    const std::size_t padded = round_up(n, kSourcePad);
    x = charges.x;
    y = charges.y;
    z = charges.z;
    q = charges.q;
    for (std::vector<double>* a : {&x, &y, &z}) a->resize(padded, 1e3);
    q.resize(padded, 0.0);
  }
  SourceArrays arrays() const { return {x.data(), y.data(), z.data(), q.data(), charges.size()}; }
  ExactTarget own(std::size_t i) const { return {x[i], y[i], z[i], std::int64_t(i)}; }
};

std::vector<ExactValue> values_of(const Sources& sources, const std::vector<ExactTarget>& targets, int threads = 1) {
  Executor executor(threads);
  return exact_values(sources.arrays(), targets, kernels::kernel_table(CpuTarget::portable), executor);
}

void expect_exact(const ExactValue& value, const reference::Exact& exact) {
  EXPECT_LE(std::abs(value.potential - exact.potential), 1e-16L * exact.potential_magnitude);
  for (std::size_t axis = 0; axis < 3; ++axis)
    EXPECT_LE(std::abs(value.field[axis] - exact.field[axis]), 3e-16L * exact.field_magnitude);
  EXPECT_NEAR(value.potential_scale / double(exact.potential_magnitude), 1, 1e-13);
  EXPECT_NEAR(value.field_scale / double(exact.field_magnitude), 1, 1e-13);
  EXPECT_NEAR(std::sqrt(value.nearest_squared) / exact.nearest, 1, 1e-14);
}

TEST(ExactValues, AgreeWithExtendedPrecisionOverManyPieces) {
  for (std::size_t n : {100u, 4096u, 4097u, 20001u}) {
    const Sources sources(n);
    const std::vector<std::size_t> chosen{0, 1, n / 2, n - 2, n - 1};
    std::vector<ExactTarget> targets;
    for (std::size_t i : chosen) targets.push_back(sources.own(i));
    const std::vector<ExactValue> values = values_of(sources, targets);
    const std::vector<reference::Exact> exact = reference::direct_sum(sources.charges, chosen);
    for (std::size_t i = 0; i < chosen.size(); ++i) expect_exact(values[i], exact[i]);
  }
}

TEST(ExactValues, ATargetThatIsNoSourceSeesAll) {
  const Sources sources(5000);
  Charges probe;
  probe.add({0.5, 0.25, 1.5});
  const auto exact = reference::direct_sum_at(sources.charges, probe);
  expect_exact(values_of(sources, {{0.5, 0.25, 1.5, -1}})[0], exact[0]);
}

TEST(ExactValues, AreTheSameFromAnyNumberOfThreads) {
  const Sources sources(50000);
  const std::vector<ExactTarget> targets{sources.own(3), sources.own(49999)};
  const auto one = values_of(sources, targets, 1), many = values_of(sources, targets, 3);
  for (std::size_t i = 0; i < 2; ++i) {
    EXPECT_EQ(one[i].potential, many[i].potential);
    EXPECT_EQ(one[i].field[2], many[i].field[2]);
  }
}

TEST(ExactValues, SelfOfOddPlacesIsLeftOut) {
  const Sources sources(4200);
  for (std::size_t i : {1u, 7u, 4095u, 4096u, 4097u, 4199u})
    EXPECT_GT(values_of(sources, {sources.own(i)})[0].nearest_squared, 0) << i;
}

TEST(ExactValues, OfNoTargetsOrNoSources) {
  EXPECT_TRUE(values_of(Sources(100), {}).empty());
  EXPECT_EQ(values_of(Sources(0), {{0, 0, 0, -1}})[0].potential, 0);
}

}  // namespace
}  // namespace farsum
