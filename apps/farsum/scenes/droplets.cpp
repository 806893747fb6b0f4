// A spray of charged droplets: charges on tiny spheres far apart, the hard case for any method that assumes even density.
#include <algorithm>
#include <cmath>
#include <vector>

#include "apps/farsum/scenes/constants.hpp"
#include "apps/farsum/scenes/random.hpp"
#include "apps/farsum/scenes/scene.hpp"

namespace farsum::scenes {
namespace {

struct Droplet {
  double x, y, z, radius;
  double charge;  ///< C, at 70 % of the Rayleigh limit
};

constexpr double kPlume = 2.5e-3;    // rms half width of the plume, m
constexpr double kSmallest = 20e-9;  // radii, m
constexpr double kLargest = 2e-6;

/// Every fourth droplet is a satellite that has just left the one before it, within a few of that one's radii.
std::vector<Droplet> make_droplets(const Request& request) {
  const std::size_t count = std::clamp<std::size_t>(request.count / 100, 1, 250);
  std::vector<Droplet> droplets;
  for (std::size_t i = 0; i < count; ++i) {
    PointRandom random(request.seed, 31, i);
    Droplet d{kPlume * random.normal(), kPlume * random.normal(), 2.0 * kPlume * random.normal(), 0, 0};
    d.radius = kSmallest / (1.0 - random.uniform() * (1.0 - kSmallest / kLargest));  // number density falling as 1/radius^2
    if (i % 4 == 3) {
      const Droplet& parent = droplets.back();
      const auto direction = random.on_sphere();
      const double distance = 2.0 * (parent.radius + d.radius) + 6.0 * parent.radius * random.uniform();
      d.x = parent.x + distance * direction[0];
      d.y = parent.y + distance * direction[1];
      d.z = parent.z + distance * direction[2];
    }
    // Rayleigh limit 8 pi sqrt(eps0 gamma r^3) (Lord Rayleigh, Phil. Mag. 14, 184 (1882)), water: gamma = 0.072 N/m.
    d.charge = 0.7 * 2.00669e-5 * d.radius * std::sqrt(d.radius);
    droplets.push_back(d);
  }
  return droplets;
}

}  // namespace

Scene droplets(const Request& request) {
  const std::vector<Droplet> spray = make_droplets(request);
  double total = 0;
  for (const Droplet& d : spray) total += d.charge;
  const double weight = request.count > 0 ? total / kElementaryCharge / double(request.count) : 1.0;
  SignedPoints points(request, kElementaryCharge, 19.0 * kMassUnit, weight);
  std::size_t made = 0;
  double sum = 0;
  for (std::size_t i = 0; i < spray.size(); ++i) {
    const Droplet& d = spray[i];
    sum += d.charge;
    // Shares of the count in proportion to the charge; running sums leave no rounding behind.
    const std::size_t end =
        i + 1 == spray.size() ? request.count : std::min(request.count, std::size_t(double(request.count) * (sum / total)));
    for (; made < end; ++made) {
      PointRandom random(request.seed, 32, made);
      const auto p = random.on_sphere();
      points.add(d.x + d.radius * p[0], d.y + d.radius * p[1], d.z + d.radius * p[2]);
    }
  }
  return {points.take(), "spray of charged droplets"};
}

}  // namespace farsum::scenes
