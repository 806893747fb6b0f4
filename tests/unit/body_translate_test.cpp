// kernels/body_translate.hpp: batches of boxes on every CPU target. What a translation computes is held in translation_test.
#include <gtest/gtest.h>

#include <algorithm>
#include <limits>

#include "tests/unit/box_cloud.hpp"
#include "tests/unit/cpu_targets.hpp"

namespace farsum {
namespace {

/// Rows of random coefficients of one order, and the rows that a translation adds to.
template <class Real>
struct Rows {
  std::vector<std::vector<Real>> in, out;

  Rows(std::size_t count, int order, std::uint64_t seed)
      : in(count, std::vector<Real>(row_length<Real>(order), Real(0))), out(in) {
    reference::Random random(seed);
    for (std::vector<Real>& row : in)
      for (std::size_t i = 0; i < term_count(order); ++i) row[i] = Real(random.uniform(-1, 1));
  }

  void translate(const kernels::KernelTable& table, const kernels::Translation<Real>& step) {
    MemoryLedger ledger;
    AlignedArray<Real> scratch(ledger, kernels::expansion_scratch(step.order));
    std::vector<const Real*> from;
    std::vector<Real*> to;
    for (std::size_t i = 0; i < in.size(); ++i) {
      from.push_back(in[i].data());
      to.push_back(out[i].data());
    }
    kernels::expansion_kernels<Real>(table).translate(step, from.data(), to.data(), in.size(), scratch.data());
  }
};

template <class Real>
double largest(const std::vector<Real>& row) {
  double size = 0;
  for (Real value : row) size = std::max(size, double(std::abs(value)));
  return size;
}

/// The rows of a batch against each row alone, for batches of 0 .. 2 W + 3 with the widest W.
template <class Real>
void check_batches(const kernels::KernelTable& table, int order) {
  Executor executor(1);
  const TranslationTables<Real> tables(order, executor);
  const kernels::Translation<Real> step = tables.far(offset_index({2, -1, 3}), order);
  for (std::size_t count = 0; count <= 2 * kernels::kRealPad<Real> + 3; ++count) {
    Rows<Real> all(count, order, 3);
    all.translate(table, step);
    for (std::size_t i = 0; i < count; ++i) {
      Rows<Real> alone(1, order, 3);
      alone.in[0] = all.in[i];
      alone.translate(table, step);
      const double bound = 16 * std::numeric_limits<Real>::epsilon() * largest(alone.out[0]);
      for (std::size_t k = 0; k < all.out[i].size(); ++k)
        ASSERT_NEAR(all.out[i][k], alone.out[0][k], bound) << count << ", " << i;
    }
  }
}

class Translate : public unit::OnTarget {};
INSTANTIATE_TEST_SUITE_P(, Translate, testing::ValuesIn(unit::available_targets()), unit::target_word);

TEST_P(Translate, BatchesOfAnySizeInDouble) {
  for (int order : {2, 3, 5}) check_batches<double>(table(), order);
}

TEST_P(Translate, BatchesOfAnySizeInSingle) {
  for (int order : {2, 3, 5}) check_batches<float>(table(), order);
}

TEST_P(Translate, AddsToTheTargets) {
  Executor executor(1);
  const TranslationTables<double> tables(4, executor);
  const kernels::Translation<double> step = tables.far(offset_index({0, 2, 0}), 4);
  Rows<double> rows(3, 4, 9);
  rows.translate(table(), step);
  const auto once = rows.out;
  rows.translate(table(), step);
  for (std::size_t i = 0; i < 3; ++i)
    for (std::size_t k = 0; k < once[i].size(); ++k) EXPECT_EQ(rows.out[i][k], 2 * once[i][k]);
}

TEST_P(Translate, KeepsThePaddingOfRowsZero) {
  Executor executor(1);
  const TranslationTables<float> tables(6, executor);
  Rows<float> rows(5, 6, 9);
  rows.translate(table(), tables.child_to_parent(3));
  for (const std::vector<float>& row : rows.out)
    for (std::size_t k = term_count(6); k < row.size(); ++k) EXPECT_EQ(row[k], 0);
}

TEST_P(Translate, IsLinear) {
  Executor executor(1);
  const TranslationTables<double> tables(7, executor);
  Rows<double> rows(3, 7, 4);
  for (std::size_t k = 0; k < rows.in[0].size(); ++k) rows.in[2][k] = 2 * rows.in[0][k] - 3 * rows.in[1][k];
  rows.translate(table(), tables.parent_to_child(5));
  const double bound = 1e-14 * (largest(rows.out[0]) + largest(rows.out[1]));
  for (std::size_t k = 0; k < rows.out[0].size(); ++k)
    EXPECT_NEAR(rows.out[2][k], 2 * rows.out[0][k] - 3 * rows.out[1][k], 8 * bound);
}

TEST_P(Translate, AgreesWithThePortableTarget) {
  Executor executor(1);
  const TranslationTables<double> tables(20, executor);
  const kernels::Translation<double> step = tables.far(offset_index({-3, 1, 1}), 20);
  Rows<double> here(19, 20, 6), portable(19, 20, 6);
  here.translate(table(), step);
  portable.translate(kernels::kernel_table(CpuTarget::portable), step);
  for (std::size_t i = 0; i < 19; ++i) {
    const double bound = 1e-13 * largest(portable.out[i]);
    for (std::size_t k = 0; k < here.out[i].size(); ++k) ASSERT_NEAR(here.out[i][k], portable.out[i][k], bound);
  }
}

}  // namespace
}  // namespace farsum
