#pragma once
// What an evaluation is going to do: a pure function of data, tolerance and CPU target.
#include "fmm/kernels/kernel_table.hpp"
#include "fmm/options.hpp"

namespace farsum {

struct EvaluationPlan {
  Method method = Method::direct;  ///< direct or tree
  double tolerance = 0;            ///< what the passes aim at: the caller's, or tightened in a retry
  kernels::RootAccuracy root_accuracy = kernels::RootAccuracy::full;
};

}  // namespace farsum
