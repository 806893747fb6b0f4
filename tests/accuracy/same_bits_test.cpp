// The same bits whatever the number of threads, the history of the solver, the storage of the arrays and the power-of-two unit.
#include <gtest/gtest.h>

#include <cmath>
#include <thread>

#include "tests/accuracy/tolerance_check.hpp"

namespace farsum::accuracy {
namespace {

using namespace reference;

struct Case {
  Shape shape;
  double tolerance;
  Method method;
};

const Case kCases[] = {{Shape::cube, 1e-6, Method::tree},    {Shape::droplets, 1e-9, Method::tree},
                       {Shape::line, 1e-4, Method::tree},    {Shape::scales_1e9, 1e-12, Method::tree},
                       {Shape::shell, 1e-3, Method::tree},   {Shape::cube, 1e-6, Method::direct},
                       {Shape::cube, 1e-12, Method::direct}, {Shape::gaussian, 1e-5, Method::automatic}};

Options options_of(const Case& c, int threads = 0) {
  Options options = with(c.tolerance, c.method);
  options.threads = threads;
  return options;
}

class SameBits : public testing::TestWithParam<Case> {
 protected:
  Charges charges() const { return make_scene(GetParam().shape, Signs::random, 3000, 51); }
  Result fresh(const Charges& charges, int threads = 0) const {
    Outcome outcome = solve(charges, options_of(GetParam(), threads));
    EXPECT_TRUE(outcome.good()) << outcome.message;
    return outcome.result;
  }
};

TEST_P(SameBits, ForAnyNumberOfThreads) {
  const Charges set = charges();
  const Result one = fresh(set, 1);
  for (int threads : {2, 3, 8, 0}) EXPECT_TRUE(one == fresh(set, threads)) << threads;
}

TEST_P(SameBits, AfterOtherCalls) {
  const Charges set = charges(), other = make_scene(Shape::bunch_with_halo, Signs::one, 1700, 52);
  const Result expected = fresh(set);
  Solver solver(options_of(GetParam()));
  Result first(set.size()), between(other.size()), repeat(set.size()), at(100), last(set.size());
  Charges targets = make_scene(Shape::shell, Signs::one, 100, 53);
  solver.set_charges(set.points(), set.values());
  solver.evaluate(kBoth, first.view());
  solver.evaluate(kBoth, repeat.view());
  solver.evaluate_at(targets.points(), kBoth, at.view());
  solver.set_charges(other.points(), other.values());
  solver.evaluate(kBoth, between.view());
  solver.set_charges(set.points(), set.values());
  solver.evaluate(kBoth, last.view());
  EXPECT_TRUE(expected == first && expected == repeat && expected == last);
}

TEST_P(SameBits, AfterUpdateChargesAsFromAFreshSolver) {
  const Charges set = charges();
  Charges changed = set;
  for (std::size_t i = 0; i < set.size(); ++i) changed.q[i] = i % 7 == 0 ? 0.0 : 1.5 - set.q[i];
  // Every evaluation is measured: a fresh solver measures its first one, and a retry may follow from that.
  Options options = options_of(GetParam());
  options.verification = Verification::every;
  Solver solver(options);
  Result before(set.size()), after(set.size());
  solver.set_charges(set.points(), set.values());
  solver.evaluate(kBoth, before.view());
  solver.update_charges(changed.values());
  solver.evaluate(kBoth, after.view());
  EXPECT_TRUE(fresh(set) == before);
  EXPECT_TRUE(fresh(changed) == after);
  EXPECT_FALSE(before == after);
}

TEST_P(SameBits, WithSolversSideBySide) {
  const Charges set = charges();
  const Result expected = fresh(set);
  Result results[2] = {Result(set.size()), Result(set.size())};
  std::thread threads[2];
  for (int k = 0; k < 2; ++k) {
    threads[k] = std::thread([&, k] { results[k] = solve(set, options_of(GetParam())).result; });
  }
  for (std::thread& thread : threads) thread.join();
  EXPECT_TRUE(expected == results[0] && expected == results[1]);
}

TEST_P(SameBits, FromInterleavedStorage) {
  const Charges set = charges();
  const std::size_t n = set.size();
  std::vector<double> rows(3 * n), pairs(2 * n, 1e9), out(5 * n, Result::kUntouched);
  for (std::size_t i = 0; i < n; ++i) {
    for (std::size_t axis = 0; axis < 3; ++axis) rows[3 * i + axis] = set.place(i)[axis];
    pairs[2 * i] = set.q[i];
  }
  Solver solver(options_of(GetParam()));
  solver.set_charges({rows.data(), rows.data() + 1, rows.data() + 2, n, 3}, {pairs.data(), n, 2});
  solver.evaluate(kBoth, {out.data(), out.data() + 1, out.data() + 2, out.data() + 3, 5});
  const Result expected = fresh(set);
  for (std::size_t i = 0; i < n; ++i) {
    ASSERT_EQ(out[5 * i], expected.potential[i]) << i;
    ASSERT_EQ((Point{out[5 * i + 1], out[5 * i + 2], out[5 * i + 3]}), expected.field(i)) << i;
    ASSERT_EQ(out[5 * i + 4], Result::kUntouched) << "written between the results";
  }
}

/// Lengths by 2^k, charges by 2^m: potential by 2^(m-k), field by 2^(m-2k), every mantissa bit kept.
TEST_P(SameBits, ForUnitsThatDifferByAPowerOfTwo) {
  const Charges set = charges();
  const Result expected = fresh(set);
  const int scales[][2] = {{1, 0}, {0, 1}, {-1, -3}, {7, -62}, {-33, 11}, {40, 40}, {-200, 5}, {301, 150}};
  for (const auto& [length, charge] : scales) {
    Charges scaled = set;
    for (std::vector<double>* axis : {&scaled.x, &scaled.y, &scaled.z}) {
      for (double& value : *axis) value = std::ldexp(value, length);
    }
    for (double& value : scaled.q) value = std::ldexp(value, charge);
    Result result = fresh(scaled);
    for (double& value : result.potential) value = std::ldexp(value, length - charge);
    for (std::vector<double>* axis : {&result.field_x, &result.field_y, &result.field_z}) {
      for (double& value : *axis) value = std::ldexp(value, 2 * length - charge);
    }
    EXPECT_TRUE(expected == result) << "length 2^" << length << " charge 2^" << charge;
  }
}

TEST_P(SameBits, OfTheMeasuredErrorToo) {
  const Charges set = charges();
  const Outcome one = solve(set, options_of(GetParam(), 1)), two = solve(set, options_of(GetParam(), 2));
  ASSERT_TRUE(one.good() && two.good()) << one.message << two.message;
  const ErrorMeasure &a = one.report.error, &b = two.report.error;
  EXPECT_EQ(a.potential.rms, b.potential.rms);
  EXPECT_EQ(a.field.rms, b.field.rms);
  EXPECT_EQ(a.field.typical, b.field.typical);
  EXPECT_EQ(a.field.rms_upper, b.field.rms_upper);
  EXPECT_EQ(one.report.energy.value, two.report.energy.value);
  EXPECT_EQ(one.report.checks.total_force, two.report.checks.total_force);
}

std::string case_name(const testing::TestParamInfo<Case>& info) {
  const char* const methods[] = {"automatic", "direct", "tree"};
  return name_of(info.param.shape) + "_" + methods[static_cast<int>(info.param.method)] + "_1em" +
         std::to_string(std::lround(-std::log10(info.param.tolerance)));
}

INSTANTIATE_TEST_SUITE_P(Cases, SameBits, testing::ValuesIn(kCases), case_name);

bool supported(CpuTarget target) {
#if defined(__x86_64__)
  if (target == CpuTarget::avx2) return __builtin_cpu_supports("avx2") && __builtin_cpu_supports("fma");
  if (target == CpuTarget::avx512) {
    return __builtin_cpu_supports("avx512f") && __builtin_cpu_supports("avx512dq") && __builtin_cpu_supports("avx512vl") &&
           __builtin_cpu_supports("avx512bw");
  }
#endif
  return target == CpuTarget::portable;
}

TEST(CpuTargets, AllKeepTheContract) {
  const char* const names[] = {"automatic", "portable", "avx2", "avx512"};
  for (CpuTarget target : {CpuTarget::portable, CpuTarget::avx2, CpuTarget::avx512}) {
    if (!supported(target)) continue;
    for (Method method : {Method::tree, Method::direct}) {
      for (Shape shape : {Shape::cube, Shape::droplets}) {
        const Subject subject = make_subject(shape, Signs::random, 1200, 54);
        for (double t : {1e-3, 1e-6, 1e-9, 1e-12}) {
          Options options = with(t, method);
          options.cpu_target = target;
          SCOPED_TRACE(names[static_cast<int>(target)]);
          expect_contract(subject, options);
          EXPECT_EQ(solve(subject.charges, options).report.plan.cpu_target, names[static_cast<int>(target)]);
        }
      }
    }
  }
}

}  // namespace
}  // namespace farsum::accuracy
