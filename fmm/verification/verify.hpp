#pragma once
// Measures the error of a result against exact sums at chosen targets (sample_choice, exact_sums, error_norms put together).
#include "fmm/octree/octree.hpp"
#include "fmm/options.hpp"
#include "fmm/report.hpp"
#include "fmm/verification/exact_sums.hpp"

namespace farsum {

/// What is verified: a result in the caller's arrays for targets in tree order.
struct VerifiedResult {
  const Octree& sources;
  const double* charges;          ///< scaled, tree order
  double charge_rms;              ///< scaled
  const Octree& targets;          ///< same object where targets are the charges
  const double* nearest_squared;  ///< per target in tree order
  ResultView values;
  PowerOfTwo potential_unit, field_unit;  ///< scaled value -> caller's value
  int order;                              ///< of the expansions; 0 if the result was summed directly
};

struct VerificationOutcome {
  ErrorMeasure measure;
  double field_median = 0;  ///< scaled
};

/// `wanted` samples; sets every field of the measure, `met` against `tolerance`.
VerificationOutcome verify_result(const VerifiedResult& result, std::size_t wanted, double tolerance,
                                  const kernels::KernelTable& kernels, Executor& executor);

}  // namespace farsum
