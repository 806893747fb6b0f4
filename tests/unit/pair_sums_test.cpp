// kernels/body_pair_sums.hpp: the near-field and verification sums of every CPU target against the plain formula in long
// double.
#include <gtest/gtest.h>

#include <algorithm>
#include <cmath>
#include <utility>
#include <vector>

#include "tests/reference/charges.hpp"
#include "tests/reference/random.hpp"
#include "tests/unit/cpu_targets.hpp"

namespace farsum {
namespace {

using kernels::RootAccuracy;
using reference::Charges;

constexpr double kEpsilon = 0x1p-53;
constexpr double kFastRoot = 2.5 * 0x1p-42;  // one cubic step from a start of 2^-14 (vector_pack.hpp): 5.7e-13
constexpr double kUntouched = 1e300;

/// Sources and targets of one call, and what it gave. Arrays start `shift` doubles after an aligned place.
struct Case {
  Case() = default;
  Case(Charges from, Charges at) : sources(std::move(from)), targets(std::move(at)) {}

  Charges sources, targets;
  std::ptrdiff_t self = -1;
  std::size_t shift = 0;
  RootAccuracy accuracy = RootAccuracy::full;
  bool mask_zero = false, with_field = true;

  std::vector<double> potential, field[3], nearest, potential_scale, field_scale;

  void run(const kernels::KernelTable& table) { table.pair_sums(arguments(), accuracy, mask_zero, with_field); }
  void run_exact(const kernels::KernelTable& table) {
    const kernels::PairSums sums = arguments();
    table.exact_sums({sums, potential_scale.data(), field_scale.data()});
  }

 private:
  kernels::PairSums arguments() {
    const std::size_t n = targets.size(), padded = round_up(sources.size(), kSourcePad);
    potential.assign(n, 0.0);
    nearest.assign(n, kUntouched);
    potential_scale.assign(n, 0.0);
    field_scale.assign(n, 0.0);
    for (std::vector<double>& component : field) component.assign(n, 0.0);
    const double pad = 1e3 + (sources.size() ? sources.x[0] : 0);
    const auto shifted = [&](const std::vector<double>& from, double filler, std::size_t size) {
      std::vector<double>& to = storage_.emplace_back(shift, filler);
      to.insert(to.end(), from.begin(), from.end());
      to.resize(shift + size, filler);
      return to.data() + shift;
    };
    storage_.clear();
    storage_.reserve(7);
    return {shifted(sources.x, pad, padded),
            shifted(sources.y, pad, padded),
            shifted(sources.z, pad, padded),
            shifted(sources.q, 0, padded),
            padded,
            shifted(targets.x, 0, n),
            shifted(targets.y, 0, n),
            shifted(targets.z, 0, n),
            n,
            self,
            potential.data(),
            field[0].data(),
            field[1].data(),
            field[2].data(),
            nearest.data()};
  }
  std::vector<std::vector<double>> storage_;
};

struct Plain {
  long double potential = 0, field[3] = {0, 0, 0}, potential_size = 0, field_size = 0, potential_squares = 0, field_squares = 0;
  double nearest = kUntouched;
};

/// The plain formula; pairs at zero distance are left out.
Plain plain_sums(const Case& c, std::size_t i) {
  Plain sum;
  for (std::size_t j = 0; j < c.sources.size(); ++j) {
    if (c.self >= 0 && j == std::size_t(c.self) + i) continue;
    const long double d[3] = {(long double)(c.targets.x[i]) - c.sources.x[j], (long double)(c.targets.y[i]) - c.sources.y[j],
                              (long double)(c.targets.z[i]) - c.sources.z[j]};
    const long double r2 = d[0] * d[0] + d[1] * d[1] + d[2] * d[2], q = c.sources.q[j];
    sum.nearest = std::min(sum.nearest, double(r2));
    if (r2 == 0) continue;
    const long double r = std::sqrt(r2);
    sum.potential += q / r;
    for (int axis = 0; axis < 3; ++axis) sum.field[axis] += q * d[axis] / (r2 * r);
    sum.potential_size += std::abs(q) / r;
    sum.field_size += std::abs(q) / r2;
    sum.potential_squares += q * q / r2;
    sum.field_squares += q * q / (r2 * r2);
  }
  return sum;
}

/// Largest error over its bound (n + 8) eps sum of absolute terms; with fast roots each term may be off by theirs, thrice for
/// the field.
double worst_error(const Case& c) {
  const double rounding = (double(c.sources.size()) + 8) * kEpsilon, root = c.accuracy == RootAccuracy::fast ? kFastRoot : 0.0;
  double worst = 0;
  for (std::size_t i = 0; i < c.targets.size(); ++i) {
    const Plain exact = plain_sums(c, i);
    const double tiny = 1e-300;
    worst = std::max(
        worst, std::abs(double(c.potential[i] - exact.potential)) / (double(exact.potential_size) * (rounding + root) + tiny));
    for (std::size_t axis = 0; axis < 3 && c.with_field; ++axis)
      worst = std::max(worst, std::abs(double(c.field[axis][i] - exact.field[axis])) /
                                  (double(exact.field_size) * (2 * rounding + 3 * root) + tiny));
  }
  return worst;
}

Charges cloud(std::size_t n, std::uint64_t seed, double offset = 0) {
  reference::Random random(seed);
  Charges charges;
  for (std::size_t i = 0; i < n; ++i)
    charges.add({offset + random.uniform(), offset + random.uniform(), offset + random.uniform()}, random.uniform(-1, 1));
  return charges;
}

/// Targets are the sources from `self` on.
Case own_sums(std::size_t sources, std::ptrdiff_t self, std::size_t targets, std::uint64_t seed) {
  Case c;
  c.sources = cloud(sources, seed);
  c.self = self;
  for (std::size_t i = 0; i < targets; ++i) c.targets.add(c.sources.place(std::size_t(self) + i));
  return c;
}

class PairSums : public unit::OnTarget {};
INSTANTIATE_TEST_SUITE_P(, PairSums, testing::ValuesIn(unit::available_targets()), unit::target_word);

TEST_P(PairSums, FollowThePlainFormulaForAllCounts) {
  for (std::size_t sources : unit::counts_around_widths())
    for (std::size_t targets : unit::counts_around_widths())
      for (RootAccuracy accuracy : {RootAccuracy::fast, RootAccuracy::full}) {
        Case c{cloud(sources, 11 + sources), cloud(targets, 97 + targets)};
        c.accuracy = accuracy;
        c.run(table());
        ASSERT_LE(worst_error(c), 1) << sources << " sources, " << targets << " targets";
      }
}

TEST_P(PairSums, StartAtAnyAddress) {
  for (std::size_t shift = 1; shift < 8; ++shift) {
    Case c{cloud(21, 5), cloud(7, 6)};
    c.shift = shift;
    c.run(table());
    EXPECT_LE(worst_error(c), 1) << shift;
  }
}

TEST_P(PairSums, LeaveTheTargetItselfOut) {
  for (std::ptrdiff_t self : {0, 2, 6, 8, 14})
    for (std::size_t targets : {1u, 2u, 3u, 9u, 17u}) {
      Case c = own_sums(33, self, targets, 40 + targets);
      c.run(table());
      ASSERT_LE(worst_error(c), 1) << self << ", " << targets;
      for (double nearest : c.nearest) ASSERT_GT(nearest, 0);
    }
}

TEST_P(PairSums, LeaveTheTargetItselfOutUnderTheMaskOfZeros) {
  Case c = own_sums(19, 0, 19, 3);
  c.mask_zero = true;
  c.run(table());
  EXPECT_LE(worst_error(c), 1);
}

TEST_P(PairSums, ReportTheNearestSource) {
  Case c{cloud(37, 8), cloud(9, 9)};
  c.run(table());
  for (std::size_t i = 0; i < c.targets.size(); ++i) EXPECT_NEAR(c.nearest[i] / plain_sums(c, i).nearest, 1, 4e-16);
}

TEST_P(PairSums, CoincidentPointsGiveNearestZero) {
  for (bool mask : {false, true}) {
    Case c{cloud(20, 8), cloud(5, 9)};
    c.mask_zero = mask;
    c.targets.x[3] = c.sources.x[13];
    c.targets.y[3] = c.sources.y[13];
    c.targets.z[3] = c.sources.z[13];
    c.run(table());
    for (std::size_t i = 0; i < 5; ++i) EXPECT_EQ(c.nearest[i] == 0, i == 3) << mask;
  }
}

TEST_P(PairSums, MaskOfZerosLeavesCoincidentPairsOut) {
  for (RootAccuracy accuracy : {RootAccuracy::fast, RootAccuracy::full}) {
    Case c{cloud(20, 8), cloud(5, 9)};
    c.mask_zero = true;
    c.accuracy = accuracy;
    for (std::size_t i = 0; i < 4; ++i) {
      c.targets.x[i] = c.sources.x[5 * i];
      c.targets.y[i] = c.sources.y[5 * i];
      c.targets.z[i] = c.sources.z[5 * i];
    }
    c.run(table());
    EXPECT_LE(worst_error(c), 1);
  }
}

TEST_P(PairSums, HugeOffsetsCostNoAccuracy) {
  for (double offset : {1e6, -1e12}) {
    Case c{cloud(25, 4, offset), cloud(9, 5, offset)};
    c.mask_zero = true;  // on so coarse a grid places may coincide
    c.run(table());
    EXPECT_LE(worst_error(c), 1) << offset;
  }
}

TEST_P(PairSums, ResolveSeparationsDownToTheContract) {
  for (double separation : {0x1p-30, 0x1p-59, 0x1p-60}) {
    Case c;
    c.sources.add({0, 0, 0}, 1.5);
    c.sources.add({1, 1, 1}, -1);
    c.targets.add({separation, 0, 0});
    c.run(table());
    EXPECT_LE(worst_error(c), 1) << separation;
    EXPECT_EQ(c.nearest[0], separation * separation);
  }
}

TEST_P(PairSums, PotentialAloneLeavesTheFieldUntouched) {
  Case c{cloud(18, 1), cloud(5, 2)};
  c.with_field = false;
  c.run(table());
  EXPECT_LE(worst_error(c), 1);
  for (const std::vector<double>& component : c.field)
    for (double value : component) EXPECT_EQ(value, 0);
}

TEST_P(PairSums, AddToWhatIsThere) {
  Case c{cloud(18, 1), cloud(5, 2)};
  c.run(table());
  std::vector<double> sum(5, 10.0), nearest(5, 0.0), pad_q = c.sources.q;
  pad_q.resize(24, 0);
  std::vector<double> x = c.sources.x, y = c.sources.y, z = c.sources.z;
  for (std::vector<double>* a : {&x, &y, &z}) a->resize(24, 1e3);
  table().pair_sums({x.data(), y.data(), z.data(), pad_q.data(), 24, c.targets.x.data(), c.targets.y.data(), c.targets.z.data(),
                     5, -1, sum.data(), nullptr, nullptr, nullptr, nearest.data()},
                    RootAccuracy::full, false, false);
  for (std::size_t i = 0; i < 5; ++i) {
    EXPECT_NEAR(sum[i] - 10, c.potential[i], 1e-13);
    EXPECT_EQ(nearest[i], 0);
  }
}

/// Largest relative error of 1/r for squares of r over two octaves at several scales.
double worst_root(const kernels::KernelTable& table, RootAccuracy accuracy) {
  constexpr std::size_t kSteps = 40000;
  double worst = 0;
  for (double scale : {1.0, 0x1p-55, 0x1p+10}) {
    Case c;
    c.sources.add({0, 0, 0}, 1);
    for (std::size_t i = 0; i < kSteps; ++i) c.targets.add({scale * (1 + double(i) / kSteps), 0, 0});
    c.accuracy = accuracy;
    c.run(table);
    for (std::size_t i = 0; i < kSteps; ++i)
      worst = std::max(worst, double(std::abs((long double)(c.potential[i]) * c.targets.x[i] - 1)));
  }
  return worst;
}

TEST_P(PairSums, FastRootsAreGoodToOneCubicStep) {
  EXPECT_LE(worst_root(table(), RootAccuracy::fast), kFastRoot);
}

TEST_P(PairSums, FullRootsAreGoodToRounding) {
  EXPECT_LE(worst_root(table(), RootAccuracy::full), 4 * kEpsilon);
}

TEST_P(PairSums, AWrongSignIsNoticed) {
  Case c{cloud(18, 1), cloud(5, 2)};
  c.run(table());
  c.field[1][4] = -c.field[1][4];
  EXPECT_GT(worst_error(c), 1e6);
}

class ExactSums : public unit::OnTarget {};
INSTANTIATE_TEST_SUITE_P(, ExactSums, testing::ValuesIn(unit::available_targets()), unit::target_word);

/// Largest error over 1e-15 of the sum of absolute terms.
double worst_exact_error(const Case& c) {
  double worst = 0;
  for (std::size_t i = 0; i < c.targets.size(); ++i) {
    const Plain exact = plain_sums(c, i);
    const double tiny = 1e-300;
    worst = std::max(worst, std::abs(double(c.potential[i] - exact.potential)) / (1e-15 * double(exact.potential_size) + tiny));
    for (std::size_t axis = 0; axis < 3; ++axis)
      worst =
          std::max(worst, std::abs(double(c.field[axis][i] - exact.field[axis])) / (1e-15 * double(exact.field_size) + tiny));
  }
  return worst;
}

TEST_P(ExactSums, AreGoodTo1e15OfTheTerms) {
  for (std::size_t sources : unit::counts_around_widths()) {
    Case c{cloud(sources, 31 + sources), cloud(5, 32)};
    c.run_exact(table());
    EXPECT_LE(worst_exact_error(c), 1) << sources;
  }
}

TEST_P(ExactSums, ErrorGrowsWithTheRootOfTheNumberOnly) {
  Case c{cloud(20000, 77), cloud(6, 78)};
  c.run_exact(table());
  for (std::size_t i = 0; i < 6; ++i) {
    const Plain exact = plain_sums(c, i);
    EXPECT_LE(std::abs(c.potential[i] - exact.potential), 8 * kEpsilon * std::sqrt(exact.potential_squares));
    for (std::size_t axis = 0; axis < 3; ++axis)
      EXPECT_LE(std::abs(c.field[axis][i] - exact.field[axis]), 8 * kEpsilon * std::sqrt(exact.field_squares));
  }
}

TEST_P(ExactSums, LeaveTheTargetItselfAndCoincidentPairsOut) {
  Case c = own_sums(23, 4, 9, 12);
  c.sources.add(c.targets.place(2), 5);
  c.run_exact(table());
  EXPECT_LE(worst_exact_error(c), 1);
  EXPECT_GT(c.nearest[2], 0);  // zero distances are left out here as well
  EXPECT_EQ(plain_sums(c, 2).nearest, 0);
}

TEST_P(ExactSums, ScalesAreSumsOfAbsoluteTerms) {
  Case c{cloud(29, 3), cloud(4, 2)};
  c.run_exact(table());
  for (std::size_t i = 0; i < 4; ++i) {
    const Plain exact = plain_sums(c, i);
    EXPECT_NEAR(c.potential_scale[i], double(exact.potential_size), 1e-13 * c.potential_scale[i]);
    EXPECT_NEAR(c.field_scale[i], double(exact.field_size), 1e-13 * c.field_scale[i]);
  }
}

}  // namespace
}  // namespace farsum
