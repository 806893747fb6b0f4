// Laws of electrostatics that any correct field obeys, whatever summed it: Gauss, zero circulation, field = -grad potential,
// Laplace. All are common practice (for example J. D. Jackson, Classical Electrodynamics, chapter 1).
#include <gtest/gtest.h>

#include <cmath>
#include <numbers>

#include "tests/accuracy/tolerance_check.hpp"
#include "tests/reference/quadrature.hpp"
#include "tests/reference/random.hpp"

namespace farsum::accuracy {
namespace {

using namespace reference;

constexpr double kTolerance = 1e-12;

/// Charges in a ball of radius 0.6 and in a far shell of radius 4; the region between is empty.
struct Arrangement {
  Charges all;
  double inside = 0, magnitude = 0;
};

Arrangement arrangement(Signs signs) {
  Arrangement result;
  const Charges core = make_scene(Shape::ball, signs, 3000, 61), outside = make_scene(Shape::shell, Signs::random, 1000, 62);
  for (std::size_t i = 0; i < core.size(); ++i) {
    const Point p = core.place(i);
    result.all.add({0.6 * p[0], 0.6 * p[1], 0.6 * p[2]}, core.q[i]);
    result.inside += core.q[i];
    result.magnitude += std::fabs(core.q[i]);
  }
  for (std::size_t i = 0; i < outside.size(); ++i) {
    const Point p = outside.place(i);
    result.all.add({4 * p[0], 4 * p[1], 4 * p[2]}, outside.q[i]);
  }
  return result;
}

Result evaluated(const Charges& sources, const Charges& targets) {
  const Outcome outcome = solve_at(sources, targets, with(kTolerance));
  EXPECT_TRUE(outcome.good()) << outcome.message;
  EXPECT_EQ(outcome.report.plan.method, "tree");
  return outcome.result;
}

class FieldLaw : public testing::TestWithParam<Signs> {};

/// Flux through a sphere that is not centred on the charges: 4 pi times the charge inside, nothing from outside.
TEST_P(FieldLaw, GaussForASphere) {
  const Arrangement set = arrangement(GetParam());
  const Point centre = {0.2, -0.1, 0.3};
  const double radius = 1.6;
  const Charges surface = sphere_rule(centre, radius, 60);
  const Result result = evaluated(set.all, surface);
  long double flux = 0;
  for (std::size_t i = 0; i < surface.size(); ++i) {
    for (std::size_t axis = 0; axis < 3; ++axis) {
      flux += surface.q[i] * result.field(i)[axis] * (surface.place(i)[axis] - centre[axis]) / radius;
    }
  }
  EXPECT_NEAR(static_cast<double>(flux), 4 * std::numbers::pi * set.inside, 1e-11 * 4 * std::numbers::pi * set.magnitude);
}

/// The same through the faces of a cube.
TEST_P(FieldLaw, GaussForACube) {
  const Arrangement set = arrangement(GetParam());
  const Rule rule = gauss_legendre(48);
  const double half = 1.3;
  Charges surface;
  std::vector<std::size_t> axis_of;
  for (std::size_t axis = 0; axis < 3; ++axis) {
    for (double side : {-half, half}) {
      for (std::size_t i = 0; i < rule.node.size(); ++i) {
        for (std::size_t j = 0; j < rule.node.size(); ++j) {
          Point p{};
          p[axis] = side;
          p[(axis + 1) % 3] = half * rule.node[i];
          p[(axis + 2) % 3] = half * rule.node[j];
          surface.add(p, std::copysign(half * half * rule.weight[i] * rule.weight[j], side));
          axis_of.push_back(axis);
        }
      }
    }
  }
  const Result result = evaluated(set.all, surface);
  long double flux = 0;
  for (std::size_t i = 0; i < surface.size(); ++i) flux += surface.q[i] * result.field(i)[axis_of[i]];
  EXPECT_NEAR(static_cast<double>(flux), 4 * std::numbers::pi * set.inside, 1e-11 * 4 * std::numbers::pi * set.magnitude);
}

/// The line integral around a tilted ellipse that encloses the core is zero.
TEST_P(FieldLaw, CirculationVanishes) {
  const Arrangement set = arrangement(GetParam());
  const int n = 600;
  const double step = 2 * std::numbers::pi / n;
  Charges loop;
  std::vector<Point> tangent;
  for (int i = 0; i < n; ++i) {
    const double c = std::cos(i * step), s = std::sin(i * step);
    loop.add({1.5 * c + 0.2, 1.2 * s, 0.4 * s - 0.3 * c});
    tangent.push_back({-1.5 * s, 1.2 * c, 0.4 * c + 0.3 * s});
  }
  const Result result = evaluated(set.all, loop);
  long double circulation = 0, magnitude = 0;
  for (std::size_t i = 0; i < loop.size(); ++i) {
    for (std::size_t axis = 0; axis < 3; ++axis) {
      const double part = step * result.field(i)[axis] * tangent[i][axis];
      circulation += part;
      magnitude += std::fabs(part);
    }
  }
  EXPECT_NEAR(static_cast<double>(circulation / magnitude), 0, 1e-11);
}

/// Work along an open path is the difference of the potential.
TEST_P(FieldLaw, WorkIsTheDifferenceOfThePotential) {
  const Arrangement set = arrangement(GetParam());
  const Rule rule = gauss_legendre(80);
  const Point start = {1.1, 0.3, -0.2}, end = {-0.8, 2.0, 0.9};
  Charges path;
  for (double node : rule.node) {
    const double s = 0.5 * (1 + node);
    path.add({start[0] + s * (end[0] - start[0]), start[1] + s * (end[1] - start[1]), start[2] + s * (end[2] - start[2])});
  }
  path.add(start);
  path.add(end);
  const Result result = evaluated(set.all, path);
  long double work = 0;
  for (std::size_t i = 0; i < rule.node.size(); ++i) {
    for (std::size_t axis = 0; axis < 3; ++axis) {
      work += 0.5 * rule.weight[i] * result.field(i)[axis] * (end[axis] - start[axis]);
    }
  }
  const double drop = result.potential[rule.node.size()] - result.potential[rule.node.size() + 1];
  EXPECT_NEAR(static_cast<double>(work), drop, 1e-11 * set.magnitude);
}

/// Central difference of sixth order in each direction at random places of the empty region.
TEST_P(FieldLaw, FieldIsMinusTheGradient) {
  const Arrangement set = arrangement(GetParam());
  const double h = 0.01, coefficient[3] = {3.0 / 4, -3.0 / 20, 1.0 / 60};
  Random random(63);
  Charges targets;
  for (int i = 0; i < 20; ++i) {
    const Point d = random.direction();
    const double radius = random.uniform(1.2, 2.5);
    const Point centre = {radius * d[0], radius * d[1], radius * d[2]};
    targets.add(centre);
    for (std::size_t axis = 0; axis < 3; ++axis) {
      for (int k : {1, 2, 3, -1, -2, -3}) {
        Point p = centre;
        p[axis] += k * h;
        targets.add(p);
      }
    }
  }
  const Result result = evaluated(set.all, targets);
  for (std::size_t i = 0; i < targets.size(); i += 19) {
    for (std::size_t axis = 0; axis < 3; ++axis) {
      double slope = 0;
      for (std::size_t k = 0; k < 3; ++k) {
        const std::size_t plus = i + 1 + 6 * axis + k;
        slope += coefficient[k] * (result.potential[plus] - result.potential[plus + 3]) / h;
      }
      EXPECT_NEAR(result.field(i)[axis], -slope, 3e-10 * set.magnitude);
    }
  }
}

/// Laplace's equation in its integral form (Gauss's mean value theorem): the mean over a sphere without charges is the centre's
/// value.
TEST_P(FieldLaw, MeanValueOfEmptySpheres) {
  const Arrangement set = arrangement(GetParam());
  const Point centres[] = {{1.6, 0, 0}, {-1, 1.5, 0.7}, {0.1, -0.4, -2}};
  for (const Point& centre : centres) {
    Charges points = sphere_rule(centre, 0.5, 40);
    points.add(centre);
    const Result result = evaluated(set.all, points);
    long double sums[4] = {}, area = 0;
    for (std::size_t i = 0; i + 1 < points.size(); ++i) {
      area += points.q[i];
      sums[0] += points.q[i] * result.potential[i];
      for (std::size_t axis = 0; axis < 3; ++axis) sums[1 + axis] += points.q[i] * result.field(i)[axis];
    }
    const std::size_t last = points.size() - 1;
    EXPECT_NEAR(static_cast<double>(sums[0] / area), result.potential[last], 1e-11 * set.magnitude);
    for (std::size_t axis = 0; axis < 3; ++axis) {
      EXPECT_NEAR(static_cast<double>(sums[1 + axis] / area), result.field(last)[axis], 1e-11 * set.magnitude);
    }
  }
}

INSTANTIATE_TEST_SUITE_P(Signs, FieldLaw, testing::Values(Signs::one, Signs::random),
                         [](const testing::TestParamInfo<Signs>& kind) { return name_of(kind.param); });

}  // namespace
}  // namespace farsum::accuracy
