// kernels/body_harmonics.hpp: projection and evaluation of expansions on every CPU target and in both precisions.
#include <gtest/gtest.h>

#include <algorithm>
#include <limits>

#include "tests/unit/box_cloud.hpp"
#include "tests/unit/cpu_targets.hpp"
#include "tests/unit/harmonics.hpp"

namespace farsum {
namespace {

using unit::BoxCloud;

constexpr int kOrders[] = {0, 1, 2, 3, 7, 16, 48};

/// Recurrence factors and scratch for one order.
template <class Real>
struct Workspace {
  explicit Workspace(int order)
      : executor(1), tables(order, executor), scratch(ledger, kernels::expansion_scratch(order + 1)) {}
  Executor executor;
  TranslationTables<Real> tables;
  MemoryLedger ledger;
  AlignedArray<Real> scratch;
};

template <class Real>
std::vector<Real> projected(const kernels::KernelTable& table, const BoxCloud<Real>& cloud, int order, bool irregular) {
  Workspace<Real> work(order);
  std::vector<Real> row(row_length<Real>(order), Real(0));
  kernels::expansion_kernels<Real>(table).project(cloud.block(), order, irregular, work.tables.recurrence(), row.data(),
                                                  work.scratch.data());
  return row;
}

/// Values of the points for `rows` rows of random coefficients; checks them against the definition.
template <class Real>
void check_evaluation(const kernels::KernelTable& table, const BoxCloud<Real>& cloud, int order, bool irregular, int n_rows) {
  Workspace<Real> work(order);
  reference::Random random(std::uint64_t(order) + 5);
  std::vector<std::vector<Real>> rows(std::size_t(n_rows), std::vector<Real>(row_length<Real>(order), Real(0)));
  for (std::vector<Real>& row : rows)
    for (std::size_t i = 0; i < term_count(order); ++i) row[i] = Real(random.uniform(-1, 1));
  std::vector<std::vector<Real>> values(std::size_t(n_rows), std::vector<Real>(cloud.block().count, Real(0)));
  std::vector<const Real*> row_pointers;
  std::vector<Real*> value_pointers;
  for (std::size_t c = 0; c < rows.size(); ++c) {
    row_pointers.push_back(rows[c].data());
    value_pointers.push_back(values[c].data());
  }
  kernels::expansion_kernels<Real>(table).evaluate(cloud.block(), order, irregular, work.tables.recurrence(),
                                                   row_pointers.data(), n_rows, value_pointers.data());
  for (std::size_t c = 0; c < rows.size(); ++c)
    for (std::size_t i = 0; i < cloud.count; ++i) {
      const long double exact = unit::expansion_at(rows[c], order, cloud.place(i), irregular);
      long double size = 0;
      for (long double h : unit::harmonics(order, cloud.place(i), irregular)) size += std::abs(h);
      ASSERT_LE(std::abs(values[c][i] - exact), 8 * (order + 1) * double(std::numeric_limits<Real>::epsilon()) * size)
          << order << ", " << i;
    }
}

class Harmonics : public unit::OnTarget {
 protected:
  template <class Real>
  void check_projection(std::size_t count, int order, bool irregular) {
    const BoxCloud<Real> cloud(count, 7 + count, irregular ? 3.0 : 0.0);
    const std::vector<Real> row = projected(table(), cloud, order, irregular);
    std::vector<long double> exact(term_count(order), 0.0L), size = exact;
    for (std::size_t j = 0; j < count; ++j) {
      const std::vector<long double> h = unit::harmonics(order, cloud.place(j), irregular);
      for (std::size_t i = 0; i < h.size(); ++i) {
        exact[i] += cloud.q[j] * h[i];
        const int n = int(std::sqrt(double(i) + 0.5));  // the size of all harmonics of the degree
        size[i] +=
            std::abs(cloud.q[j]) * 1.5L * std::pow(unit::length_of(cloud.place(j)), (long double)(irregular ? -n - 1 : n));
      }
    }
    for (std::size_t i = 0; i < exact.size(); ++i)
      ASSERT_LE(std::abs(row[i] - exact[i]), (8 * (order + 1) + double(count)) * std::numeric_limits<Real>::epsilon() * size[i])
          << "order " << order << ", term " << i << ", points " << count;
    for (std::size_t i = exact.size(); i < row.size(); ++i) ASSERT_EQ(row[i], 0);
  }
};
INSTANTIATE_TEST_SUITE_P(, Harmonics, testing::ValuesIn(unit::available_targets()), unit::target_word);

TEST_P(Harmonics, ProjectionFollowsTheDefinitionInDouble) {
  for (int order : kOrders)
    for (bool irregular : {false, true}) check_projection<double>(11, order, irregular);
}

TEST_P(Harmonics, ProjectionFollowsTheDefinitionInSingle) {
  for (int order : {0, 1, 2, 5, 12})
    for (bool irregular : {false, true}) check_projection<float>(11, order, irregular);
}

TEST_P(Harmonics, ProjectionTakesAnyNumberOfPoints) {
  for (std::size_t count : unit::counts_around_widths()) {
    check_projection<double>(count, 4, false);
    check_projection<float>(count, 4, true);
  }
}

TEST_P(Harmonics, ProjectionAddsToTheRow) {
  Workspace<double> work(6);
  const BoxCloud<double> cloud(5, 1);
  const std::vector<double> once = projected(table(), cloud, 6, false);
  std::vector<double> twice = once;
  table().double_precision.project(cloud.block(), 6, false, work.tables.recurrence(), twice.data(), work.scratch.data());
  for (std::size_t i = 0; i < once.size(); ++i) EXPECT_EQ(twice[i], 2 * once[i]);
}

TEST_P(Harmonics, EvaluationFollowsTheDefinition) {
  for (int order : {0, 1, 2, 3, 8, 24})
    for (bool irregular : {false, true})
      for (int rows : {1, 4}) {
        check_evaluation(table(), BoxCloud<double>(9, 3, irregular ? 2.0 : 0.0), order, irregular, rows);
        check_evaluation(table(), BoxCloud<float>(9, 3, irregular ? 2.0 : 0.0), order, irregular, rows);
      }
}

TEST_P(Harmonics, EvaluationTakesAnyNumberOfPoints) {
  for (std::size_t count : unit::counts_around_widths()) {
    check_evaluation(table(), BoxCloud<double>(count, 3), 5, false, 4);
    check_evaluation(table(), BoxCloud<float>(count, 3, 2.0), 5, true, 1);
  }
}

/// Largest difference between the direct potential and that of the two steps project, evaluate, over the sum of absolute terms.
double worst_potential(const kernels::KernelTable& table, bool irregular, std::size_t swapped = 0) {
  constexpr int kOrder = 24;  // (0.16 / 3)^24 leaves only rounding
  const BoxCloud<double> near(20, 21, 0, 0.1), far(20, 22, 3.0);
  const BoxCloud<double>&sources = irregular ? far : near, &targets = irregular ? near : far;
  std::vector<double> row = projected(table, sources, kOrder, irregular);
  if (swapped) std::swap(row[swapped], row[swapped + 1]);
  Workspace<double> work(kOrder);
  std::vector<double> values(targets.block().count);
  const double* rows = row.data();
  double* to = values.data();
  table.double_precision.evaluate(targets.block(), kOrder, !irregular, work.tables.recurrence(), &rows, 1, &to);
  double worst = 0;
  for (std::size_t i = 0; i < targets.count; ++i) {
    long double sum = 0, size = 0;
    for (std::size_t j = 0; j < sources.count; ++j) {
      const long double r = unit::distance(sources.place(j), targets.place(i));
      sum += sources.q[j] / r;
      size += std::abs(sources.q[j]) / r;
    }
    worst = std::max(worst, double(std::abs(values[i] - sum) / size));
  }
  return worst;
}

TEST_P(Harmonics, ChargesToMultipoleToTargetsIsTheDirectSum) {
  EXPECT_LE(worst_potential(table(), false), 1e-14);
}

TEST_P(Harmonics, ChargesToLocalToTargetsIsTheDirectSum) {
  EXPECT_LE(worst_potential(table(), true), 1e-14);
}

TEST_P(Harmonics, SwappedCoefficientsAreNoticed) {
  EXPECT_GT(worst_potential(table(), false, 4), 1e-6);
}

}  // namespace
}  // namespace farsum
