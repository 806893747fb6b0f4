#include "bench/system/inputs.hpp"

#include <array>
#include <cmath>
#include <numbers>

namespace farsum::bench {
namespace {

/// SplitMix64 (Steele, Lea & Flood, OOPSLA 2014): the standard's distributions differ between libraries, this does not.
class Random {
 public:
  explicit Random(std::uint64_t seed) : state_(seed) {}

  double uniform() {
    state_ += 0x9e3779b97f4a7c15u;
    std::uint64_t mixed = state_;
    mixed = (mixed ^ (mixed >> 30)) * 0xbf58476d1ce4e5b9u;
    mixed = (mixed ^ (mixed >> 27)) * 0x94d049bb133111ebu;
    return double((mixed ^ (mixed >> 31)) >> 11) * 0x1p-53;
  }
  double between(double low, double high) { return low + (high - low) * uniform(); }
  /// Box and Muller's transformation, the cosine half.
  double normal() { return std::sqrt(-2 * std::log(1 - uniform())) * std::cos(2 * std::numbers::pi * uniform()); }

 private:
  std::uint64_t state_;
};

using Point = std::array<double, 3>;

Point on_sphere(Random& random, double radius) {
  const double z = random.between(-1, 1), angle = random.between(0, 2 * std::numbers::pi), across = std::sqrt(1 - z * z);
  return {radius * across * std::cos(angle), radius * across * std::sin(angle), radius * z};
}

Point in_cube(Random& random) {
  const double x = random.uniform(), y = random.uniform(), z = random.uniform();
  return {x, y, z};
}

Point on_plane(Random& random) {
  const double u = random.uniform(), v = random.uniform();
  return {u, 0.6 * v + 0.3 * u, 0.8 * v - 0.2 * u};
}

Point in_bunch(Random& random) {
  const double width = random.uniform() < 0.05 ? 4.0 : 1.0;
  const double x = width * random.normal(), y = width * random.normal(), z = 10 * width * random.normal();
  return {x, y, z};
}

constexpr std::size_t kDroplets = 200;

std::array<std::array<double, 4>, kDroplets> droplet_places(Random& random) {
  std::array<std::array<double, 4>, kDroplets> places{};
  for (auto& place : places) {
    const Point centre = in_cube(random);
    place = {centre[0], centre[1], centre[2], std::pow(10.0, random.between(-4, -2))};
  }
  return places;
}

Point in_droplet(Random& random, const std::array<double, 4>& place) {
  const Point p = on_sphere(random, place[3] * std::cbrt(random.uniform()));
  return {place[0] + p[0], place[1] + p[1], place[2] + p[2]};
}

}  // namespace

const std::vector<std::string>& input_names() {
  static const std::vector<std::string> names{"cube", "shell", "line", "plane", "bunch", "droplets"};
  return names;
}

Charges make_input(std::string_view name, std::size_t count, bool both_signs, std::uint64_t seed) {
  Random random(seed);
  const auto droplets = droplet_places(random);
  Charges charges;
  for (auto* column : {&charges.x, &charges.y, &charges.z, &charges.q}) column->resize(count);
  for (std::size_t i = 0; i < count; ++i) {
    Point p;
    if (name == "shell") {
      p = on_sphere(random, 1);
    } else if (name == "line") {
      const double t = random.uniform();
      p = {t, 0.7 * t, 0.4 * t};
    } else if (name == "plane") {
      p = on_plane(random);
    } else if (name == "bunch") {
      p = in_bunch(random);
    } else if (name == "droplets") {
      p = in_droplet(random, droplets[i % kDroplets]);
    } else {
      p = in_cube(random);
    }
    charges.x[i] = p[0];
    charges.y[i] = p[1];
    charges.z[i] = p[2];
    // Signs do not follow the droplets: each droplet holds both.
    charges.q[i] = both_signs && (i / (name == "droplets" ? kDroplets : 1)) % 2 ? -1 : 1;
  }
  return charges;
}

}  // namespace farsum::bench
