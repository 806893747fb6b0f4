#pragma once
// What an evaluation is going to do: a pure function of data, tolerance and CPU target.
#include "fmm/kernels/kernel_table.hpp"
#include "fmm/options.hpp"

namespace farsum {

struct EvaluationPlan {
  Method method = Method::direct;           ///< direct or tree
  kernels::RootAccuracy root_accuracy = kernels::RootAccuracy::full;
};

}  // namespace farsum
