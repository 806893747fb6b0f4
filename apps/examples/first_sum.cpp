// The smallest use of the library: potential and field of four charges, with the measured error.
#include <cstdio>

#include "fmm/solver.hpp"

int main() {
  const double x[] = {0, 1, 0, 1}, y[] = {0, 0, 1, 1}, z[] = {0, 0, 0, 0}, q[] = {1, -1, -1, 1};
  double phi[4], ex[4], ey[4], ez[4];
  farsum::Options options;
  options.tolerance = 1e-9;
  farsum::Solver solver(options);
  solver.set_charges({x, y, z, 4}, {q, 4});
  solver.evaluate(farsum::Output::potential | farsum::Output::field, {phi, ex, ey, ez});
  std::printf("potential of the first charge %.12f, field error %.1e\n", phi[0], solver.report().error.field.rms);
}
