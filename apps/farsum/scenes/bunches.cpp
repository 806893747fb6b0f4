// Bunches of a beam, each in the frame in which its mean velocity is zero: there the sum of static fields is its space charge.
#include "apps/farsum/scenes/constants.hpp"
#include "apps/farsum/scenes/random.hpp"
#include "apps/farsum/scenes/scene.hpp"

namespace farsum::scenes {
namespace {

struct Gaussian {
  double sigma_x, sigma_y, sigma_z;  ///< m
  double sigma_p;                    ///< kg m/s in each direction
};

void add_gaussian_point(Species& species, PointRandom& random, const Gaussian& shape) {
  species.x.push_back(shape.sigma_x * random.normal());
  species.y.push_back(shape.sigma_y * random.normal());
  species.z.push_back(shape.sigma_z * random.normal());
  species.px.push_back(shape.sigma_p * random.normal());
  species.py.push_back(shape.sigma_p * random.normal());
  species.pz.push_back(shape.sigma_p * random.normal());
}

}  // namespace

Scene electron_bunch(const Request& request) {
  // 0.3 mm of a 0.3 mm long bunch at gamma = 10 is 3 mm in its own frame. A spread of 1.2e-25 kg m/s is 0.1 eV of thermal
  // energy.
  constexpr double kBunchCharge = 200e-12;
  constexpr Gaussian kShape{0.3e-3, 0.3e-3, 3e-3, 1.2e-25};
  Species electrons;
  electrons.name = "electron";
  electrons.charge = -kElementaryCharge;
  electrons.mass = kElectronMass;
  if (request.count > 0) electrons.weight = kBunchCharge / kElementaryCharge / double(request.count);
  for (std::size_t i = 0; i < request.count; ++i) {
    PointRandom random(request.seed, 1, i);
    add_gaussian_point(electrons, random, kShape);
  }
  return {{std::move(electrons)}, "electron bunch in its rest frame"};
}

Scene proton_bunch(const Request& request) {
  constexpr double kProtons = 5e9;
  constexpr Gaussian kCore{0.5e-3, 0.5e-3, 20e-3, 2e-23};
  constexpr Gaussian kHalo{2e-3, 2e-3, 20e-3, 8e-23};
  Species core, halo;
  core.name = "proton_core";
  halo.name = "proton_halo";
  for (Species* species : {&core, &halo}) {
    species->charge = kElementaryCharge;
    species->mass = kProtonMass;
    if (request.count > 0) species->weight = kProtons / double(request.count);
  }
  for (std::size_t i = 0; i < request.count; ++i) {
    PointRandom random(request.seed, 2, i);
    const bool in_halo = i % 20 == 19;
    add_gaussian_point(in_halo ? halo : core, random, in_halo ? kHalo : kCore);
  }
  return {{std::move(core), std::move(halo)}, "proton bunch with halo in its rest frame"};
}

}  // namespace farsum::scenes
