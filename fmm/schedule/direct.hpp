#pragma once
// Direct summation of all pairs: the method for few charges, and the yardstick of everything else.
#include "fmm/schedule/evaluation_job.hpp"

namespace farsum {

/// Cost N_targets * N_sources pairs. Rounding: (n + 8) eps sum |q| / r^k at most, about sqrt(n) eps of it in practice.
void evaluate_direct(const EvaluationJob& job);

}  // namespace farsum
