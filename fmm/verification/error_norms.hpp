#pragma once
// The norms of the accuracy contract (defined in fmm/report.hpp) from weighted samples. Scaled units throughout.
#include <cstddef>
#include <span>

#include "fmm/report.hpp"

namespace farsum {

/// One verified target of one output.
struct SampledError {
  double error;       ///< |f - f_exact|
  double size;        ///< |f_exact|
  double floor_size;  ///< q_rms / d^k for this target, d the distance to the nearest other charge
  double terms;       ///< sum |q| / r^k: what rounding acts on
  double weight;      ///< number of targets it stands for
  bool certain;       ///< stands for itself only
};

struct NormsResult {
  OutputError error;
  double floor_tolerance;  ///< 8 * 2^-53 * rms(terms) / max(rms f, f0)
  double median_size;      ///< median |f|
};

NormsResult error_norms(std::span<const SampledError> samples);

/// Median of values with weights: the smallest value at which half of the weight is reached.
double weighted_median(std::span<const double> values, std::span<const double> weights);

}  // namespace farsum
