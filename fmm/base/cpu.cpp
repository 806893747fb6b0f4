#include "fmm/base/cpu.hpp"

#include <cstdlib>
#include <string>

#include "fmm/error.hpp"

namespace farsum {

bool cpu_supports(CpuTarget target) noexcept {
#if defined(__x86_64__)
  __builtin_cpu_init();
  switch (target) {
    case CpuTarget::avx2:
      return __builtin_cpu_supports("avx2") && __builtin_cpu_supports("fma");
    case CpuTarget::avx512:
      return __builtin_cpu_supports("avx512f") && __builtin_cpu_supports("avx512dq") && __builtin_cpu_supports("avx512vl") &&
             __builtin_cpu_supports("avx512bw") && __builtin_cpu_supports("fma");
    default:
      return true;
  }
#else
  return target == CpuTarget::portable || target == CpuTarget::automatic;
#endif
}

const char* cpu_target_name(CpuTarget target) noexcept {
  switch (target) {
    case CpuTarget::portable:
      return "portable";
    case CpuTarget::avx2:
      return "avx2";
    case CpuTarget::avx512:
      return "avx512";
    case CpuTarget::automatic:
      break;
  }
  return "automatic";
}

CpuTarget resolve_cpu_target(CpuTarget requested) {
  constexpr CpuTarget kBestFirst[] = {CpuTarget::avx512, CpuTarget::avx2, CpuTarget::portable};
  if (requested == CpuTarget::automatic) {
    const char* word = std::getenv("FARSUM_CPU_TARGET");
    for (CpuTarget target : kBestFirst) {
      if (!word && cpu_supports(target)) return target;
      if (word && std::string(word) == cpu_target_name(target)) requested = target;
    }
    if (requested == CpuTarget::automatic)
      throw Error(ErrorCode::invalid_argument, std::string("FARSUM_CPU_TARGET is \"") + word + "\"",
                  "use portable, avx2 or avx512, or unset it");
  }
  if (!cpu_supports(requested))
    throw Error(ErrorCode::invalid_argument,
                std::string("this processor has no ") + cpu_target_name(requested) + " instructions",
                "choose another CPU target");
  return requested;
}

}  // namespace farsum
