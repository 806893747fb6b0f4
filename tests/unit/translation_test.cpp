// What translations compute: expansions moved by every offset against direct sums and the definition of the coefficients.
#include "fmm/expansion/translation.hpp"

#include <gtest/gtest.h>

#include <algorithm>
#include <limits>

#include "fmm/kernels/dispatch.hpp"
#include "fmm/medium/coulomb/truncation.hpp"
#include "tests/unit/box_cloud.hpp"
#include "tests/unit/cpu_targets.hpp"

namespace farsum {
namespace {

using unit::BoxCloud;
using unit::Vector;

template <class Real>
class Translator {
 public:
  Translator(const kernels::KernelTable& table, int order)
      : kernels_(kernels::expansion_kernels<Real>(table)),
        executor_(1),
        tables(order, executor_),
        order_(order),
        scratch_(ledger_, kernels::expansion_scratch(order + 1)) {}

  std::vector<Real> multipole(const BoxCloud<Real>& cloud) {
    std::vector<Real> row(row_length<Real>(order_), Real(0));
    kernels_.project(cloud.block(), order_, false, tables.recurrence(), row.data(), scratch_.data());
    return row;
  }
  std::vector<Real> translated(const kernels::Translation<Real>& step, const std::vector<Real>& from) {
    std::vector<Real> row(row_length<Real>(step.order), Real(0));
    const Real* in = from.data();
    Real* out = row.data();
    kernels_.translate(step, &in, &out, 1, scratch_.data());
    return row;
  }
  std::vector<Real> values(const std::vector<Real>& local, const BoxCloud<Real>& targets, int order) {
    std::vector<Real> result(targets.block().count);
    const Real* row = local.data();
    Real* to = result.data();
    kernels_.evaluate(targets.block(), order, false, tables.recurrence(), &row, 1, &to);
    return result;
  }

 private:
  const kernels::ExpansionKernels<Real>& kernels_;
  Executor executor_;

 public:
  TranslationTables<Real> tables;

 private:
  int order_;
  MemoryLedger ledger_;
  AlignedArray<Real> scratch_;
};

/// Root of the mean square of the potential error, over the root of the sum of q^2, as octaves.
template <class Real>
double error_octaves(const std::vector<Real>& values, const BoxCloud<Real>& sources, const BoxCloud<Real>& targets,
                     const BoxOffset& o) {
  long double squares = 0, strength = 0;
  for (std::size_t j = 0; j < sources.count; ++j) strength += (long double)(sources.q[j]) * sources.q[j];
  for (std::size_t i = 0; i < targets.count; ++i) {
    long double sum = values[i];
    for (std::size_t j = 0; j < sources.count; ++j) {
      const Vector s = sources.place(j);
      sum -= sources.q[j] / unit::distance({s[0] + o.x, s[1] + o.y, s[2] + o.z}, targets.place(i));
    }
    squares += sum * sum;
  }
  return double(-0.5L * std::log2(squares / (targets.count * strength) + 1e-40L));
}

class Translation : public unit::OnTarget {
 protected:
  /// All far offsets at the highest order: the error is that of the truncation table, or rounding.
  template <class Real>
  void check_far(int order, double rounding_octaves) {
    Translator<Real> translator(table(), order);
    const BoxCloud<Real> sources(24, 5), targets(12, 6);
    const std::vector<Real> multipole = translator.multipole(sources);
    int offsets = 0;
    for (int index = 0; index < kOffsets; ++index) {
      const BoxOffset o = offset_of(index);
      if (!Separation{}.occurs(o)) continue;
      ++offsets;
      const std::vector<Real> local = translator.translated(translator.tables.far(index, order), multipole);
      const double wanted = std::min(rounding_octaves, double(coulomb::truncation_row(o.squared())->potential[order]) - 3);
      ASSERT_GE(error_octaves(translator.values(local, targets, order), sources, targets, o), wanted) << o.x << o.y << o.z;
    }
    EXPECT_EQ(offsets, 316);
  }
};
INSTANTIATE_TEST_SUITE_P(, Translation, testing::ValuesIn(unit::available_targets()), unit::target_word);

TEST_P(Translation, FarReproducesTheDirectSumForAllOffsets) {
  check_far<double>(48, 46);
}

TEST_P(Translation, FarReproducesTheDirectSumInSinglePrecision) {
  check_far<float>(18, 19);
}

TEST_P(Translation, FarOfAMonopoleIsAnIrregularHarmonic) {
  Translator<double> translator(table(), 30);
  std::vector<double> charge(row_length<double>(30), 0.0);
  charge[0] = 1;
  for (int index = 0; index < kOffsets; index += 7) {
    const BoxOffset o = offset_of(index);
    if (!Separation{}.occurs(o)) continue;
    const std::vector<double> local = translator.translated(translator.tables.far(index, 30), charge);
    const std::vector<long double> exact =
        unit::harmonics(30, {(long double)(o.x), (long double)(o.y), (long double)(o.z)}, true);
    for (int n = 0; n <= 30; ++n)
      for (int k = -n; k <= n; ++k) {
        const double size = std::pow(double(o.squared()), -0.5 * (n + 1));
        ASSERT_NEAR(local[term_index(n, k)], double(exact[term_index(n, k)]), 1e-14 * size) << index << ": " << n << ", " << k;
      }
  }
}

/// Largest difference between far(offset, order) and the same degrees of far(offset, highest) for an input of degrees <= order.
double prefix_error(const kernels::KernelTable& table, int order, int highest) {
  Translator<double> translator(table, highest);
  reference::Random random{std::uint64_t(order)};
  std::vector<double> shorter(row_length<double>(order), 0.0), longer(row_length<double>(highest), 0.0);
  for (std::size_t i = 0; i < term_count(order); ++i) shorter[i] = longer[i] = random.uniform(-1, 1);
  double worst = 0;
  for (const BoxOffset& o :
       {BoxOffset{2, 0, 0}, BoxOffset{0, 0, -3}, BoxOffset{1, -2, 1}, BoxOffset{-3, 3, 2}, BoxOffset{0, 2, 0}}) {
    const int index = offset_index(o);
    const std::vector<double> a = translator.translated(translator.tables.far(index, order), shorter),
                              b = translator.translated(translator.tables.far(index, highest), longer);
    double size = 0;
    for (std::size_t i = 0; i < term_count(order); ++i) size = std::max(size, std::abs(b[i]));
    for (std::size_t i = 0; i < term_count(order); ++i) worst = std::max(worst, std::abs(a[i] - b[i]) / size);
  }
  return worst;
}

TEST_P(Translation, ALowerOrderIsAPrefix) {
  for (int order : {0, 1, 2, 3, 4, 6, 10, 17, 23}) EXPECT_LE(prefix_error(table(), order, 24), 1e-14) << order;
}

/// Largest difference between the translated multipole of a child and the multipole of its charges about the parent.
template <class Real>
double upward_error(const kernels::KernelTable& table, int order, int octant, int other = -1) {
  Translator<Real> translator(table, order);
  const BoxCloud<Real> child(10, 3);
  const std::vector<Real> row = translator.translated(translator.tables.child_to_parent(octant), translator.multipole(child));
  if (other >= 0) octant = other;
  std::vector<long double> exact(term_count(order), 0.0L);
  for (std::size_t j = 0; j < child.count; ++j) {
    Vector v = child.place(j);
    for (std::size_t axis = 0; axis < 3; ++axis) v[axis] = v[axis] / 2 + ((octant >> axis) & 1 ? 0.25L : -0.25L);
    const std::vector<long double> h = unit::harmonics(order, v, false);
    for (std::size_t i = 0; i < h.size(); ++i) exact[i] += child.q[j] * h[i];
  }
  long double worst = 0;
  for (int n = 0; n <= order; ++n)
    for (int k = -n; k <= n; ++k)
      worst = std::max(worst, std::abs(row[term_index(n, k)] - exact[term_index(n, k)]) / std::pow(0.75L, (long double)(n)));
  return double(worst);
}

TEST_P(Translation, ChildToParentIsExactForEveryDegree) {
  for (int octant = 0; octant < 8; ++octant) {
    for (int order : {2, 3, 9}) EXPECT_LE(upward_error<double>(table(), order, octant), 1e-14) << octant << ", " << order;
    EXPECT_LE(upward_error<float>(table(), 8, octant), 1e-5) << octant;
  }
  EXPECT_LE(upward_error<double>(table(), 48, 6), 1e-14);
}

TEST_P(Translation, AnotherOctantIsNoticed) {
  EXPECT_GT(upward_error<double>(table(), 4, 6, 5), 1e-2);
}

/// Largest difference between half the parent's local expansion and that of the child at the same places.
template <class Real>
double downward_error(const kernels::KernelTable& table, int order, int octant) {
  Translator<Real> translator(table, order);
  reference::Random random(17);
  std::vector<Real> parent(row_length<Real>(order), Real(0));
  for (std::size_t i = 0; i < term_count(order); ++i) parent[i] = Real(random.uniform(-1, 1));
  const std::vector<Real> child = translator.translated(translator.tables.parent_to_child(octant), parent);
  const BoxCloud<Real> places(9, 4);
  long double worst = 0;
  for (std::size_t i = 0; i < places.count; ++i) {
    Vector v = places.place(i);
    const long double at_child = unit::expansion_at(child, order, v, false);
    for (std::size_t axis = 0; axis < 3; ++axis) v[axis] = v[axis] / 2 + ((octant >> axis) & 1 ? 0.25L : -0.25L);
    long double size = 0;
    for (long double h : unit::harmonics(order, v, false)) size += std::abs(h);
    worst = std::max(worst, std::abs(at_child - unit::expansion_at(parent, order, v, false) / 2) / size);
  }
  return double(worst);
}

TEST_P(Translation, ParentToChildIsExactForEveryDegree) {
  for (int octant = 0; octant < 8; ++octant) {
    for (int order : {2, 3, 9}) EXPECT_LE(downward_error<double>(table(), order, octant), 1e-14) << octant << ", " << order;
    EXPECT_LE(downward_error<float>(table(), 8, octant), 1e-5) << octant;
  }
  EXPECT_LE(downward_error<double>(table(), 48, 1), 1e-13);
}

TEST(BoxOffset, IndexAndOffsetAreInverse) {
  int far = 0;
  for (int index = 0; index < kOffsets; ++index) {
    EXPECT_EQ(offset_index(offset_of(index)), index);
    far += Separation{}.occurs(offset_of(index));
  }
  EXPECT_EQ(far, 316);
}

TEST(BoxOffset, WideSeparationHasTheOffsetsOfTheNearestPairsChildrenInstead) {
  constexpr Separation kWide{4};
  EXPECT_TRUE(kWide.near({2, 0, 0}));
  EXPECT_FALSE(kWide.occurs({0, -2, 0}));
  EXPECT_TRUE(kWide.occurs({5, 1, -1}));
  EXPECT_FALSE(kWide.occurs({5, 2, 0}));
  EXPECT_FALSE(Separation{}.occurs({4, 0, 0}));
}

TEST(TranslationTables, AreTheSameFromAnyNumberOfThreads) {
  Executor one(1), many(4);
  const TranslationTables<double> a(9, one), b(9, many);
  EXPECT_EQ(a.bytes(), b.bytes());
  for (int index = 0; index < kOffsets; index += 11) {
    if (!Separation{}.occurs(offset_of(index))) continue;
    const kernels::Translation<double> x = a.far(index, 9), y = b.far(index, 9);
    for (int i = 0; i < 300; ++i) ASSERT_EQ(x.turn[i], y.turn[i]);
  }
}

}  // namespace
}  // namespace farsum
