#pragma once
// The CPU targets that this machine can run, as parameters of a test suite.
#include <gtest/gtest.h>

#include <string>
#include <vector>

#include "fmm/base/cpu.hpp"
#include "fmm/kernels/dispatch.hpp"

namespace farsum::unit {

inline std::vector<CpuTarget> available_targets() {
  std::vector<CpuTarget> targets;
  for (CpuTarget target : {CpuTarget::portable, CpuTarget::avx2, CpuTarget::avx512})
    if (cpu_supports(target)) targets.push_back(target);
  return targets;
}

/// Base of tests that run on every available target.
class OnTarget : public testing::TestWithParam<CpuTarget> {
 protected:
  const kernels::KernelTable& table() const { return kernels::kernel_table(GetParam()); }
};

inline std::string target_word(const testing::TestParamInfo<CpuTarget>& info) {
  return cpu_target_name(info.param);
}

/// Counts around the widths 2, 4, 8 and 16 of the vectors: 0, 1, W - 1, W, W + 1, 2 W + 1.
inline const std::vector<std::size_t>& counts_around_widths() {
  static const std::vector<std::size_t> counts{0, 1, 2, 3, 4, 5, 7, 8, 9, 15, 16, 17, 33};
  return counts;
}

}  // namespace farsum::unit
