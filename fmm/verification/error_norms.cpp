#include "fmm/verification/error_norms.hpp"

#include <algorithm>
#include <cmath>
#include <numeric>
#include <vector>

namespace farsum {
namespace {

constexpr double kRoundingUnit = 0x1p-53;
constexpr double kFloorFactor = 8;  // the contract's allowance for rounding in sums of the terms
constexpr double kNormalQuantile95 = 1.6448536269514722;

/// Standard error of the weighted mean square caused by the slice samples (the certain ones have none).
double standard_error(std::span<const SampledError> samples, double total_weight) {
  double n = 0, sum = 0, squares = 0, weight = 0;
  for (const SampledError& s : samples) {
    if (s.certain) continue;
    const double square = s.error * s.error;
    n += 1;
    sum += square;
    squares += square * square;
    weight += s.weight;
  }
  if (n < 2) return 0;
  const double variance = std::max(0.0, squares - sum * sum / n) / (n - 1);
  return weight / total_weight * std::sqrt(variance / n);
}

}  // namespace

double weighted_median(std::span<const double> values, std::span<const double> weights) {
  std::vector<std::size_t> order(values.size());
  std::iota(order.begin(), order.end(), std::size_t{0});
  std::sort(order.begin(), order.end(), [&](std::size_t a, std::size_t b) { return values[a] < values[b]; });
  const double half = std::accumulate(weights.begin(), weights.end(), 0.0) / 2;
  double reached = 0;
  for (std::size_t i : order)
    if ((reached += weights[i]) >= half) return values[i];
  return 0;
}

NormsResult error_norms(std::span<const SampledError> samples) {
  NormsResult result{};
  result.error.measured = true;
  std::vector<double> sizes, floors, weights;
  double weight = 0, error2 = 0, size2 = 0, terms2 = 0, worst = 0;
  for (const SampledError& s : samples) {
    sizes.push_back(s.size);
    floors.push_back(s.floor_size);
    weights.push_back(s.weight);
    weight += s.weight;
    error2 += s.weight * s.error * s.error;
    size2 += s.weight * s.size * s.size;
    terms2 += s.weight * s.terms * s.terms;
    worst = std::max(worst, s.error);
  }
  if (weight == 0) return result;
  const double f0 = weighted_median(floors, weights), scale = std::max(std::sqrt(size2 / weight), f0);
  result.median_size = weighted_median(sizes, weights);
  if (scale == 0) return result;
  double typical2 = 0;
  for (const SampledError& s : samples) {
    const double relative = s.error / std::max({s.size, result.median_size, f0});
    typical2 += s.weight * relative * relative;
  }
  const double mean = error2 / weight;
  result.error.rms = std::sqrt(mean) / scale;
  result.error.rms_upper = std::sqrt(mean + kNormalQuantile95 * standard_error(samples, weight)) / scale;
  result.error.typical = std::sqrt(typical2 / weight);
  result.error.worst = worst / scale;
  result.floor_tolerance = kFloorFactor * kRoundingUnit * std::sqrt(terms2 / weight) / scale;
  return result;
}

}  // namespace farsum
