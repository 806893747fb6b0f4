#include "fmm/verification/verify.hpp"

#include <gtest/gtest.h>

#include <cmath>
#include <limits>

#include "fmm/kernels/dispatch.hpp"
#include "tests/reference/norms.hpp"
#include "tests/unit/tree_case.hpp"

namespace farsum {
namespace {

using reference::Result;

/// A result of known relative error at 900 charges and its verification.
class Verified {
 public:
  explicit Verified(double relative_error, std::size_t n = 900)
      : charges_(make_scene(reference::Shape::cube, reference::Signs::random, n, 4)),
        setting_({&charges_}),
        tree_(unit::tree_of(charges_, setting_, 30)),
        result(n) {
    const std::vector<reference::Exact> exact = reference::direct_sum(charges_);
    for (std::size_t i = 0; i < n; ++i) {
      const double factor = 1 + relative_error;
      result.potential[i] = double(exact[i].potential) * factor;
      result.field_x[i] = double(exact[i].field[0]) * factor;
      result.field_y[i] = double(exact[i].field[1]) * factor;
      result.field_z[i] = double(exact[i].field[2]) * factor;
    }
    for (std::size_t k = 0; k < n; ++k) nearest_.push_back(std::pow(setting_.scale(exact[tree_.index[k]].nearest), 2));
  }

  ErrorMeasure measure(std::size_t samples, double tolerance) {
    Executor executor(2);
    MemoryLedger ledger;
    const AlignedArray<double> q = gather_charges(charges_.values(), PowerOfTwo(0), tree_, executor, ledger);
    const int length = -setting_.scale.exponent();
    const VerifiedResult what{tree_,
                              q.data(),
                              reference::charge_rms(charges_),
                              tree_,
                              nearest_.data(),
                              result.view(),
                              PowerOfTwo(-length),
                              PowerOfTwo(-2 * length),
                              0};
    return verify_result(what, samples, tolerance, kernels::kernel_table(CpuTarget::portable), executor).measure;
  }
  reference::Measured exact_norms() { return reference::measure(charges_, reference::whole(charges_), result); }

 private:
  reference::Charges charges_;
  unit::Setting setting_;
  Octree tree_;
  std::vector<double> nearest_;

 public:
  Result result;
};

TEST(VerifyResult, OfAllTargetsEqualsTheNormsOfTheContract) {
  Verified verified(1e-5);
  const ErrorMeasure measure = verified.measure(900, 1e-4);
  const reference::Measured exact = verified.exact_norms();
  EXPECT_EQ(measure.samples, 900u);
  EXPECT_NEAR(measure.potential.rms / exact.potential.rms, 1, 1e-6);
  EXPECT_NEAR(measure.potential.typical / exact.potential.typical, 1, 1e-6);
  EXPECT_NEAR(measure.field.rms / exact.field.rms, 1, 1e-6);
  EXPECT_NEAR(measure.field.typical / exact.field.typical, 1, 1e-6);
  EXPECT_NEAR(measure.field.worst / exact.field.worst, 1, 1e-6);
  EXPECT_TRUE(measure.met);
}

TEST(VerifyResult, OfSampledTargetsIsWithinAFactorOfTwo) {
  Verified verified(1e-5);
  const ErrorMeasure measure = verified.measure(200, 1e-4);
  const reference::Measured exact = verified.exact_norms();
  EXPECT_EQ(measure.samples, 200u);
  EXPECT_NEAR(std::log2(measure.potential.rms / exact.potential.rms), 0, 1);
  EXPECT_NEAR(std::log2(measure.field.rms / exact.field.rms), 0, 1);
  EXPECT_GE(measure.field.rms_upper, measure.field.rms);
}

TEST(VerifyResult, AnExactResultHasErrorsOfRounding) {
  const ErrorMeasure measure = Verified(0).measure(200, 1e-13);
  EXPECT_LE(measure.potential.rms, 1e-15);
  EXPECT_LE(measure.field.rms, 1e-15);
  EXPECT_TRUE(measure.met);
  EXPECT_GT(measure.floor_tolerance, 0);
}

TEST(VerifyResult, AMissedToleranceIsNotMet) {
  EXPECT_FALSE(Verified(1e-3).measure(200, 1e-4).met);
}

TEST(VerifyResult, AMissedFieldAloneIsNotMet) {
  Verified verified(0);
  for (double& z : verified.result.field_z) z = -z;
  const ErrorMeasure measure = verified.measure(200, 1e-2);
  EXPECT_FALSE(measure.met);
  EXPECT_LE(measure.potential.rms, 1e-15);
}

TEST(VerifyResult, ANotANumberIsNotMet) {
  Verified verified(0, 150);
  verified.result.potential[77] = std::numeric_limits<double>::quiet_NaN();
  EXPECT_FALSE(verified.measure(200, 1e-2).met);
}

}  // namespace
}  // namespace farsum
