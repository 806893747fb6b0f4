#include "fmm/medium/coulomb/truncation.hpp"

#include <gtest/gtest.h>

#include <cmath>

#include "fmm/expansion/gradient.hpp"
#include "fmm/kernels/dispatch.hpp"
#include "tests/unit/box_cloud.hpp"

namespace farsum {
namespace {

using coulomb::truncation_row;
using coulomb::TruncationRow;

TEST(TruncationTable, HasEveryDistanceOfAFarPair) {
  for (int index = 0; index < kOffsets; ++index) {
    const BoxOffset o = offset_of(index);
    if (!Separation{}.occurs(o)) continue;
    EXPECT_EQ(truncation_row(o.squared())->squared_distance, o.squared());
  }
}

TEST(TruncationTable, TakesTheNextSmallerDistanceWhereNoneWasMeasured) {
  EXPECT_EQ(truncation_row(16)->squared_distance, 14);
  EXPECT_EQ(truncation_row(28)->squared_distance, 27);
  EXPECT_EQ(truncation_row(75)->squared_distance, 27);
}

TEST(TruncationTable, AHigherOrderIsNeverWorse) {
  for (const TruncationRow& row : coulomb::kTruncationRows)
    for (int p = 1; p <= kMaxOrder; ++p) {
      EXPECT_GE(row.potential[p], row.potential[p - 1]) << row.squared_distance << ", " << p;
      EXPECT_GE(row.field[p], row.field[p - 1]) << row.squared_distance << ", " << p;
    }
}

TEST(TruncationTable, FarDistancesConvergeFaster) {
  for (int p : {8, 16, 32}) {
    EXPECT_GT(truncation_row(9)->field[p], truncation_row(4)->field[p]);
    EXPECT_GT(truncation_row(18)->field[p], truncation_row(9)->field[p]);
    EXPECT_GT(truncation_row(27)->field[p], truncation_row(18)->field[p]);
  }
}

struct Errors {
  double potential = 0, field = 0;  ///< RMS
};

/// Fresh trials of random charges with sum q^2 = 1 in a box and random targets in the box at the offset, against direct sums.
class Trial {
 public:
  Trial(const BoxOffset& offset, int order)
      : offset_(offset), order_(order), executor_(1), tables_(order, executor_), gradients_(order) {}

  Errors run(int trials) {
    double potential = 0, field = 0;
    for (int trial = 0; trial < trials; ++trial) add(std::uint64_t(trial), potential, field);
    return {std::sqrt(potential / (trials * double(kPoints))), std::sqrt(field / (trials * double(kPoints)))};
  }

 private:
  static constexpr std::size_t kPoints = 64;

  void add(std::uint64_t trial, double& potential, double& field) {
    unit::BoxCloud<double> sources(kPoints, 2 * trial + 900001), targets(kPoints, 2 * trial + 900002);
    for (double& q : sources.q) q = (q > 0 ? 1 : -1) / std::sqrt(double(kPoints));
    const std::size_t length = row_length<double>(order_);
    std::vector<double> rows(5 * length, 0.0), values(4 * kPoints);
    double* const r[5] = {&rows[0], &rows[length], &rows[2 * length], &rows[3 * length], &rows[4 * length]};
    double* const v[4] = {&values[0], &values[kPoints], &values[2 * kPoints], &values[3 * kPoints]};
    AlignedArray<double> scratch(ledger_, kernels::expansion_scratch(order_ + 1));
    const auto& kernels = kernels::kernel_table(CpuTarget::portable).double_precision;
    kernels.project(sources.block(), order_, false, tables_.recurrence(), r[4], scratch.data());
    kernels.translate(tables_.far(offset_index(offset_), order_), &r[4], &r[0], 1, scratch.data());
    gradients_.of_local(r[0], order_, {r[1], r[2], r[3]});
    kernels.evaluate(targets.block(), order_, false, tables_.recurrence(), r, 4, v);
    for (std::size_t i = 0; i < kPoints; ++i) {
      double sum[4] = {v[0][i], -v[1][i], -v[2][i], -v[3][i]};
      for (std::size_t j = 0; j < kPoints; ++j) subtract(sources, targets, i, j, sum);
      potential += sum[0] * sum[0];
      field += sum[1] * sum[1] + sum[2] * sum[2] + sum[3] * sum[3];
    }
  }

  void subtract(const unit::BoxCloud<double>& sources, const unit::BoxCloud<double>& targets, std::size_t i, std::size_t j,
                double (&sum)[4]) const {
    const double d[3] = {targets.x[i] - sources.x[j] - offset_.x, targets.y[i] - sources.y[j] - offset_.y,
                         targets.z[i] - sources.z[j] - offset_.z};
    const double r2 = d[0] * d[0] + d[1] * d[1] + d[2] * d[2], q = sources.q[j] / std::sqrt(r2);
    sum[0] -= q;
    for (int axis = 0; axis < 3; ++axis) sum[axis + 1] -= q / r2 * d[axis];
  }

  BoxOffset offset_;
  int order_;
  Executor executor_;
  TranslationTables<double> tables_;
  GradientRows<double> gradients_;
  MemoryLedger ledger_;
};

void expect_within_two(const BoxOffset& offset, int order) {
  const Errors fresh = Trial(offset, order).run(200);
  const TruncationRow& row = *truncation_row(offset.squared());
  EXPECT_NEAR(-std::log2(fresh.potential), row.potential[order], 1) << "potential, order " << order;
  EXPECT_NEAR(-std::log2(fresh.field), row.field[order], 1) << "field, order " << order;
}

TEST(TruncationTable, HoldsForFreshChargesInTheNearestFarBox) {
  for (int order : {2, 5, 8}) expect_within_two({0, -2, 0}, order);
}

TEST(TruncationTable, HoldsForFreshChargesAcrossTheDiagonal) {
  for (int order : {2, 8, 16}) expect_within_two({2, 2, -2}, order);
}

TEST(TruncationTable, AnotherDistanceIsNoticed) {
  const Errors fresh = Trial({0, 0, 2}, 8).run(50);
  EXPECT_GT(std::abs(-std::log2(fresh.field) - truncation_row(12)->field[8]), 2);
}

}  // namespace
}  // namespace farsum
