#include "fmm/expansion/indexing.hpp"

#include <gtest/gtest.h>

#include "tests/unit/box_cloud.hpp"
#include "tests/unit/harmonics.hpp"

namespace farsum {
namespace {

TEST(Indexing, TermsFollowEachOtherWithoutGap) {
  std::size_t next = 0;
  for (int n = 0; n <= kMaxOrder; ++n)
    for (int k = -n; k <= n; ++k) ASSERT_EQ(term_index(n, k), next++);
  EXPECT_EQ(next, term_count(kMaxOrder));
}

TEST(Indexing, RowsAreWholeBlocksOf64Bytes) {
  for (int order = 0; order <= kMaxOrder; ++order) {
    EXPECT_EQ(row_length<float>(order) % 16, 0u);
    EXPECT_EQ(row_length<double>(order) % 8, 0u);
    EXPECT_GE(row_length<float>(order), term_count(order));
    EXPECT_LT(row_length<double>(order), term_count(order) + 8);
  }
}

TEST(Indexing, HarmonicsOfADegreeAddUpToALegendrePolynomial) {
  const unit::Vector x{0.3L, -0.7L, 0.2L}, y{-0.1L, 0.4L, 0.9L};
  const long double lengths = unit::length_of(x) * unit::length_of(y),
                    cosine = (x[0] * y[0] + x[1] * y[1] + x[2] * y[2]) / lengths;
  for (int n = 0; n <= 20; ++n) {
    long double sum = 0;
    for (int k = -n; k <= n; ++k) sum += unit::regular(n, k, x) * unit::regular(n, k, y);
    EXPECT_NEAR(double(sum / std::pow(lengths, (long double)(n))), double(std::legendrel(unsigned(n), cosine)), 1e-16) << n;
  }
}

TEST(Indexing, ThePotentialOfAChargeIsTheSeriesOfTheConvention) {
  const unit::Vector y{0.1L, -0.05L, 0.12L}, x{1.3L, 0.8L, -2.1L};
  std::vector<long double> multipole;
  for (int n = 0; n <= 20; ++n)
    for (int k = -n; k <= n; ++k) multipole.push_back(unit::regular(n, k, y));
  EXPECT_NEAR(double(unit::expansion_at(multipole, 20, x, true) * unit::distance(x, y)), 1, 1e-16);
}

}  // namespace
}  // namespace farsum
