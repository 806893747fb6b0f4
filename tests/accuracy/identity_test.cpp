// Identities of Coulomb sums that need no reference: each compares two runs of the engine, both within the tolerance.
#include <gtest/gtest.h>

#include <algorithm>
#include <cmath>
#include <functional>

#include "tests/accuracy/tolerance_check.hpp"
#include "tests/reference/random.hpp"

namespace farsum::accuracy {
namespace {

using namespace reference;

constexpr double kTolerance = 1e-8;
constexpr std::size_t kCount = 2500;

Result solved(const Charges& charges, double tolerance = kTolerance) {
  Outcome outcome = solve(charges, with(tolerance));
  EXPECT_TRUE(outcome.good()) << outcome.message;
  EXPECT_EQ(outcome.report.plan.method, "tree");
  return outcome.result;
}

/// sqrt(sum |a_i - b_i|^2 / sum |b_i|^2) of the field (with_field) or the potential.
double difference(const Result& a, const Result& b, bool with_field) {
  double error = 0, size = 0;
  for (std::size_t i = 0; i < a.size(); ++i) {
    if (with_field) {
      for (std::size_t axis = 0; axis < 3; ++axis) {
        error += std::pow(a.field(i)[axis] - b.field(i)[axis], 2);
        size += std::pow(b.field(i)[axis], 2);
      }
    } else {
      error += std::pow(a.potential[i] - b.potential[i], 2);
      size += std::pow(b.potential[i], 2);
    }
  }
  return std::sqrt(error / size);
}

void expect_same(const Result& a, const Result& b, double bound) {
  EXPECT_LE(difference(a, b, false), bound) << "potential";
  EXPECT_LE(difference(a, b, true), bound) << "field";
}

/// New places from old ones, charges kept.
Charges moved(const Charges& charges, const std::function<Point(const Point&)>& map) {
  Charges result;
  for (std::size_t i = 0; i < charges.size(); ++i) result.add(map(charges.place(i)), charges.q[i]);
  return result;
}

/// The same potential, the field vectors turned by a linear map.
Result turned(const Result& result, const std::function<Point(const Point&)>& map) {
  Result image = result;
  for (std::size_t i = 0; i < result.size(); ++i) {
    const Point field = map(result.field(i));
    image.field_x[i] = field[0];
    image.field_y[i] = field[1];
    image.field_z[i] = field[2];
  }
  return image;
}

class Identity : public testing::TestWithParam<Shape> {};

TEST_P(Identity, Superposition) {
  const Charges a = make_scene(GetParam(), Signs::one, kCount, 31);
  Charges b = a, sum = a;
  Random random(32);
  for (std::size_t i = 0; i < a.size(); ++i) {
    b.q[i] = random.uniform(0.2, 2);
    sum.q[i] = a.q[i] + b.q[i];
  }
  const Result fa = solved(a), fb = solved(b), fsum = solved(sum);
  Result added = fa;
  for (std::size_t i = 0; i < a.size(); ++i) {
    added.potential[i] += fb.potential[i];
    added.field_x[i] += fb.field_x[i];
    added.field_y[i] += fb.field_y[i];
    added.field_z[i] += fb.field_z[i];
  }
  expect_same(added, fsum, 3 * kTolerance);
}

TEST_P(Identity, Translation) {
  // Both shifts keep the low bits of coordinates: the grid of 2^-30 makes every sum exact.
  const Charges original = moved(make_scene(GetParam(), Signs::random, kCount, 33), [](const Point& p) {
    return Point{std::nearbyint(p[0] * 0x1p30) * 0x1p-30, std::nearbyint(p[1] * 0x1p30) * 0x1p-30,
                 std::nearbyint(p[2] * 0x1p30) * 0x1p-30};
  });
  const Charges shifted = moved(original, [](const Point& p) { return Point{p[0] + 5.25, p[1] - 17.5, p[2] + 0.3125}; });
  expect_same(solved(shifted), solved(original), 2 * kTolerance);
}

TEST_P(Identity, Rotation) {
  const double angle = 0.7, c = std::cos(angle), s = std::sin(angle);
  const auto rotate = [=](const Point& p) {  // about z, then about x
    const double x = c * p[0] - s * p[1], y = s * p[0] + c * p[1];
    return Point{x, c * y - s * p[2], s * y + c * p[2]};
  };
  const Charges original = make_scene(GetParam(), Signs::one, kCount, 34);
  expect_same(solved(moved(original, rotate)), turned(solved(original), rotate), 2 * kTolerance);
}

TEST_P(Identity, MirrorAndExchangeOfAxes) {
  const auto mirror = [](const Point& p) { return Point{-p[2], p[0], p[1]}; };
  const Charges original = make_scene(GetParam(), Signs::random, kCount, 35);
  expect_same(solved(moved(original, mirror)), turned(solved(original), mirror), 2 * kTolerance);
}

TEST_P(Identity, OrderOfChargesDoesNotMatter) {
  const Charges original = make_scene(GetParam(), Signs::random, kCount, 36);
  std::vector<std::size_t> order = all_indices(original.size());
  Random random(37);
  for (std::size_t i = order.size(); i > 1; --i) std::swap(order[i - 1], order[random.index(i)]);
  Charges shuffled;
  for (std::size_t i : order) shuffled.add(original.place(i), original.q[i]);
  const Result straight = solved(original), mixed = solved(shuffled);
  Result back(original.size());
  for (std::size_t k = 0; k < order.size(); ++k) {
    back.potential[order[k]] = mixed.potential[k];
    back.field_x[order[k]] = mixed.field_x[k];
    back.field_y[order[k]] = mixed.field_y[k];
    back.field_z[order[k]] = mixed.field_z[k];
  }
  expect_same(back, straight, 2 * kTolerance);
}

INSTANTIATE_TEST_SUITE_P(Shapes, Identity, testing::Values(Shape::cube, Shape::shell, Shape::helix, Shape::gaussian),
                         [](const testing::TestParamInfo<Shape>& kind) { return name_of(kind.param); });

/// Energy of a in the potential of b equals that of b in the potential of a.
TEST(Reciprocity, HoldsForTwoInterleavedSets) {
  const Charges a = make_scene(Shape::cube, Signs::random, 3000, 41), b = make_scene(Shape::ball, Signs::one, 1800, 42);
  const Outcome at_b = solve_at(a, b, with(kTolerance)), at_a = solve_at(b, a, with(kTolerance));
  ASSERT_TRUE(at_a.good() && at_b.good()) << at_a.message << at_b.message;
  double ab = 0, ba = 0, size = 0;
  for (std::size_t i = 0; i < a.size(); ++i) {
    ba += a.q[i] * at_a.result.potential[i];
    size += std::fabs(a.q[i] * at_a.result.potential[i]);
  }
  for (std::size_t j = 0; j < b.size(); ++j) ab += b.q[j] * at_b.result.potential[j];
  EXPECT_NEAR(ab, ba, 2 * kTolerance * size);
}

class Conservation : public testing::TestWithParam<Shape> {};

/// Sums of force and torque vanish, the virial equals the energy; here and in the report.
TEST_P(Conservation, OfForceTorqueAndVirial) {
  const Charges charges = make_scene(GetParam(), Signs::random, 4000, 43);
  const double t = 1e-7, n = static_cast<double>(charges.size());
  const Outcome outcome = solve(charges, with(t));
  ASSERT_TRUE(outcome.good()) << outcome.message;
  long double force[3] = {}, torque[3] = {}, virial = 0, energy = 0, size = 0, squares = 0, mean[3] = {};
  for (std::size_t i = 0; i < charges.size(); ++i) {
    for (std::size_t axis = 0; axis < 3; ++axis) mean[axis] += charges.place(i)[axis] / n;
  }
  for (std::size_t i = 0; i < charges.size(); ++i) {
    long double r[3], f[3];
    for (std::size_t axis = 0; axis < 3; ++axis) {
      r[axis] = charges.place(i)[axis] - mean[axis];
      f[axis] = static_cast<long double>(charges.q[i]) * outcome.result.field(i)[axis];
      force[axis] += f[axis];
      virial += r[axis] * f[axis];
      squares += f[axis] * f[axis];
    }
    for (std::size_t axis = 0; axis < 3; ++axis) {
      const std::size_t next = (axis + 1) % 3, last = (axis + 2) % 3;
      torque[axis] += r[next] * f[last] - r[last] * f[next];
    }
    energy += 0.5L * charges.q[i] * outcome.result.potential[i];
    size += 0.5L * std::fabs(static_cast<long double>(charges.q[i]) * outcome.result.potential[i]);
  }
  const long double unit = n * std::sqrt(squares / n);
  const IdentityChecks& checks = outcome.report.checks;
  EXPECT_LE(static_cast<double>(std::hypot(force[0], force[1], force[2]) / unit), t);
  EXPECT_LE(static_cast<double>(std::hypot(torque[0], torque[1], torque[2]) / unit), t * outcome.report.extent);
  // Field errors enter the virial times the distance from the centre, potential errors the energy.
  EXPECT_LE(static_cast<double>(std::fabs(virial - energy)), t * static_cast<double>(size + unit * outcome.report.extent));
  ASSERT_TRUE(checks.available && outcome.report.energy.available);
  EXPECT_NEAR(checks.total_force, static_cast<double>(std::hypot(force[0], force[1], force[2]) / unit), 1e-12);
  EXPECT_LE(checks.total_torque, t);
  EXPECT_NEAR(checks.virial, static_cast<double>(std::fabs(virial - energy) / size), 1e-11);
  EXPECT_NEAR(outcome.report.energy.value, static_cast<double>(energy), 1e-13 * static_cast<double>(size));
  EXPECT_NEAR(outcome.report.energy.error_bound, static_cast<double>(t * size), 1e-6 * static_cast<double>(t * size));
}

INSTANTIATE_TEST_SUITE_P(Shapes, Conservation,
                         testing::Values(Shape::cube, Shape::shell, Shape::bunch_with_halo, Shape::droplets, Shape::lattice),
                         [](const testing::TestParamInfo<Shape>& kind) { return name_of(kind.param); });

}  // namespace
}  // namespace farsum::accuracy
