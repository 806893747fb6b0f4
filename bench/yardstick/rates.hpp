#pragma once
// Pair rates of one core on data that stay in its cache: the unit in which the cost of a solve is counted.
#include "fmm/options.hpp"

namespace farsum::bench {

/// Pairs a second (potential and field, double precision to rounding, no self pairs) of the project's own direct kernel.
/// Best of several runs of a few milliseconds each: the rate of an undisturbed core.
/// `automatic` is the target that a solver would take.
double own_pair_rate(CpuTarget target);

/// The same of the yardstick; 0 where the processor cannot run it.
double yardstick_rate_double();
double yardstick_rate_float();

}  // namespace farsum::bench
