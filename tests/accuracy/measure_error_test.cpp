// measure_error: agrees with what the solver reported, and notices results that are wrong.
#include <gtest/gtest.h>

#include <algorithm>
#include <cmath>
#include <limits>

#include "tests/accuracy/tolerance_check.hpp"

namespace farsum::accuracy {
namespace {

using namespace reference;

constexpr double kTolerance = 1e-6;

ErrorMeasure measured(const Charges& charges, Result result, Output outputs = kBoth) {
  return measure_error(charges.points(), charges.values(), outputs, result.view(), with(kTolerance));
}

class MeasureError : public testing::TestWithParam<Shape> {
 protected:
  MeasureError() : charges_(make_scene(GetParam(), Signs::random, 3000, 121)), outcome_(solve(charges_, with(kTolerance))) {}
  Charges charges_;
  Outcome outcome_;
};

TEST_P(MeasureError, AgreesWithTheReport) {
  ASSERT_TRUE(outcome_.good()) << outcome_.message;
  const ErrorMeasure again = measured(charges_, outcome_.result), &stated = outcome_.report.error;
  EXPECT_TRUE(again.met);
  EXPECT_EQ(again.samples, stated.samples);
  EXPECT_NEAR(again.potential.rms / stated.potential.rms, 1, 0.5);
  EXPECT_NEAR(again.field.rms / stated.field.rms, 1, 0.5);
  EXPECT_NEAR(again.field.typical / stated.field.typical, 1, 0.5);
}

TEST_P(MeasureError, NoticesSystematicFaults) {
  ASSERT_TRUE(outcome_.good()) << outcome_.message;
  const Result& good = outcome_.result;
  Result sign = good, swapped = good, scaled = good, shifted = good;
  for (double& value : sign.field_x) value = -value;
  std::swap(swapped.field_x, swapped.field_z);
  for (double& value : scaled.potential) value *= 1.00001;
  std::rotate(shifted.potential.begin(), shifted.potential.begin() + 1, shifted.potential.end());
  for (const Result& wrong : {sign, swapped, scaled, shifted}) EXPECT_FALSE(measured(charges_, wrong).met);
  EXPECT_GT(measured(charges_, sign).field.rms, 0.01);
  EXPECT_NEAR(measured(charges_, scaled).potential.rms, 1e-5, 1e-6);
}

TEST_P(MeasureError, NoticesOneWrongValueWhereTheFieldIsLargest) {
  ASSERT_TRUE(outcome_.good()) << outcome_.message;
  Result wrong = outcome_.result;
  std::size_t largest = 0;
  for (std::size_t i = 0; i < charges_.size(); ++i) {
    const Point a = wrong.field(i), b = wrong.field(largest);
    if (std::hypot(a[0], a[1], a[2]) > std::hypot(b[0], b[1], b[2])) largest = i;
  }
  wrong.field_x[largest] *= 1.01;
  wrong.field_y[largest] *= 1.01;
  wrong.field_z[largest] *= 1.01;
  EXPECT_FALSE(measured(charges_, wrong).met);
}

INSTANTIATE_TEST_SUITE_P(Shapes, MeasureError, testing::Values(Shape::cube, Shape::line, Shape::droplets, Shape::shell),
                         [](const testing::TestParamInfo<Shape>& kind) { return name_of(kind.param); });

/// All of few targets are verified: not one wrong value escapes.
TEST(MeasureErrorOfFew, NoticesOneWrongValueAnywhere) {
  const Charges charges = make_scene(Shape::ball, Signs::one, 150, 122);
  const Outcome outcome = solve(charges, with(kTolerance));
  ASSERT_TRUE(outcome.good()) << outcome.message;
  EXPECT_TRUE(measured(charges, outcome.result).met);
  for (std::size_t i = 0; i < charges.size(); i += 13) {
    for (std::vector<double> Result::*member : {&Result::potential, &Result::field_x, &Result::field_y, &Result::field_z}) {
      Result wrong = outcome.result;
      (wrong.*member)[i] += 1e-3 * std::fabs(outcome.result.potential[i]);
      EXPECT_FALSE(measured(charges, wrong).met) << i;
      (wrong.*member)[i] = std::numeric_limits<double>::quiet_NaN();
      try {
        EXPECT_FALSE(measured(charges, wrong).met) << "NaN at " << i;
      } catch (const Error& error) {
        EXPECT_EQ(error.code(), ErrorCode::not_finite) << error.what();
      }
    }
  }
}

TEST(MeasureErrorOfFew, IsTheDefinedNorm) {
  const Charges charges = make_scene(Shape::gaussian, Signs::random, 199, 123);
  const Sample sample = whole(charges);
  Result wrong = solve(charges, with(1e-12)).result;
  for (std::size_t i = 0; i < charges.size(); ++i) {
    wrong.potential[i] += 1e-3 * std::sin(static_cast<double>(i));
    wrong.field_y[i] *= 1 + 1e-4 * std::cos(static_cast<double>(3 * i));
  }
  const ErrorMeasure stated = measured(charges, wrong);
  const Measured found = measure(charges, sample, wrong);
  EXPECT_NEAR(stated.potential.rms / found.potential.rms, 1, 0.01);
  EXPECT_NEAR(stated.potential.typical / found.potential.typical, 1, 0.01);
  EXPECT_NEAR(stated.potential.worst / found.potential.worst, 1, 0.01);
  EXPECT_NEAR(stated.field.rms / found.field.rms, 1, 0.01);
  EXPECT_NEAR(stated.field.typical / found.field.typical, 1, 0.01);
  EXPECT_NEAR(stated.field.worst / found.field.worst, 1, 0.01);
}

TEST(MeasureErrorOfOne, OutputLeavesTheOtherUnmeasured) {
  const Charges charges = make_scene(Shape::cube, Signs::one, 500, 124);
  const Outcome outcome = solve(charges, with(kTolerance));
  const ErrorMeasure potential = measured(charges, outcome.result, Output::potential);
  EXPECT_TRUE(potential.potential.measured && potential.met);
  EXPECT_FALSE(potential.field.measured);
}

TEST(Verification, FollowsTheOption) {
  const Charges charges = make_scene(Shape::cube, Signs::one, 2000, 125);
  for (Verification when : {Verification::never, Verification::first, Verification::every}) {
    Options options = with(kTolerance);
    options.verification = when;
    Solver solver(options);
    Result result(charges.size());
    solver.set_charges(charges.points(), charges.values());
    solver.evaluate(kBoth, result.view());
    EXPECT_EQ(solver.report().error.potential.measured, when != Verification::never);
    EXPECT_LE(measured(charges, result).field.rms, kTolerance);
  }
}

}  // namespace
}  // namespace farsum::accuracy
