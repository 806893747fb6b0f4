#pragma once
// Which instruction sets this machine has, and which one a solver shall use.
#include "fmm/options.hpp"

namespace farsum {

/// True if the running processor and system can execute the target's instructions.
bool cpu_supports(CpuTarget target) noexcept;

/// Resolves `automatic`: the environment variable FARSUM_CPU_TARGET if set, else the best target supported.
/// Throws Error(invalid_argument) for an unknown word or a target that this machine lacks.
CpuTarget resolve_cpu_target(CpuTarget requested);

/// "portable", "avx2", "avx512" or "automatic".
const char* cpu_target_name(CpuTarget target) noexcept;

}  // namespace farsum
