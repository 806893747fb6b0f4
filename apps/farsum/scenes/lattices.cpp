// Charges near the sites of a lattice: a cold cloud of trapped ions and a grain of rock salt.
#include <algorithm>
#include <cmath>
#include <vector>

#include "apps/farsum/scenes/constants.hpp"
#include "apps/farsum/scenes/random.hpp"
#include "apps/farsum/scenes/scene.hpp"

namespace farsum::scenes {
namespace {

/// A site of the body-centred lattice in steps of half a lattice constant: i, j, k all even or all odd.
struct Site {
  std::int64_t key;  ///< 4 (i^2 + j^2) + k^2: equal on spheroids twice as long as wide
  std::int32_t i, j, k;
};

/// All sites with key <= 4 r^2.
std::vector<Site> sites_inside(std::int64_t r) {
  std::vector<Site> sites;
  for (std::int64_t k = -2 * r; k <= 2 * r; ++k) {
    const std::int64_t parity = k & 1;
    for (std::int64_t j = -r; j <= r; ++j) {
      if ((j & 1) != parity) continue;
      for (std::int64_t i = -r; i <= r; ++i) {
        const std::int64_t key = 4 * (i * i + j * j) + k * k;
        if ((i & 1) == parity && key <= 4 * r * r) sites.push_back({key, std::int32_t(i), std::int32_t(j), std::int32_t(k)});
      }
    }
  }
  return sites;
}

bool in_raster_order(const Site& a, const Site& b) {
  if (a.k != b.k) return a.k < b.k;
  return a.j != b.j ? a.j < b.j : a.i < b.i;
}

/// The `count` sites of smallest key (ties in raster order), in raster order.
std::vector<Site> inner_sites(std::size_t count) {
  // The spheroid of half axes r, r, 2r holds about 2 pi r^3 / 3 sites (4 unit cells of volume each).
  std::int64_t r = 1;
  while (double(r) * double(r) * double(r) * 2.0943951 < double(count)) ++r;
  std::vector<Site> sites = sites_inside(r);
  while (sites.size() < count) sites = sites_inside(++r);
  std::nth_element(sites.begin(), sites.begin() + std::ptrdiff_t(count), sites.end(),
                   [](const Site& a, const Site& b) { return a.key != b.key ? a.key < b.key : in_raster_order(a, b); });
  sites.resize(count);
  std::sort(sites.begin(), sites.end(), in_raster_order);
  return sites;
}

}  // namespace

Scene ion_cloud(const Request& request) {
  // A cold one-component plasma in a harmonic trap is a spheroid of even density n = eps0 m (2 w_r^2 + w_z^2) / e^2. Axes 1:1:2
  // need w_z^2 = 0.173564 w_p^2 and w_r^2 = 0.413218 w_p^2 (depolarising factors of J. A. Osborn, Phys. Rev. 67, 351 (1945));
  // with w_z = 2 pi 100 kHz: w_r = 2 pi 154.3 kHz, n = 5.206e13 per m^3, lattice constant (2/n)^(1/3) = 33.742 micrometres.
  constexpr double kHalfLattice = 16.871e-6;
  constexpr double kDisplacement = 0.02 * kHalfLattice;
  constexpr double kSigmaMomentum = 2.14e-26;  // sqrt(m k T) at the Doppler limit of about 0.5 mK
  Species ions;
  ions.name = "calcium_40";
  ions.charge = kElementaryCharge;
  ions.mass = 39.9625909 * kMassUnit - kElectronMass;
  std::uint64_t index = 0;
  for (const Site& site : inner_sites(request.count)) {
    PointRandom random(request.seed, 21, index++);
    ions.x.push_back(kHalfLattice * site.i + kDisplacement * random.normal());
    ions.y.push_back(kHalfLattice * site.j + kDisplacement * random.normal());
    ions.z.push_back(kHalfLattice * site.k + kDisplacement * random.normal());
    ions.px.push_back(kSigmaMomentum * random.normal());
    ions.py.push_back(kSigmaMomentum * random.normal());
    ions.pz.push_back(kSigmaMomentum * random.normal());
  }
  return {{std::move(ions)}, "trapped ions near equilibrium"};
}

Scene crystallite(const Request& request) {
  // Rock salt: nearest unlike neighbours 2.8201 angstrom apart. Sites are filled row by row, so that the charges alternate and
  // any count is neutral to one charge.
  constexpr double kSpacing = 2.8201e-10;
  Species sodium, chloride;
  sodium.name = "sodium";
  sodium.charge = kElementaryCharge;
  sodium.mass = 22.98976928 * kMassUnit - kElectronMass;
  chloride.name = "chloride";
  chloride.charge = -kElementaryCharge;
  chloride.mass = 35.45 * kMassUnit + kElectronMass;
  std::size_t edge = 1;
  while (edge * edge * edge < request.count) ++edge;
  for (std::size_t site = 0; site < request.count; ++site) {
    const std::size_t i = site % edge, j = site / edge % edge, k = site / (edge * edge);
    Species& species = (i + j + k) % 2 == 0 ? sodium : chloride;
    species.x.push_back(kSpacing * double(i));
    species.y.push_back(kSpacing * double(j));
    species.z.push_back(kSpacing * double(k));
  }
  return {{std::move(sodium), std::move(chloride)}, "perfect grain of rock salt"};
}

}  // namespace farsum::scenes
