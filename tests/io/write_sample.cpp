// Writes IN.h5 (a scene of two species) and OUT.h5 (its result with made-up sums) with the library, for check_openpmd.py.
#include <cmath>
#include <cstdio>
#include <vector>

#include "fmm/error.hpp"
#include "io/particle_reader.hpp"
#include "io/result_writer.hpp"
#include "io/units.hpp"

int main(int count, char** arguments) {
  using namespace farsum::io;
  if (count != 3) return 2;
  const std::size_t rows = 1000;
  std::vector<double> x(rows), y(rows), z(rows), p(rows, 1e-25);
  for (std::size_t i = 0; i < rows; ++i) {
    x[i] = std::sin(static_cast<double>(i));
    y[i] = 1e-3 * std::cos(static_cast<double>(i));
    z[i] = 1e-6 * static_cast<double>(i) - 5e-4;
  }
  SpeciesColumns ions{"ions",   rows,     x.data(),          y.data(),         z.data(), p.data(),
                      p.data(), p.data(), kElementaryCharge, 40 * kAtomicMass, 5,        0};
  SpeciesColumns electrons{"electrons", rows / 2, y.data(),           z.data(),      x.data(), nullptr,
                           nullptr,     nullptr,  -kElementaryCharge, kElectronMass, 1,        rows};
  try {
    write_particles(arguments[1], {ions, electrons}, {}, {});
    const ParticleSet set = read_particles(arguments[1]);
    std::vector<double> sums(set.size());
    for (std::size_t i = 0; i < sums.size(); ++i) sums[i] = 1e-12 * (1 + std::abs(set.x[i]));
    const ResultColumns results{sums.data(), sums.data(), sums.data(), sums.data(), kCoulombConstant, true, true, true, true};
    write_result(arguments[2], set, results, {{"tolerance", 1e-6}, {"eps0", kVacuumPermittivity}}, {});
  } catch (const farsum::Error& error) {
    std::fprintf(stderr, "%s\n", error.what());
    return 1;
  }
  return 0;
}
