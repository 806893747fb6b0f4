// The references themselves: closed forms, exact pathological sums, and proof that the norms notice a wrong result.
#include <gtest/gtest.h>

#include <cmath>

#include "tests/reference/norms.hpp"
#include "tests/reference/scenes.hpp"

namespace farsum::reference {
namespace {

Result rounded(const std::vector<Exact>& exact) {
  Result result(exact.size());
  for (std::size_t i = 0; i < exact.size(); ++i) {
    result.potential[i] = static_cast<double>(exact[i].potential);
    result.field_x[i] = static_cast<double>(exact[i].field[0]);
    result.field_y[i] = static_cast<double>(exact[i].field[1]);
    result.field_z[i] = static_cast<double>(exact[i].field[2]);
  }
  return result;
}

TEST(DirectSum, GivesCoulombsLawForTwoCharges) {
  Charges pair;
  pair.add({1, 2, 3}, 2);
  pair.add({1, 6, 6}, -3);  // 5 away
  const std::vector<Exact> exact = direct_sum(pair);
  EXPECT_NEAR(static_cast<double>(exact[0].potential), -0.6, 1e-16);
  EXPECT_NEAR(static_cast<double>(exact[1].potential), 0.4, 1e-16);
  EXPECT_EQ(exact[0].field[0], 0);
  EXPECT_NEAR(static_cast<double>(exact[0].field[1]), 3.0 * 4 / 125, 1e-17);  // drawn to the negative charge
  EXPECT_NEAR(static_cast<double>(exact[1].field[2]), 2.0 * 3 / 125, 1e-17);
  EXPECT_DOUBLE_EQ(exact[0].nearest, 5);
}

TEST(DirectSum, KeepsWhatCancellationLeaves) {
  Charges charges;
  charges.add({1, 0, 0}, 0x1p60);
  charges.add({0, 1, 0}, 1);
  charges.add({0, 0, 1}, 0x1p-10);
  charges.add({-1, 0, 0}, -0x1p60);
  charges.add({0, -1, 0}, -1);
  Charges target;
  target.add({0, 0, 0});
  EXPECT_EQ(static_cast<double>(direct_sum_at(charges, target)[0].potential), 0x1p-10);
}

TEST(DirectSum, LeavesCoincidentChargesOut) {
  Charges charges;
  for (double q : {1.0, 2.0}) charges.add({0, 0, 0}, q);
  charges.add({2, 0, 0}, 4);
  const std::vector<Exact> exact = direct_sum(charges);
  EXPECT_EQ(exact[0].coincident, 1u);
  EXPECT_EQ(static_cast<double>(exact[0].potential), 2);
  EXPECT_EQ(static_cast<double>(exact[2].potential), 1.5);
  EXPECT_EQ(exact[0].nearest, 2);
}

TEST(Norms, AreZeroToRoundingForTheRoundedExactResult) {
  const Charges charges = make_scene(Shape::ball, Signs::random, 300, 1);
  const Sample sample = whole(charges);
  const Measured measured = measure(charges, sample, rounded(sample.exact));
  EXPECT_LT(measured.potential.rms, 1e-16);
  EXPECT_LT(measured.field.typical, 2e-16);
}

TEST(Norms, AreThoseOfAKnownError) {
  const Charges charges = make_scene(Shape::ball, Signs::one, 300, 2);
  const Sample sample = whole(charges);
  Result result = rounded(sample.exact);
  for (double& value : result.potential) value *= 1 + 1e-5;  // e_i = 1e-5 |f_i|
  const Measured measured = measure(charges, sample, result);
  EXPECT_NEAR(measured.potential.rms, 1e-5, 1e-9);
  EXPECT_GT(measured.potential.worst, 1.05e-5);
  EXPECT_LE(measured.potential.typical, 1.0001e-5);  // |f_i| or more in the denominator
  EXPECT_GT(measured.potential.typical, 0.8e-5);
}

TEST(Norms, UseTheNaturalSizeWhereTheFieldVanishes) {
  const Charges block = cubic_block(9, true);  // rock salt: the field is zero inside; spacing 1, charges 1, hence f0 = 1
  const Sample sample = whole(block);
  Result result = rounded(sample.exact);
  for (double& value : result.field_x) value += 1e-4;
  const Measured measured = measure(block, sample, result);
  EXPECT_NEAR(measured.field.rms, 1e-4, 1e-8);
}

TEST(Norms, NoticeFaults) {
  const Charges charges = make_scene(Shape::cube, Signs::random, 400, 3);
  const Sample sample = whole(charges);
  const Result good = rounded(sample.exact);
  Result sign = good, swapped = good, one = good;
  for (double& value : sign.field_y) value = -value;
  std::swap(swapped.field_x, swapped.field_z);
  one.potential[17] *= 1.01;
  EXPECT_GT(measure(charges, sample, sign).field.rms, 0.1);
  EXPECT_GT(measure(charges, sample, swapped).field.rms, 0.1);
  EXPECT_GT(measure(charges, sample, one).potential.rms, 1e-5);
}

TEST(Sample, OfChosenTargetsAgreesWithAllTargets) {
  for (Shape shape : {Shape::cube, Shape::line, Shape::close_pairs}) {
    const Charges charges = make_scene(shape, Signs::one, 3000, 4);
    const Sample all = whole(charges), some = chosen(charges, 100, 400);
    Result result = rounded(all.exact);
    for (std::size_t i = 0; i < charges.size(); ++i) result.field_x[i] *= 1 + 1e-6 * std::sin(static_cast<double>(i));
    const Measured full = measure(charges, all, result), sampled = measure(charges, some, result);
    EXPECT_NEAR(sampled.field.rms / full.field.rms, 1, 0.2) << name_of(shape);
    EXPECT_NEAR(sampled.field.typical / full.field.typical, 1, 0.2) << name_of(shape);
  }
}

TEST(Scenes, HaveTheirCountSignsAndNoCoincidentCharges) {
  for (Shape shape : all_shapes()) {
    const Charges one = make_scene(shape, Signs::one, 1000, 5), neutral = make_scene(shape, Signs::neutral, 1000, 5);
    EXPECT_EQ(one.size(), 1000u) << name_of(shape);
    double total = 0;
    for (double q : one.q) EXPECT_GT(q, 0);
    for (double q : neutral.q) total += q;
    if (shape != Shape::heavy_charge) {
      EXPECT_NEAR(total, 0, 1e-12) << name_of(shape);
    }
    for (const Exact& exact : direct_sum(one)) ASSERT_EQ(exact.coincident, 0u) << name_of(shape);
  }
}

}  // namespace
}  // namespace farsum::reference
