#pragma once
// Demonstration charges of this project's own invention. SI units throughout; the same charges from every compiler
// (random.hpp).
#include <cstddef>
#include <cstdint>
#include <string>
#include <string_view>
#include <vector>

namespace farsum::scenes {

/// Particles of one kind. Momenta are of one real particle; empty arrays mean at rest and not recorded.
struct Species {
  std::string name;
  std::vector<double> x, y, z;     ///< m
  std::vector<double> px, py, pz;  ///< kg m/s
  double charge = 0;               ///< C, of one real particle
  double mass = 0;                 ///< kg, of one real particle
  double weight = 1;               ///< real particles for each one stored
};

struct Scene {
  std::vector<Species> species;  ///< ids run from 0 through all species in this order
  std::string comment;
};

/// What the caller may choose. Equal requests give equal bits.
struct Request {
  std::size_t count = 0;
  std::uint64_t seed = 1;
  bool both_signs = false;  ///< every second charge negative; only for scenes whose entry allows it
};

struct Entry {
  std::string_view name;
  std::string_view description;  ///< one line for the help text
  std::size_t default_count;
  bool both_signs_allowed;
  Scene (*build)(const Request&);
};

/// All scenes, in the order in which the help lists them.
const std::vector<Entry>& catalogue();
/// The entry of that name, or nullptr.
const Entry* find_entry(std::string_view name);

// One family a file.
Scene electron_bunch(const Request&);
Scene proton_bunch(const Request&);
Scene ion_cloud(const Request&);
Scene crystallite(const Request&);
Scene droplets(const Request&);
Scene cube(const Request&);
Scene shell(const Request&);
Scene line(const Request&);
Scene plane(const Request&);

/// Splits points between a positive and a negative species, every second one each, when both signs are asked for.
class SignedPoints {
 public:
  SignedPoints(const Request& request, double charge, double mass, double weight);
  void add(double x, double y, double z);
  std::vector<Species> take();

 private:
  bool both_signs_;
  std::size_t added_ = 0;
  std::vector<Species> species_;
};

}  // namespace farsum::scenes
