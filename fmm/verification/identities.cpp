#include "fmm/verification/identities.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <vector>

namespace farsum {
namespace {

constexpr std::size_t kGrain = 1 << 14;

struct Sums {
  long double q_phi = 0, q_phi_size = 0, virial = 0, force2 = 0;
  long double force[3] = {0, 0, 0}, torque[3] = {0, 0, 0};
  double field_max2 = 0;
  std::size_t first_bad = ~std::size_t{0};

  void join(const Sums& other) {
    q_phi += other.q_phi;
    q_phi_size += other.q_phi_size;
    virial += other.virial;
    force2 += other.force2;
    for (int axis = 0; axis < 3; ++axis) {
      force[axis] += other.force[axis];
      torque[axis] += other.torque[axis];
    }
    field_max2 = std::max(field_max2, other.field_max2);
    first_bad = std::min(first_bad, other.first_bad);
  }
};

class Pass {
 public:
  Pass(const IdentityInput& input, Executor& executor)
      : in_(input), potential_(-input.potential_unit.exponent()), field_(-input.field_unit.exponent()) {
    const std::size_t n = in_.charges.count, pieces = (n + kGrain - 1) / kGrain;
    std::vector<std::array<long double, 3>> parts(pieces);
    executor.for_each(n, kGrain, [&](std::size_t begin, std::size_t end, int) {
      const double* const bases[3] = {in_.positions.x, in_.positions.y, in_.positions.z};
      for (std::size_t i = begin; i < end; ++i)
        for (std::size_t axis = 0; axis < 3; ++axis)
          parts[begin / kGrain][axis] += in_.length(bases[axis][std::ptrdiff_t(i) * in_.positions.stride]);
    });
    std::array<long double, 3> sum{};
    for (const std::array<long double, 3>& part : parts)
      for (std::size_t axis = 0; axis < 3; ++axis) sum[axis] += part[axis];
    for (std::size_t axis = 0; axis < 3; ++axis) middle_[axis] = double(sum[axis] / (long double)(n));
  }

  Sums over(std::size_t begin, std::size_t end) const {
    Sums sums;
    for (std::size_t i = begin; i < end; ++i) add(sums, i);
    return sums;
  }

 private:
  void add(Sums& sums, std::size_t i) const {
    const std::ptrdiff_t at = std::ptrdiff_t(i) * in_.values.stride;
    const double q = in_.charge(in_.charges.q[std::ptrdiff_t(i) * in_.charges.stride]);
    bool finite = true;
    if (in_.values.potential) {
      const double phi = in_.values.potential[at];
      finite = std::isfinite(phi);
      const double term = q * potential_(phi);
      sums.q_phi += term;
      sums.q_phi_size += std::abs(term);
    }
    if (in_.values.field_x) finite = add_field(sums, i, at, q) && finite;
    if (!finite) sums.first_bad = std::min(sums.first_bad, i);
  }

  bool add_field(Sums& sums, std::size_t i, std::ptrdiff_t at, double q) const {
    const double raw[3] = {in_.values.field_x[at], in_.values.field_y[at], in_.values.field_z[at]};
    const std::ptrdiff_t p = std::ptrdiff_t(i) * in_.positions.stride;
    const double r[3] = {in_.length(in_.positions.x[p]) - middle_[0], in_.length(in_.positions.y[p]) - middle_[1],
                         in_.length(in_.positions.z[p]) - middle_[2]};
    double e[3], f[3], e2 = 0;
    for (int axis = 0; axis < 3; ++axis) {
      e[axis] = field_(raw[axis]);
      f[axis] = q * e[axis];
      e2 += e[axis] * e[axis];
      sums.force[axis] += f[axis];
    }
    sums.virial += r[0] * f[0] + r[1] * f[1] + r[2] * f[2];
    sums.force2 += q * q * e2;
    sums.torque[0] += r[1] * f[2] - r[2] * f[1];
    sums.torque[1] += r[2] * f[0] - r[0] * f[2];
    sums.torque[2] += r[0] * f[1] - r[1] * f[0];
    sums.field_max2 = std::max(sums.field_max2, e2);
    return std::isfinite(raw[0]) && std::isfinite(raw[1]) && std::isfinite(raw[2]);
  }

  const IdentityInput& in_;
  PowerOfTwo potential_, field_;
  double middle_[3];
};

double norm(const long double (&v)[3]) {
  return double(std::sqrt(v[0] * v[0] + v[1] * v[1] + v[2] * v[2]));
}

double ratio(double value, double scale) {
  return scale > 0 ? value / scale : 0;
}

}  // namespace

IdentityResult check_identities(const IdentityInput& input, Executor& executor) {
  const std::size_t n = input.charges.count, pieces = (n + kGrain - 1) / kGrain;
  std::vector<Sums> parts(pieces);
  const Pass pass(input, executor);
  executor.for_each(n, kGrain, [&](std::size_t begin, std::size_t end, int) { parts[begin / kGrain] = pass.over(begin, end); });
  Sums sums;
  for (const Sums& part : parts) sums.join(part);

  IdentityResult result;
  result.finite = sums.first_bad == ~std::size_t{0};
  result.first_bad = sums.first_bad;
  const double half_size = double(sums.q_phi_size) / 2;
  if (input.values.potential) {
    result.energy = {true, input.energy_unit(double(sums.q_phi) / 2), input.energy_unit(half_size)};
  }
  if (input.values.field_x) {
    const double forces = std::sqrt(double(n) * double(sums.force2)), extent = input.length(input.bounds.extent());
    result.checks = {true, ratio(norm(sums.force), forces), ratio(norm(sums.torque), forces * extent), 0};
    if (input.values.potential) result.checks.virial = ratio(double(std::abs(sums.virial - sums.q_phi / 2)), half_size);
    result.field_max = input.field_unit(std::sqrt(sums.field_max2));
  }
  return result;
}

}  // namespace farsum
