#include "fmm/kernels/dispatch.hpp"

namespace farsum::kernels {

namespace portable {
const KernelTable& table() noexcept;
}
#if defined(FARSUM_X86_TARGETS)
namespace avx2 {
const KernelTable& table() noexcept;
}
namespace avx512 {
const KernelTable& table() noexcept;
}
#endif

const KernelTable& kernel_table(CpuTarget target) noexcept {
#if defined(FARSUM_X86_TARGETS)
  if (target == CpuTarget::avx512) return avx512::table();
  if (target == CpuTarget::avx2) return avx2::table();
#endif
  (void)target;
  return portable::table();
}

}  // namespace farsum::kernels
