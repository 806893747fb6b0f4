#pragma once
// Exact sums at a few targets over all sources: double terms with compensated addition, pieces added in extended precision.
// Error of one target: about 4 eps sqrt(sum of squared terms), far below the smallest tolerance of 1e-13; tested against long
// double.
#include <cstdint>
#include <span>
#include <vector>

#include "fmm/kernels/kernel_table.hpp"
#include "fmm/parallel/executor.hpp"

namespace farsum {

/// Sources in tree order, scaled and padded.
struct SourceArrays {
  const double *x, *y, *z, *q;
  std::size_t count;
};

struct ExactTarget {
  double x, y, z;
  std::int64_t self;  ///< source that is the target itself, or -1
};

struct ExactValue {
  double potential = 0, field[3] = {0, 0, 0};
  double potential_scale = 0, field_scale = 0;  ///< sum |q| / r, sum |q| / r^2
  double nearest_squared = 0;                   ///< to the nearest source at another place than the target
};

std::vector<ExactValue> exact_values(const SourceArrays& sources, std::span<const ExactTarget> targets,
                                     const kernels::KernelTable& kernels, Executor& executor);

}  // namespace farsum
