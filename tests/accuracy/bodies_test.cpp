// Uniformly charged bodies as limits of many charges (total charge 1): closed forms from O. D. Kellogg, Foundations of
// Potential Theory (1929), the box from J. Waldvogel, Z. angew. Math. Phys. 27, 867 (1976); each value follows from the formula
// beside it.
#include <gtest/gtest.h>

#include <cmath>
#include <functional>
#include <numbers>

#include "tests/accuracy/tolerance_check.hpp"
#include "tests/reference/random.hpp"

namespace farsum::accuracy {
namespace {

using namespace reference;
using std::numbers::pi;

struct Value {
  double potential;
  Point field;
};

Value value_at(const Charges& body, const Point& place) {
  Charges target;
  target.add(place);
  Options options = with(1e-12);
  options.best_effort = true;  // where the field vanishes no relative accuracy is to be had
  const Outcome outcome = solve_at(body, target, options);
  EXPECT_TRUE(outcome.good()) << outcome.message;
  return {outcome.result.potential[0], outcome.result.field(0)};
}

/// n equal charges on the unit circle, equal steps.
Charges ring(int n) {
  Charges charges;
  for (int i = 0; i < n; ++i) charges.add({std::cos(2 * pi * (i + 0.5) / n), std::sin(2 * pi * (i + 0.5) / n), 0}, 1.0 / n);
  return charges;
}

/// Rod of length 2 along z: midpoints of n equal pieces.
Charges rod(int n) {
  Charges charges;
  for (int i = 0; i < n; ++i) charges.add({0, 0, -1 + (2 * i + 1.0) / n}, 1.0 / n);
  return charges;
}

/// Disk of radius 1: n rings of equal area with 4 n charges each.
Charges disk(int n) {
  Charges charges;
  for (int i = 0; i < n; ++i) {
    const double radius = std::sqrt((i + 0.5) / n);
    for (int k = 0; k < 4 * n; ++k) {
      const double angle = 2 * pi * k / (4 * n);
      charges.add({radius * std::cos(angle), radius * std::sin(angle), 0}, 1.0 / (4.0 * n * n));
    }
  }
  return charges;
}

/// Shell of radius `radius`: n bands of equal height with 2 n charges each.
void add_shell(Charges& charges, int n, double radius, double total) {
  for (int i = 0; i < n; ++i) {
    const double z = -1 + (2 * i + 1.0) / n, rho = std::sqrt(1 - z * z);
    for (int k = 0; k < 2 * n; ++k) {
      const double angle = pi * k / n;
      charges.add({radius * rho * std::cos(angle), radius * rho * std::sin(angle), radius * z}, total / (2.0 * n * n));
    }
  }
}

Charges shell(int n) {
  Charges charges;
  add_shell(charges, n, 1, 1);
  return charges;
}

/// Ball of radius 1: n shells at the midpoints of equal steps, charge of each by the volume of its layer.
Charges ball(int n) {
  Charges charges;
  for (int i = 0; i < n; ++i) {
    const double inner = double(i) / n, outer = (i + 1.0) / n;
    add_shell(charges, 2 * n, 0.5 * (inner + outer), outer * outer * outer - inner * inner * inner);
  }
  return charges;
}

TEST(Ring, AxisIsExactForAnyNumberOfCharges) {
  for (int n : {64, 1001, 20000}) {
    for (double z : {0.3, std::sqrt(0.5), 2.0}) {
      const Value value = value_at(ring(n), {0, 0, z});
      EXPECT_NEAR(value.potential, 1 / std::sqrt(1 + z * z), 1e-12);
      EXPECT_NEAR(value.field[2], z / std::pow(1 + z * z, 1.5), 1e-12);  // largest at z = 1/sqrt 2: 2/(3 sqrt 3)
      EXPECT_NEAR(value.field[0], 0, 1e-12);
    }
  }
}

/// V = 2 K(m)/(pi sqrt((1+rho)^2+z^2)), m = 4 rho/((1+rho)^2+z^2); equal steps converge like rho^n.
TEST(Ring, OffAxisConvergesGeometrically) {
  const double exact = 2 * std::comp_ellint_1(std::sqrt(2.0) / 1.5) / (pi * 1.5);  // rho = 0.5, z = 0
  EXPECT_NEAR(exact, 1.0731820071493644, 1e-15);
  const double error8 = std::fabs(value_at(ring(8), {0.5, 0, 0}).potential - exact);
  const double error16 = std::fabs(value_at(ring(16), {0.5, 0, 0}).potential - exact);
  EXPECT_NEAR(std::log2(error8 / error16), 8, 1.5);  // 0.5^8 with a slowly varying factor
  EXPECT_NEAR(value_at(ring(5000), {0.5, 0, 0}).potential, exact, 2e-12);
}

/// Midpoint sums of smooth integrands: halving the step divides the error by 4; the extrapolated value has the full accuracy.
void expect_second_order(const char* what, double coarse, double fine, double exact, double bound) {
  EXPECT_NEAR((coarse - exact) / (fine - exact), 4, 0.04) << what;
  EXPECT_NEAR((4 * fine - coarse) / 3, exact, bound) << what;
}

TEST(Rod, PotentialAndFieldConvergeWithSecondOrder) {
  const Value coarse = value_at(rod(4000), {1, 0, 0}), fine = value_at(rod(8000), {1, 0, 0});
  expect_second_order("potential", coarse.potential, fine.potential, std::asinh(1.0), 1e-11);  // (2/L) asinh(L/2d), L=2, d=1
  expect_second_order("field", coarse.field[0], fine.field[0], std::sqrt(0.5), 1e-11);         // 1/(d sqrt(d^2+L^2/4))
}

TEST(Disk, AxisConvergesWithSecondOrder) {
  const Value coarse = value_at(disk(40), {0, 0, 1}), fine = value_at(disk(80), {0, 0, 1});
  expect_second_order("potential", coarse.potential, fine.potential, 2 * (std::sqrt(2.0) - 1), 1e-8);  // 2 (sqrt(1+z^2) - z)
  expect_second_order("field", coarse.field[2], fine.field[2], 2 * (1 - std::sqrt(0.5)), 1e-8);
}

TEST(Shell, IsFieldFreeInsideAndAPointChargeOutside) {
  const Point inside = {0.3, -0.2, 0.25}, outside = {0.4, 0.3, 2.0};  // |outside|^2 = 4.25
  const double distance = std::sqrt(4.25);
  const Value in1 = value_at(shell(40), inside), in2 = value_at(shell(80), inside);
  const Value out1 = value_at(shell(40), outside), out2 = value_at(shell(80), outside);
  expect_second_order("inside", in1.potential, in2.potential, 1, 1e-6);
  expect_second_order("outside", out1.potential, out2.potential, 1 / distance, 1e-6);
  EXPECT_LT(std::hypot(in2.field[0], in2.field[1], in2.field[2]), 1e-3);
  for (std::size_t axis = 0; axis < 3; ++axis) EXPECT_NEAR(out2.field[axis], outside[axis] / std::pow(distance, 3), 1e-4);
}

TEST(Ball, IsAPointChargeOutside) {
  const Point outside = {0, 2.1, 2};
  const double distance = std::sqrt(8.41);
  const Value coarse = value_at(ball(10), outside), fine = value_at(ball(20), outside);
  expect_second_order("potential", coarse.potential, fine.potential, 1 / distance, 1e-6);
  EXPECT_NEAR(fine.field[1], 2.1 / std::pow(distance, 3), 1e-4);
}

/// Energy of n random charges 1/n: its mean is (1 - 1/n) U, its deviation shrinks like 1/sqrt n (1/n where V is constant).
struct Body {
  const char* name;
  double energy;  ///< self-energy of the continuous body, total charge 1
  double spread;  ///< standard deviation of V over the body, an upper estimate
  std::function<Point(Random&)> draw;
};

std::vector<Body> bodies() {
  const double sqrt2 = std::sqrt(2.0), sqrt3 = std::sqrt(3.0);
  const auto in_ball = [](Random& random) {
    const Point d = random.direction();
    const double r = std::cbrt(random.uniform());
    return Point{r * d[0], r * d[1], r * d[2]};
  };
  const auto in_disk = [](Random& random) {
    const double r = std::sqrt(random.uniform()), angle = 2 * pi * random.uniform();
    return Point{r * std::cos(angle), r * std::sin(angle), 0};
  };
  return {{"ball", 3.0 / 5, 0.14, in_ball},
          {"shell", 1.0 / 2, 0.02, [](Random& random) { return random.direction(); }},
          {"disk", 8 / (3 * pi), 0.25, in_disk},
          {"gaussian", 0.5 / std::sqrt(pi), 0.2,
           [](Random& random) {
             return Point{random.normal(), random.normal(), random.normal()};
           }},
          {"square", 2 * std::log(1 + sqrt2) - (2.0 / 3) * (sqrt2 - 1), 0.5,
           [](Random& random) {
             return Point{random.uniform(), random.uniform(), 0};
           }},
          {"cube", (1 + sqrt2 - 2 * sqrt3) / 5 - pi / 3 + std::log((1 + sqrt2) * (2 + sqrt3)), 0.3, [](Random& random) {
             return Point{random.uniform(), random.uniform(), random.uniform()};
           }}};
}

TEST(RandomBodies, EnergyTendsToTheSelfEnergyLikeOneOverRootN) {
  for (const Body& body : bodies()) {
    for (int n : {2000, 32000}) {
      Random random(71);
      Charges charges;
      for (int i = 0; i < n; ++i) charges.add(body.draw(random), 1.0 / n);
      const Outcome outcome = solve(charges, with(1e-6));
      ASSERT_TRUE(outcome.good()) << body.name << outcome.message;
      EXPECT_NEAR(outcome.report.energy.value, (1 - 1.0 / n) * body.energy, 4 * body.spread / std::sqrt(n)) << body.name << n;
    }
  }
}

}  // namespace
}  // namespace farsum::accuracy
