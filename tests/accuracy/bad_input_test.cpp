// What the engine refuses, with which code, and that the message names the thing; and the smallest legal inputs.
#include <gtest/gtest.h>

#include <cmath>
#include <limits>

#include "tests/accuracy/tolerance_check.hpp"

namespace farsum::accuracy {
namespace {

using namespace reference;

constexpr double kNan = std::numeric_limits<double>::quiet_NaN(), kInfinity = std::numeric_limits<double>::infinity();
const Method kMethods[] = {Method::automatic, Method::direct, Method::tree};

bool contains(const std::string& text, const std::string& part) {
  return text.find(part) != std::string::npos;
}

TEST(SmallInputs, NoChargesAreLegal) {
  for (Method method : kMethods) {
    const Outcome outcome = solve(Charges{}, with(1e-6, method));
    EXPECT_TRUE(outcome.good()) << outcome.message;
    EXPECT_EQ(outcome.report.charges, 0u);
    EXPECT_EQ(outcome.report.error.potential.rms, 0);
  }
}

TEST(SmallInputs, NoChargesGiveZeroAtTargets) {
  Charges targets;
  targets.add({1, 2, 3});
  for (Method method : kMethods) {
    const Outcome outcome = solve_at(Charges{}, targets, with(1e-6, method));
    EXPECT_TRUE(outcome.good()) << outcome.message;
    EXPECT_EQ(outcome.result.potential[0], 0);
    EXPECT_EQ(outcome.result.field(0), (Point{0, 0, 0}));
  }
}

TEST(SmallInputs, OneChargeFeelsNothing) {
  Charges one;
  one.add({1e5, -2, 3}, 4);
  for (Method method : kMethods) {
    const Outcome outcome = solve(one, with(1e-6, method));
    EXPECT_TRUE(outcome.good()) << outcome.message;
    EXPECT_EQ(outcome.result.potential[0], 0);
    EXPECT_EQ(outcome.result.field(0), (Point{0, 0, 0}));
    EXPECT_EQ(outcome.report.error.field.rms, 0);
    EXPECT_EQ(outcome.report.total_charge, 4);
    EXPECT_EQ(outcome.report.extent, 0);
  }
}

TEST(SmallInputs, TwoChargesObeyCoulombsLaw) {
  Charges pair;
  pair.add({1, 2, 3}, 2);
  pair.add({1, 6, 6}, -3);  // 5 away
  for (Method method : kMethods) {
    const Outcome outcome = solve(pair, with(1e-13, method));
    ASSERT_TRUE(outcome.good()) << outcome.message;
    EXPECT_NEAR(outcome.result.potential[0], -0.6, 2e-15);
    EXPECT_NEAR(outcome.result.potential[1], 0.4, 2e-15);
    EXPECT_NEAR(outcome.result.field_y[0], 0.096, 2e-15);
    EXPECT_NEAR(outcome.result.field_z[1], 0.048, 2e-15);
    EXPECT_NEAR(outcome.report.energy.value, -1.2, 4e-15);
    EXPECT_DOUBLE_EQ(outcome.report.notes.nearest_distance, 5);
    EXPECT_EQ(outcome.report.total_charge, -1);
    EXPECT_EQ(outcome.report.extent, 4);
  }
}

TEST(SmallInputs, AllChargesZeroGiveExactZeros) {
  Charges charges = make_scene(Shape::cube, Signs::one, 1000, 91);
  std::fill(charges.q.begin(), charges.q.end(), 0.0);
  for (Method method : kMethods) {
    const Outcome outcome = solve(charges, with(1e-6, method));
    ASSERT_TRUE(outcome.good()) << outcome.message;
    for (std::size_t i = 0; i < charges.size(); ++i) {
      ASSERT_EQ(outcome.result.potential[i], 0);
      ASSERT_EQ(outcome.result.field(i), (Point{0, 0, 0}));
    }
    EXPECT_EQ(outcome.report.error.potential.rms, 0);
    EXPECT_EQ(outcome.report.error.field.typical, 0);
    EXPECT_TRUE(outcome.report.error.met);
  }
}

TEST(BadInput, NotFiniteNamesTheIndex) {
  for (double bad : {kNan, kInfinity, -kInfinity}) {
    for (std::vector<double> Charges::*member : {&Charges::x, &Charges::y, &Charges::z, &Charges::q}) {
      Charges charges = make_scene(Shape::cube, Signs::one, 2000, 92);
      (charges.*member)[1357] = bad;
      (charges.*member)[1999] = bad;
      const Outcome outcome = solve(charges, with(1e-6));
      ASSERT_EQ(outcome.code, ErrorCode::not_finite);
      EXPECT_TRUE(contains(outcome.message, "1357")) << outcome.message;
    }
  }
}

TEST(BadInput, NotFiniteTargetsAndNewChargesNameTheIndex) {
  Charges charges = make_scene(Shape::cube, Signs::one, 500, 93), targets = make_scene(Shape::ball, Signs::one, 400, 94);
  targets.y[321] = kNan;
  const Outcome outcome = solve_at(charges, targets, with(1e-6));
  ASSERT_EQ(outcome.code, ErrorCode::not_finite);
  EXPECT_TRUE(contains(outcome.message, "321")) << outcome.message;
  Charges changed = charges;
  changed.q[432] = kInfinity;
  Solver solver(with(1e-6));
  solver.set_charges(charges.points(), charges.values());
  try {
    solver.update_charges(changed.values());
    Result result(charges.size());
    solver.evaluate(kBoth, result.view());
    FAIL() << "an infinite charge was accepted";
  } catch (const Error& error) {
    EXPECT_EQ(error.code(), ErrorCode::not_finite);
    EXPECT_TRUE(contains(error.what(), "432")) << error.what();
  }
}

TEST(BadInput, ToleranceOutsideTheRangeIsRefused) {
  for (double bad : {0.0, -1e-6, 0.011, 1.0, 0.99e-13, kNan, kInfinity}) {
    EXPECT_EQ(solve(Charges{}, with(bad)).code, ErrorCode::invalid_argument) << bad;
  }
  for (double good : {1e-2, 1e-13}) EXPECT_TRUE(solve(Charges{}, with(good)).good()) << good;
}

TEST(BadInput, OptionsThatMakeNoSenseAreRefused) {
  Options threads = with(1e-6), leaf = with(1e-6);
  threads.threads = -1;
  leaf.leaf_capacity = -5;
  EXPECT_EQ(solve(Charges{}, threads).code, ErrorCode::invalid_argument);
  EXPECT_EQ(solve(Charges{}, leaf).code, ErrorCode::invalid_argument);
}

ErrorCode code_of(const std::function<void()>& call) {
  try {
    call();
  } catch (const Error& error) {
    return error.code();
  }
  return ErrorCode::internal;  // stands for: no error
}

TEST(BadInput, SizesAndPointersThatDoNotFitAreRefused) {
  const Charges charges = make_scene(Shape::cube, Signs::one, 100, 95);
  Result result(100);
  PointsView points = charges.points(), holes = points;
  ChargesView values = charges.values(), few = values, none = values;
  holes.y = nullptr;
  few.count = 99;
  none.q = nullptr;
  Solver solver(with(1e-6));
  EXPECT_EQ(code_of([&] { solver.set_charges(points, few); }), ErrorCode::invalid_argument);
  EXPECT_EQ(code_of([&] { solver.set_charges(holes, values); }), ErrorCode::invalid_argument);
  EXPECT_EQ(code_of([&] { solver.set_charges(points, none); }), ErrorCode::invalid_argument);
  solver.set_charges(points, values);
  EXPECT_EQ(code_of([&] { solver.update_charges(few); }), ErrorCode::invalid_argument);
  ResultView missing = result.view();
  missing.field_z = nullptr;
  EXPECT_EQ(code_of([&] { solver.evaluate(kBoth, missing); }), ErrorCode::invalid_argument);
  solver.evaluate(Output::potential, {result.potential.data(), nullptr, nullptr, nullptr, 1});
  EXPECT_EQ(result.field_x[0], Result::kUntouched);
}

/// Three places; the middle one 2^-k of the extent from the first.
Charges spread(int k) {
  Charges charges;
  charges.add({0, 0, 0}, 1);
  charges.add({std::ldexp(1.0, -k), 0, 0}, 1);
  charges.add({1, 0, 0}, 1);
  return charges;
}

TEST(Range, UpToTwoToTheSixtiethIsSummed) {
  for (Method method : kMethods) {
    const Charges charges = spread(58);
    const Outcome outcome = solve(charges, with(1e-12, method));
    ASSERT_TRUE(outcome.good()) << outcome.message;
    EXPECT_DOUBLE_EQ(outcome.result.potential[0], 0x1p58 + 1);
    EXPECT_DOUBLE_EQ(outcome.result.field_x[1], 0x1p116);
    EXPECT_DOUBLE_EQ(outcome.result.potential[2], 2);
  }
}

TEST(Range, BeyondItThePairIsNamed) {
  for (Method method : kMethods) {
    for (int k : {62, 100, 600, 1070}) {
      Charges charges = make_scene(Shape::cube, Signs::one, 300, 96);
      for (std::vector<double>* axis : {&charges.x, &charges.y, &charges.z}) (*axis)[123] = 0;
      charges.add({std::ldexp(1.0, -k), 0, 0}, 1);  // index 300
      const Outcome outcome = solve(charges, with(1e-6, method));
      ASSERT_EQ(outcome.code, ErrorCode::range_exceeded) << k << outcome.message;
      EXPECT_TRUE(contains(outcome.message, "123") && contains(outcome.message, "300")) << outcome.message;
    }
  }
}

TEST(Range, ResultsOutsideTheDoubleRangeAreRefused) {
  for (double length : {1e-170, 1e-290}) {
    Charges charges = make_scene(Shape::cube, Signs::one, 300, 97);
    for (std::vector<double>* axis : {&charges.x, &charges.y, &charges.z}) {
      for (double& value : *axis) value *= length;
    }
    EXPECT_EQ(solve(charges, with(1e-6)).code, ErrorCode::range_exceeded) << length;
    const Outcome potential = solve(charges, with(1e-6), Output::potential);  // about 300/length: still a double
    EXPECT_TRUE(potential.good()) << potential.message;
  }
}

TEST(Range, HugeLengthsAndTinyChargesAreLegal) {
  Subject subject = make_subject(Shape::ball, Signs::random, 400, 98);
  for (std::vector<double>* axis : {&subject.charges.x, &subject.charges.y, &subject.charges.z}) {
    for (double& value : *axis) value *= 0x1p400;
  }
  for (double& value : subject.charges.q) value *= 0x1p300;
  subject.sample = whole(subject.charges);
  expect_contract(subject, with(1e-9));
}

}  // namespace
}  // namespace farsum::accuracy
