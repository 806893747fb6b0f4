#include "tests/reference/norms.hpp"

#include <algorithm>
#include <cmath>
#include <functional>
#include <limits>
#include <numeric>

namespace farsum::reference {
namespace {

using Values = std::vector<long double>;

double weight_of(const std::vector<double>& weight, std::size_t i) {
  return weight.empty() ? 1.0 : weight[i];
}

/// Smallest value with at least half of the weight at or below it.
long double median(const Values& values, const std::vector<double>& weight) {
  std::vector<std::size_t> order = all_indices(values.size());
  std::sort(order.begin(), order.end(), [&](std::size_t a, std::size_t b) { return values[a] < values[b]; });
  double total = 0, reached = 0;
  for (std::size_t i = 0; i < values.size(); ++i) total += weight_of(weight, i);
  for (std::size_t i : order) {
    reached += weight_of(weight, i);
    if (2 * reached >= total) return values[i];
  }
  return 0;
}

long double rms_of(const Values& values, const std::vector<double>& weight) {
  long double sum = 0, total = 0;
  for (std::size_t i = 0; i < values.size(); ++i) {
    sum += weight_of(weight, i) * values[i] * values[i];
    total += weight_of(weight, i);
  }
  return total > 0 ? std::sqrt(sum / total) : 0;
}

Norms norms(const Values& errors, const Values& magnitudes, const Values& sizes, const Values& sums,
            const std::vector<double>& weight) {
  Norms result;
  const long double f0 = median(sizes, weight), typical_size = std::max(median(magnitudes, weight), f0);
  const long double scale = std::max(rms_of(magnitudes, weight), f0);
  result.scale = static_cast<double>(scale);
  if (scale == 0) return result;
  Values relative(errors.size()), relative_sums(errors.size());
  for (std::size_t i = 0; i < errors.size(); ++i) {
    const long double size = std::max(magnitudes[i], typical_size);
    relative[i] = errors[i] / size;
    relative_sums[i] = sums[i] / size;
  }
  result.rms = static_cast<double>(rms_of(errors, weight) / scale);
  result.typical = static_cast<double>(rms_of(relative, weight));
  result.worst = static_cast<double>(*std::max_element(errors.begin(), errors.end()) / scale);
  result.rounding = static_cast<double>(0x1p-53L * rms_of(sums, weight) / scale);
  result.typical_rounding = static_cast<double>(0x1p-53L * rms_of(relative_sums, weight));
  result.worst_rounding = static_cast<double>(0x1p-53L * *std::max_element(sums.begin(), sums.end()) / scale);
  return result;
}

long double length(long double x, long double y, long double z) {
  return std::sqrt(x * x + y * y + z * z);
}

Measured measure_rows(double q_rms, const std::vector<Exact>& exact, const std::vector<double>& weight, const Result& result,
                      const std::function<std::size_t(std::size_t)>& row) {
  const std::size_t n = exact.size();
  Values error1(n), error2(n), f1(n), f2(n), size1(n), size2(n), sum1(n), sum2(n);
  for (std::size_t i = 0; i < n; ++i) {
    const Exact& e = exact[i];
    const std::size_t k = row(i);
    error1[i] = std::fabs(result.potential[k] - e.potential);
    error2[i] = length(result.field_x[k] - e.field[0], result.field_y[k] - e.field[1], result.field_z[k] - e.field[2]);
    f1[i] = std::fabs(e.potential);
    f2[i] = length(e.field[0], e.field[1], e.field[2]);
    size1[i] = static_cast<long double>(q_rms) / e.nearest;
    size2[i] = size1[i] / e.nearest;
    sum1[i] = e.potential_magnitude;
    sum2[i] = e.field_magnitude;
  }
  return {norms(error1, f1, size1, sum1, weight), norms(error2, f2, size2, sum2, weight)};
}

/// Distance to the nearest other charge and |E| in plain double at every charge: good enough to choose targets.
void survey(const Charges& charges, std::vector<double>& nearest, std::vector<double>& field) {
  const std::size_t n = charges.size();
  nearest.assign(n, std::numeric_limits<double>::infinity());
  field.assign(n, 0);
  for (std::size_t i = 0; i < n; ++i) {
    double e[3] = {0, 0, 0}, closest = nearest[i];
    for (std::size_t j = 0; j < n; ++j) {
      const double dx = charges.x[i] - charges.x[j], dy = charges.y[i] - charges.y[j], dz = charges.z[i] - charges.z[j];
      const double r2 = dx * dx + dy * dy + dz * dz;
      if (r2 == 0) continue;
      closest = std::min(closest, r2);
      const double scaled = charges.q[j] / (r2 * std::sqrt(r2));
      e[0] += scaled * dx;
      e[1] += scaled * dy;
      e[2] += scaled * dz;
    }
    nearest[i] = closest;
    field[i] = std::hypot(e[0], e[1], e[2]);
  }
}

}  // namespace

Sample whole(const Charges& charges) {
  return {all_indices(charges.size()), {}, direct_sum(charges)};
}

Sample chosen(const Charges& charges, std::size_t special, std::size_t strided) {
  const std::size_t n = charges.size();
  if (n <= 2 * special + strided) return whole(charges);
  std::vector<double> nearest, field;
  survey(charges, nearest, field);
  std::vector<bool> taken(n, false);
  const auto take = [&](auto&& before) {
    std::vector<std::size_t> order = all_indices(n);
    std::sort(order.begin(), order.end(), before);
    for (std::size_t i = 0; i < special; ++i) taken[order[i]] = true;
  };
  take([&](std::size_t a, std::size_t b) { return nearest[a] < nearest[b]; });
  take([&](std::size_t a, std::size_t b) { return field[a] > field[b]; });
  Sample sample;
  std::vector<std::size_t> rest;
  for (std::size_t i = 0; i < n; ++i) (taken[i] ? sample.targets : rest).push_back(i);
  sample.weight.assign(sample.targets.size(), 1.0);
  for (std::size_t i = 0; i < strided; ++i) sample.targets.push_back(rest[(2 * i + 1) * rest.size() / (2 * strided)]);
  sample.weight.resize(sample.targets.size(), static_cast<double>(rest.size()) / static_cast<double>(strided));
  sample.exact = direct_sum(charges, sample.targets);
  return sample;
}

double charge_rms(const Charges& charges) {
  long double sum = 0;
  for (double q : charges.q) sum += static_cast<long double>(q) * q;
  return charges.size() == 0 ? 0.0 : static_cast<double>(std::sqrt(sum / static_cast<long double>(charges.size())));
}

Measured measure(const Charges& charges, const Sample& sample, const Result& result) {
  return measure_rows(charge_rms(charges), sample.exact, sample.weight, result,
                      [&](std::size_t i) { return sample.targets[i]; });
}

Measured measure_at(const Charges& sources, const std::vector<Exact>& exact, const Result& result) {
  return measure_rows(charge_rms(sources), exact, {}, result, [](std::size_t i) { return i; });
}

}  // namespace farsum::reference
