#pragma once
// Hands out the kernels of a CPU target.
#include "fmm/kernels/kernel_table.hpp"
#include "fmm/options.hpp"

namespace farsum::kernels {

/// The table of a resolved target (see base/cpu.hpp); never `automatic`.
const KernelTable& kernel_table(CpuTarget target) noexcept;

}  // namespace farsum::kernels
