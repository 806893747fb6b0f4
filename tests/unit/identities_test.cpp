#include "fmm/verification/identities.hpp"

#include <gtest/gtest.h>

#include <cmath>
#include <limits>

#include "tests/reference/charges.hpp"

namespace farsum {
namespace {

using reference::Charges;
using reference::Result;

/// Charges 2 and 3 at distance 2 on the x axis: phi = 3/2 and 1, E = -3/4 and 1/2, U = 3; everything may be scaled by powers of
/// two.
struct TwoCharges {
  Charges charges;
  Result result{2};
  int length = 0, charge = 0;

  explicit TwoCharges(int length_exponent = 0, int charge_exponent = 0) : length(length_exponent), charge(charge_exponent) {
    const PowerOfTwo l(length), q(charge), potential(charge - length), field(charge - 2 * length);
    charges.add({0, 0, 0}, q(2));
    charges.add({l(2), 0, 0}, q(3));
    result.potential = {potential(1.5), potential(1)};
    result.field_x = {field(-0.75), field(0.5)};
    result.field_y = result.field_z = {0, 0};
  }
  IdentityResult check(bool with_potential = true, bool with_field = true) {
    Executor executor(1);
    ResultView view = result.view();
    if (!with_potential) view.potential = nullptr;
    if (!with_field) view.field_x = view.field_y = view.field_z = nullptr;
    return check_identities(
        {charges.points(), charges.values(), view, checked_bounds(charges.points(), "position", executor), PowerOfTwo(-length),
         PowerOfTwo(-charge), PowerOfTwo(charge - length), PowerOfTwo(charge - 2 * length), PowerOfTwo(2 * charge - length)},
        executor);
  }
};

TEST(Identities, OfTwoChargesHold) {
  const IdentityResult result = TwoCharges().check();
  EXPECT_TRUE(result.finite);
  EXPECT_TRUE(result.energy.available && result.checks.available);
  EXPECT_EQ(result.energy.value, 3);
  EXPECT_EQ(result.energy.error_bound, 3);  // still to be multiplied by the tolerance
  EXPECT_EQ(result.checks.total_force, 0);
  EXPECT_EQ(result.checks.total_torque, 0);
  EXPECT_EQ(result.checks.virial, 0);
  EXPECT_EQ(result.field_max, 0.75);
}

TEST(Identities, KeepUnitsFarOutsideTheRangeOfSquares) {
  const IdentityResult result = TwoCharges(-300, -650).check();
  EXPECT_EQ(result.energy.value, 3 * 0x1p-1000);
  EXPECT_EQ(result.checks.total_force, 0);
  EXPECT_EQ(result.field_max, 0.75 * 0x1p-50);
}

TEST(Identities, AMissingForceIsMeasured) {
  TwoCharges two;
  two.result.field_x[1] = 0;  // force 0 in place of 3/2: the sum is -3/2, N rms|F| is sqrt(2) 3/2
  EXPECT_NEAR(two.check().checks.total_force, 1 / std::sqrt(2.0), 1e-15);
}

TEST(Identities, AFieldAcrossTheLineMakesATorque) {
  TwoCharges two;
  two.result.field_x = {0, 0};
  two.result.field_y = {-0.75, 0.5};  // forces -3/2 and 3/2 at x = -1 and 1: torque 3, N rms|F| = 3, extent 2
  EXPECT_NEAR(two.check().checks.total_torque, 0.5, 1e-15);
  EXPECT_NEAR(two.check().checks.virial, 1, 1e-15);
}

TEST(Identities, AWrongSignOfTheFieldBreaksTheVirial) {
  TwoCharges two;
  for (double& x : two.result.field_x) x = -x;
  EXPECT_NEAR(two.check().checks.virial, 2, 1e-15);
}

TEST(Identities, NeedTheirOutputs) {
  EXPECT_FALSE(TwoCharges().check(false, true).energy.available);
  EXPECT_TRUE(TwoCharges().check(false, true).checks.available);
  EXPECT_FALSE(TwoCharges().check(true, false).checks.available);
  EXPECT_EQ(TwoCharges().check(true, false).energy.value, 3);
}

TEST(Identities, NameTheFirstResultThatIsNotFinite) {
  for (double bad : {std::numeric_limits<double>::quiet_NaN(), std::numeric_limits<double>::infinity()}) {
    TwoCharges potential, field;
    potential.result.potential[1] = bad;
    field.result.field_z[0] = bad;
    EXPECT_FALSE(potential.check().finite);
    EXPECT_EQ(potential.check().first_bad, 1u);
    EXPECT_FALSE(field.check().finite);
    EXPECT_EQ(field.check().first_bad, 0u);
  }
}

}  // namespace
}  // namespace farsum
