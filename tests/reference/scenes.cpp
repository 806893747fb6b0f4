#include "tests/reference/scenes.hpp"

#include <cmath>
#include <numbers>
#include <unordered_set>

#include "tests/reference/random.hpp"

namespace farsum::reference {
namespace {

using Places = std::vector<Point>;
constexpr double kTurn = 2 * std::numbers::pi;

Point in_cube(Random& random) {
  return {random.uniform(), random.uniform(), random.uniform()};
}

Point around(Random& random, const Point& centre, double width) {
  return {centre[0] + width * random.normal(), centre[1] + width * random.normal(), centre[2] + width * random.normal()};
}

Point in_ball(Random& random) {
  const Point direction = random.direction();
  const double radius = std::cbrt(random.uniform());
  return {radius * direction[0], radius * direction[1], radius * direction[2]};
}

Point on_slanted_line(Random& random) {
  const double s = random.uniform();
  return {0.1 + 0.7 * s, -0.3 + 0.9 * s, 0.2 - 0.4 * s};
}

Point on_helix(Random& random) {
  const double turns = 10 * random.uniform();
  return {std::cos(kTurn * turns), std::sin(kTurn * turns), 0.3 * turns};
}

Point in_bunch(Random& random) {
  const double width = random.uniform() < 0.1 ? 6e-3 : 1e-3;
  return {width * random.normal(), width * random.normal(), 20 * width * random.normal()};
}

/// n points from a rule that makes one point at a time.
template <typename Rule>
Places repeated(std::size_t n, Rule&& rule) {
  Places places;
  for (std::size_t i = 0; i < n; ++i) places.push_back(rule());
  return places;
}

Places ring(std::size_t n) {
  Places places;
  for (std::size_t i = 0; i < n; ++i) {
    const double angle = kTurn * static_cast<double>(i) / static_cast<double>(n);
    places.push_back({std::cos(angle), std::sin(angle), 0.0});
  }
  return places;
}

Places droplets(std::size_t n, Random& random) {
  const std::size_t count = 1 + n / 100;
  Places centres = repeated(count, [&] { return in_cube(random); });
  std::vector<double> widths;
  for (std::size_t i = 0; i < count; ++i) widths.push_back(random.log_uniform(1e-5, 1e-2));
  return repeated(n, [&] {
    const std::size_t droplet = random.index(count);
    return around(random, centres[droplet], widths[droplet]);
  });
}

Places scales_1e9(std::size_t n, Random& random) {
  const Point centres[4] = {{0, 0, 0}, {0.31, 0.67, 0.23}, {-0.71, 0.13, 0.59}, {0.43, -0.37, -0.83}};
  const double widths[4] = {1, 1e-3, 1e-6, 1e-9};
  std::size_t i = 0;
  return repeated(n, [&] {
    const std::size_t cluster = i++ % 4;
    return around(random, centres[cluster], widths[cluster]);
  });
}

Places far_pair(std::size_t n, Random& random) {
  std::size_t i = 0;
  return repeated(n, [&] {
    Point p = in_ball(random);
    for (double& coordinate : p) coordinate *= 0.5;
    if (i++ % 2 == 1) p = {p[0] + 6e5, p[1] + 8e5, p[2]};  // (6e5, 8e5, 0) is 1e6 long
    return p;
  });
}

Places close_pairs(std::size_t n, Random& random) {
  Places places;
  while (places.size() < n) {
    const Point p = in_cube(random), direction = random.direction();
    const double separation = random.log_uniform(1e-12, 1e-3);
    places.push_back(p);
    if (places.size() == n) break;
    places.push_back({p[0] + separation * direction[0], p[1] + separation * direction[1], p[2] + separation * direction[2]});
  }
  return places;
}

/// Distinct random places of a grid with 65 steps an axis, its corners first.
Places box_faces(std::size_t n, Random& random) {
  constexpr std::size_t kSteps = 65;
  std::unordered_set<std::size_t> taken;
  Places places;
  while (places.size() < n && taken.size() < kSteps * kSteps * kSteps) {
    const std::size_t corner = places.size();
    std::size_t k[3];
    for (std::size_t axis = 0; axis < 3; ++axis) {
      k[axis] = corner < 8 ? ((corner >> axis) & 1u) * (kSteps - 1) : random.index(kSteps);
    }
    if (!taken.insert((k[0] * kSteps + k[1]) * kSteps + k[2]).second) continue;
    places.push_back({static_cast<double>(k[0]) / 64, static_cast<double>(k[1]) / 64, static_cast<double>(k[2]) / 64});
  }
  return places;
}

Places outlier(std::size_t n, Random& random) {
  Places places = repeated(n, [&] { return in_cube(random); });
  if (n > 0) places[n / 2] = {-6e5, 0.3, 8e5};
  return places;
}

Places make_places(Shape shape, std::size_t n, Random& random) {
  switch (shape) {
    case Shape::cube:
    case Shape::heavy_charge:
      return repeated(n, [&] { return in_cube(random); });
    case Shape::ball:
      return repeated(n, [&] { return in_ball(random); });
    case Shape::shell:
      return repeated(n, [&] { return random.direction(); });
    case Shape::line:
      return repeated(n, [&] { return Point{random.uniform(), 0.0, 0.0}; });
    case Shape::slanted_line:
      return repeated(n, [&] { return on_slanted_line(random); });
    case Shape::helix:
      return repeated(n, [&] { return on_helix(random); });
    case Shape::plane:
      return repeated(n, [&] { return Point{random.uniform(), random.uniform(), 0.0}; });
    case Shape::ring:
      return ring(n);
    case Shape::bunch_with_halo:
      return repeated(n, [&] { return in_bunch(random); });
    case Shape::droplets:
      return droplets(n, random);
    case Shape::scales_1e9:
      return scales_1e9(n, random);
    case Shape::far_pair:
      return far_pair(n, random);
    case Shape::close_pairs:
      return close_pairs(n, random);
    case Shape::box_faces:
      return box_faces(n, random);
    case Shape::outlier:
      return outlier(n, random);
    case Shape::gaussian:
      return repeated(n, [&] { return around(random, {0, 0, 0}, 1); });
    case Shape::lattice:
      break;  // made by cubic_block
  }
  return {};
}

void assign_charges(Charges& charges, Signs signs, bool unit_magnitude, Random& random) {
  const std::size_t n = charges.size();
  for (std::size_t i = 0; i < n; ++i) {
    double magnitude = unit_magnitude ? 1.0 : random.uniform(0.5, 1.5);
    if (signs == Signs::random && (random.bits() >> 63) != 0) magnitude = -magnitude;
    if (signs == Signs::alternating && i % 2 == 1) magnitude = -magnitude;
    if (signs == Signs::neutral && i % 2 == 1) magnitude = -charges.q[i - 1];
    if (signs == Signs::neutral && i % 2 == 0 && i + 1 == n) magnitude = 0;
    charges.q[i] = magnitude;
  }
}

}  // namespace

const std::vector<Shape>& all_shapes() {
  static const std::vector<Shape> shapes = {
      Shape::cube,    Shape::ball,        Shape::shell,           Shape::line,      Shape::slanted_line, Shape::helix,
      Shape::plane,   Shape::ring,        Shape::bunch_with_halo, Shape::droplets,  Shape::scales_1e9,   Shape::far_pair,
      Shape::lattice, Shape::close_pairs, Shape::heavy_charge,    Shape::box_faces, Shape::outlier,      Shape::gaussian};
  return shapes;
}

std::string name_of(Shape shape) {
  static const char* const names[] = {"cube",    "ball",        "shell",        "line",      "slanted_line", "helix",
                                      "plane",   "ring",        "bunch",        "droplets",  "scales_1e9",   "far_pair",
                                      "lattice", "close_pairs", "heavy_charge", "box_faces", "outlier",      "gaussian"};
  return names[static_cast<std::size_t>(shape)];
}

std::string name_of(Signs signs) {
  static const char* const names[] = {"one_sign", "random_signs", "alternating", "neutral"};
  return names[static_cast<std::size_t>(signs)];
}

Charges cubic_block(int edge, bool alternating) {
  Charges block;
  for (int i = 0; i < edge; ++i) {
    for (int j = 0; j < edge; ++j) {
      for (int k = 0; k < edge; ++k) {
        block.add({double(i), double(j), double(k)}, alternating && (i + j + k) % 2 == 1 ? -1.0 : 1.0);
      }
    }
  }
  return block;
}

Charges make_scene(Shape shape, Signs signs, std::size_t count, std::uint64_t seed) {
  Random random(seed);
  if (shape == Shape::lattice) {
    Charges block = cubic_block(static_cast<int>(std::lround(std::cbrt(static_cast<double>(count)))), true);
    if (signs != Signs::alternating) assign_charges(block, signs, true, random);
    return block;
  }
  Charges charges;
  for (const Point& p : make_places(shape, count, random)) charges.add(p);
  assign_charges(charges, signs, shape == Shape::ring || shape == Shape::box_faces, random);
  if (shape == Shape::heavy_charge && count > 0) charges.q[count / 2] *= 1e6;
  return charges;
}

}  // namespace farsum::reference
