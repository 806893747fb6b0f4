#pragma once
// Strength of every source box and error that every target box may bear: what the order of each translation is chosen from.
#include <vector>

#include "fmm/schedule/evaluation_job.hpp"
#include "fmm/schedule/survey.hpp"

namespace farsum {

/// Base-2 logarithms, scaled units; see expansion/order_choice.hpp.
struct BoxAccuracy {
  std::vector<float> strength;                           ///< by source box
  std::vector<float> bearable_potential, bearable_field;  ///< by target box
};

/// For a tolerance. Where charges stand denser than elsewhere a target bears more: its own neighbours' field is that much larger.
BoxAccuracy box_accuracy(const EvaluationJob& job, const AllowedError& allowed, double tolerance);

}  // namespace farsum
