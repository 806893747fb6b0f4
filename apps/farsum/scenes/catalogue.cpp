#include "apps/farsum/scenes/scene.hpp"

namespace farsum::scenes {

const std::vector<Entry>& catalogue() {
  static const std::vector<Entry> entries = {
      {"electron_bunch", "200 pC of electrons in the frame in which the bunch is at rest; Gaussian, 0.3 x 0.3 x 3 mm rms",
       100000, false, &electron_bunch},
      {"proton_bunch", "5e9 protons at rest in their own frame: a dense core and a halo of 5 % four times as wide", 100000,
       false, &proton_bunch},
      {"ion_cloud", "cold calcium-40 ions, a 2:1 spheroid as in a 154/154/100 kHz trap, close to equilibrium", 20000, false,
       &ion_cloud},
      {"crystallite", "a perfect grain of rock salt: alternating charges on a cubic lattice of 2.82 angstrom (any seed)", 64000,
       false, &crystallite},
      {"droplets", "a spray of charged droplets, 20 nm to 2 micrometres, in a plume of 1 cm: strongly clustered", 100000, true,
       &droplets},
      {"cube", "ions spread evenly in a cube of 1 cm", 100000, true, &cube},
      {"shell", "ions spread evenly on a sphere of 1 cm diameter", 100000, true, &shell},
      {"line", "ions spread evenly on a line of 1 cm", 10000, true, &line},
      {"plane", "ions spread evenly on a square of 1 cm", 100000, true, &plane},
  };
  return entries;
}

const Entry* find_entry(std::string_view name) {
  for (const Entry& entry : catalogue())
    if (entry.name == name) return &entry;
  return nullptr;
}

SignedPoints::SignedPoints(const Request& request, double charge, double mass, double weight)
    : both_signs_(request.both_signs) {
  for (int sign = 0; sign < (both_signs_ ? 2 : 1); ++sign) {
    Species species;
    species.name = sign == 0 ? "positive" : "negative";
    species.charge = sign == 0 ? charge : -charge;
    species.mass = mass;
    species.weight = weight;
    species_.push_back(std::move(species));
  }
}

void SignedPoints::add(double x, double y, double z) {
  Species& species = species_[both_signs_ ? added_ % 2 : 0];
  species.x.push_back(x);
  species.y.push_back(y);
  species.z.push_back(z);
  ++added_;
}

std::vector<Species> SignedPoints::take() {
  return std::move(species_);
}

}  // namespace farsum::scenes
