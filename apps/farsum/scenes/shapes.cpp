// Plain shapes with evenly spread charges, one elementary charge each.
#include "apps/farsum/scenes/constants.hpp"
#include "apps/farsum/scenes/random.hpp"
#include "apps/farsum/scenes/scene.hpp"

namespace farsum::scenes {
namespace {

constexpr double kSize = 0.01;                     // m
constexpr double kIonMass = 39.96238 * kMassUnit;  // argon-40, kg

template <class Place>
Scene fill(const Request& request, std::uint64_t stream, const char* comment, Place place) {
  SignedPoints points(request, kElementaryCharge, kIonMass, 1.0);
  for (std::size_t i = 0; i < request.count; ++i) {
    PointRandom random(request.seed, stream, i);
    place(random, points);
  }
  return {points.take(), comment};
}

}  // namespace

Scene cube(const Request& request) {
  return fill(request, 11, "ions spread evenly in a cube", [](PointRandom& random, SignedPoints& points) {
    const double x = kSize * random.uniform(), y = kSize * random.uniform(), z = kSize * random.uniform();
    points.add(x, y, z);
  });
}

Scene shell(const Request& request) {
  return fill(request, 12, "ions spread evenly on a sphere", [](PointRandom& random, SignedPoints& points) {
    const auto p = random.on_sphere();
    points.add(0.5 * kSize * p[0], 0.5 * kSize * p[1], 0.5 * kSize * p[2]);
  });
}

Scene line(const Request& request) {
  return fill(request, 13, "ions spread evenly on a line",
              [](PointRandom& random, SignedPoints& points) { points.add(kSize * random.uniform(), 0.0, 0.0); });
}

Scene plane(const Request& request) {
  return fill(request, 14, "ions spread evenly on a square", [](PointRandom& random, SignedPoints& points) {
    const double x = kSize * random.uniform(), y = kSize * random.uniform();
    points.add(x, y, 0.0);
  });
}

}  // namespace farsum::scenes
