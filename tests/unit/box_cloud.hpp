#pragma once
// Random charges around an expansion centre, as the expansion kernels take them.
#include <cmath>
#include <cstddef>
#include <vector>

#include "fmm/base/aligned_array.hpp"
#include "fmm/expansion/translation.hpp"
#include "tests/reference/random.hpp"
#include "tests/unit/harmonics.hpp"

namespace farsum::unit {

inline long double distance(const Vector& a, const Vector& b) {
  return length_of({a[0] - b[0], a[1] - b[1], a[2] - b[2]});
}

/// Charges in the cube of half edge `reach`, or for away > 0 in directions of that cube at a distance of at least `away`.
/// Padded with charge 0 at a harmless place.
template <class Real>
struct BoxCloud {
  std::size_t count;
  std::vector<Real> x, y, z, q;

  BoxCloud(std::size_t points, std::uint64_t seed, double away = 0, double reach = 0.5) : count(points) {
    reference::Random random(seed);
    for (std::size_t i = 0; i < points; ++i) {
      const double v[3] = {random.uniform(-reach, reach), random.uniform(-reach, reach), random.uniform(-reach, reach)};
      const double r = std::sqrt(v[0] * v[0] + v[1] * v[1] + v[2] * v[2]),
                   stretch = away > 0 ? (away + random.uniform()) / r : 1;
      add(v[0] * stretch, v[1] * stretch, v[2] * stretch, random.uniform(-1, 1));
    }
    while (x.size() % kernels::kRealPad<Real> != 0) add(1, 1, 1, 0);
  }

  kernels::PointBlock<Real> block() const { return {x.data(), y.data(), z.data(), q.data(), x.size()}; }
  Vector place(std::size_t i) const { return {x[i], y[i], z[i]}; }

 private:
  void add(double px, double py, double pz, double charge) {
    x.push_back(Real(px));
    y.push_back(Real(py));
    z.push_back(Real(pz));
    q.push_back(Real(charge));
  }
};

}  // namespace farsum::unit
