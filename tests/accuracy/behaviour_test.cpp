// Coincident charges, targets on charges, evaluation elsewhere, memory limit, cancellation, energies.
#include <gtest/gtest.h>

#include <chrono>
#include <cmath>

#include "tests/accuracy/tolerance_check.hpp"
#include "tests/reference/random.hpp"

namespace farsum::accuracy {
namespace {

using namespace reference;

const Method kMethods[] = {Method::direct, Method::tree};

bool contains(const std::string& text, const std::string& part) {
  return text.find(part) != std::string::npos;
}

double seconds_of(const std::function<void()>& call) {
  const auto start = std::chrono::steady_clock::now();
  call();
  return std::chrono::duration<double>(std::chrono::steady_clock::now() - start).count();
}

Options skipping(double tolerance, Method method = Method::tree) {
  Options options = with(tolerance, method);
  options.coincident = Coincident::skip;
  return options;
}

/// Scene in which charge `a` and charge `b` share their place.
Charges with_coincidence(std::size_t a, std::size_t b) {
  Charges charges = make_scene(Shape::cube, Signs::random, 2000, 101);
  charges.x[b] = charges.x[a];
  charges.y[b] = charges.y[a];
  charges.z[b] = charges.z[a];
  return charges;
}

TEST(CoincidentCharges, AreAnErrorThatNamesBoth) {
  for (Method method : kMethods) {
    const Outcome outcome = solve(with_coincidence(431, 1789), with(1e-6, method));
    ASSERT_EQ(outcome.code, ErrorCode::coincident_charges) << outcome.message;
    EXPECT_TRUE(contains(outcome.message, "431") && contains(outcome.message, "1789")) << outcome.message;
  }
}

TEST(CoincidentCharges, NegativeAndPositiveZeroAreTheSamePlace) {
  Charges charges = make_scene(Shape::cube, Signs::one, 300, 102);
  charges.add({0.0, 0.5, 0.5}, 1);
  charges.add({-0.0, 0.5, 0.5}, 1);
  for (Method method : kMethods) EXPECT_EQ(solve(charges, with(1e-6, method)).code, ErrorCode::coincident_charges);
}

TEST(CoincidentCharges, SkippedGiveTheSumWithoutTheirPairs) {
  Charges charges = with_coincidence(431, 1789);
  for (int i = 0; i < 150; ++i) charges.add(charges.place(7), 0.3 * i - 20);  // more than a leaf at one place
  Subject subject{"coincident", charges, whole(charges)};
  for (Method method : kMethods) {
    for (double t : {1e-4, 1e-9}) expect_contract(subject, skipping(t, method));
    EXPECT_EQ(solve(charges, skipping(1e-6, method)).report.notes.skipped_coincident, 151u);
  }
}

TEST(CoincidentCharges, AMillionAtOnePlaceAreQuick) {
  Charges charges;
  for (int i = 0; i < 1000000; ++i) charges.add({0.1, 0.2, 0.3}, i % 3 - 0.5);
  Outcome refused, skipped;
  EXPECT_LT(seconds_of([&] { refused = solve(charges, with(1e-6, Method::automatic)); }), 20);
  EXPECT_EQ(refused.code, ErrorCode::coincident_charges);
  EXPECT_LT(seconds_of([&] { skipped = solve(charges, skipping(1e-6)); }), 20);
  ASSERT_TRUE(skipped.good()) << skipped.message;
  EXPECT_EQ(skipped.report.notes.skipped_coincident, 999999u);
  for (std::size_t i = 0; i < charges.size(); ++i) {
    ASSERT_EQ(skipped.result.potential[i], 0);
    ASSERT_EQ(skipped.result.field(i), (Point{0, 0, 0}));
  }
}

TEST(CoincidentCharges, HalfAMillionAtOnePlaceAmongOthersAreQuick) {
  Charges charges = make_scene(Shape::cube, Signs::random, 20000, 103);
  for (int i = 0; i < 500000; ++i) charges.add({0.5, 0.5, 0.5}, 1e-5);
  Outcome outcome;
  EXPECT_LT(seconds_of([&] { outcome = solve(charges, skipping(1e-6, Method::automatic)); }), 60);
  ASSERT_TRUE(outcome.good()) << outcome.message;
  const Sample sample = {
      {0, 1, 777, 19999, 20000, 300000, 519999}, {}, direct_sum(charges, {0, 1, 777, 19999, 20000, 300000, 519999})};
  for (std::size_t k = 0; k < sample.targets.size(); ++k) {
    EXPECT_NEAR(outcome.result.potential[sample.targets[k]], static_cast<double>(sample.exact[k].potential), 0.1);
  }
}

TEST(TargetsOnCharges, AreAnErrorThatNamesBoth) {
  const Charges sources = make_scene(Shape::cube, Signs::one, 3000, 104);
  Charges targets = make_scene(Shape::ball, Signs::one, 1500, 105);
  targets.x[1234] = sources.x[2718];
  targets.y[1234] = sources.y[2718];
  targets.z[1234] = sources.z[2718];
  for (Method method : kMethods) {
    const Outcome outcome = solve_at(sources, targets, with(1e-6, method));
    ASSERT_EQ(outcome.code, ErrorCode::target_on_charge) << outcome.message;
    EXPECT_TRUE(contains(outcome.message, "1234") && contains(outcome.message, "2718")) << outcome.message;
  }
}

TEST(TargetsOnCharges, SkippedGetAllOtherCharges) {
  const Charges charges = make_scene(Shape::gaussian, Signs::random, 2000, 106);
  const std::vector<Exact> exact = direct_sum(charges);
  for (Method method : kMethods) {
    const Outcome outcome = solve_at(charges, charges, skipping(1e-7, method));
    ASSERT_TRUE(outcome.good()) << outcome.message;
    EXPECT_EQ(outcome.report.notes.targets_on_charges, charges.size());
    const Measured found = measure_at(charges, exact, outcome.result);
    EXPECT_LE(found.potential.rms, 1e-7);
    EXPECT_LE(found.field.rms, 1e-7);
    EXPECT_LE(found.field.typical, 3e-7);
  }
}

struct Elsewhere {
  const char* name;
  std::size_t sources, targets;
  Shape target_shape;
  double size, shift;  ///< targets are scaled, then shifted along (1, 2, 3)
};

class EvaluateAt : public testing::TestWithParam<Elsewhere> {};

TEST_P(EvaluateAt, KeepsTheTolerance) {
  const Elsewhere& c = GetParam();
  for (Signs signs : {Signs::one, Signs::random}) {
    const Charges sources = make_scene(Shape::cube, signs, c.sources, 107),
                  raw = make_scene(c.target_shape, Signs::one, c.targets, 108);
    Charges targets;
    for (std::size_t i = 0; i < raw.size(); ++i) {
      targets.add({c.size * raw.x[i] + c.shift, c.size * raw.y[i] + 2 * c.shift, c.size * raw.z[i] + 3 * c.shift});
    }
    const std::vector<Exact> exact = direct_sum_at(sources, targets);
    for (double t : {1e-3, 1e-6, 1e-9, 1e-12}) {
      SCOPED_TRACE(name_of(signs) + " t=" + std::to_string(t * 1e12) + "e-12");
      const Outcome outcome = solve_at(sources, targets, with(t));
      const Measured found = measure_at(sources, exact, outcome.result);
      if (outcome.code == ErrorCode::tolerance_unreachable) {
        EXPECT_LT(t, kFloorSlack * kFloorUnits * std::max(found.potential.rounding, found.field.rounding)) << outcome.message;
        continue;
      }
      ASSERT_TRUE(outcome.good()) << outcome.message;
      EXPECT_EQ(outcome.report.targets, targets.size());
      EXPECT_LE(found.potential.rms, t);
      EXPECT_LE(found.potential.typical, 3 * t);
      EXPECT_LE(found.field.rms, t);
      EXPECT_LE(found.field.typical, 3 * t);
    }
  }
}

const Elsewhere kElsewhere[] = {{"same_region", 3000, 3000, Shape::cube, 1, 0},
                                {"shifted_a_little", 3000, 3000, Shape::lattice, 1.0 / 16, 0.01},
                                {"beside", 3000, 1500, Shape::ball, 1, 3},
                                {"far_away", 3000, 500, Shape::ball, 1, 1e6},
                                {"around_and_far", 2000, 2000, Shape::outlier, 1, 0.25},
                                {"many_targets_few_sources", 20, 20000, Shape::gaussian, 2, 0},
                                {"few_targets_many_sources", 20000, 20, Shape::cube, 1, 0},
                                {"one_target", 20000, 1, Shape::cube, 1, 0},
                                {"one_source", 1, 3000, Shape::shell, 1, 0},
                                {"line_through", 3000, 2000, Shape::slanted_line, 1, 0.2},
                                {"tiny_region", 3000, 1000, Shape::cube, 1e-9, 0.3}};

INSTANTIATE_TEST_SUITE_P(Cases, EvaluateAt, testing::ValuesIn(kElsewhere),
                         [](const testing::TestParamInfo<Elsewhere>& c) { return std::string(c.param.name); });

TEST(EvaluateAtNothing, IsLegal) {
  const Outcome outcome = solve_at(make_scene(Shape::cube, Signs::one, 100, 109), Charges{}, with(1e-6));
  EXPECT_TRUE(outcome.good()) << outcome.message;
}

TEST(MemoryLimit, BelowThePredictionIsRefused) {
  const Charges charges = make_scene(Shape::cube, Signs::one, 20000, 110);
  for (Method method : {Method::tree, Method::automatic}) {
    Options options = with(1e-6, method);
    const Outcome free = solve(charges, options);
    ASSERT_TRUE(free.good()) << free.message;
    const MemoryUse& memory = free.report.memory;
    EXPECT_GT(memory.predicted_bytes, 20000u);
    EXPECT_LE(static_cast<double>(memory.peak_bytes), 1.2 * static_cast<double>(memory.predicted_bytes));
    options.memory_limit = 3 * memory.predicted_bytes;
    EXPECT_TRUE(solve(charges, options).result == free.result) << "the limit changed the plan";
    for (std::uint64_t limit : {std::uint64_t{1}, memory.predicted_bytes / 4}) {
      options.memory_limit = limit;
      EXPECT_EQ(solve(charges, options).code, ErrorCode::memory_refused) << limit;
    }
  }
}

TEST(Cancellation, EndsTheCallAndLeavesAUsableSolver) {
  const Charges charges = make_scene(Shape::cube, Signs::one, 30000, 111);
  for (Method method : kMethods) {
    Options options = with(1e-6, method);
    const Result expected = solve(charges, options).result;
    int asked = 0, limit = 0;
    options.should_stop = [&] { return ++asked > limit; };
    Solver solver(options);
    solver.set_charges(charges.points(), charges.values());
    for (int patience : {0, 1, 2, 1000000000}) {
      asked = 0;
      limit = patience;
      Result result(charges.size());
      ErrorCode code = ErrorCode::internal;
      try {
        solver.evaluate(kBoth, result.view());
        EXPECT_GT(asked, 0) << "never asked";
        EXPECT_TRUE(result == expected);
        code = ErrorCode::cancelled;
      } catch (const Error& error) {
        code = error.code();
        EXPECT_LT(patience, 1000);
      }
      EXPECT_EQ(code, ErrorCode::cancelled) << patience;
    }
  }
}

TEST(Outputs, AloneAreAsGoodAsTogether) {
  const Subject subject = make_subject(Shape::helix, Signs::random, 2500, 112);
  for (double t : {1e-4, 1e-8}) {
    const Outcome potential = solve(subject.charges, with(t), Output::potential),
                  field = solve(subject.charges, with(t), Output::field);
    ASSERT_TRUE(potential.good() && field.good()) << potential.message << field.message;
    EXPECT_EQ(potential.result.field_x[0], Result::kUntouched);
    EXPECT_EQ(field.result.potential[0], Result::kUntouched);
    EXPECT_LE(measure(subject.charges, subject.sample, potential.result).potential.rms, t);
    EXPECT_LE(measure(subject.charges, subject.sample, field.result).field.rms, t);
    EXPECT_TRUE(potential.report.energy.available);
    EXPECT_FALSE(field.report.energy.available);
    EXPECT_FALSE(potential.report.error.field.measured);
  }
}

}  // namespace
}  // namespace farsum::accuracy
