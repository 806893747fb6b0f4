// Included once by each target file, after FARSUM_TARGET and FARSUM_VECTOR_BYTES are set: the same bodies for every target,
// in a namespace of the target, so that no wide instruction can leak into another target through a shared inline function.
#include "fmm/kernels/vector_pack.hpp"
//
#include "fmm/kernels/body_harmonics.hpp"
#include "fmm/kernels/body_pair_sums.hpp"
#include "fmm/kernels/body_translate.hpp"

#define FARSUM_TEXT_(word) #word
#define FARSUM_TEXT(word) FARSUM_TEXT_(word)

namespace farsum::kernels::FARSUM_TARGET {

template <class Real>
constexpr ExpansionKernels<Real> expansion_set() {
  return {&translate<Real>, &project<Real>, &evaluate<Real>};
}

const KernelTable& table() noexcept;
const KernelTable& table() noexcept {
  static constexpr KernelTable kTable{FARSUM_TEXT(FARSUM_TARGET), &pair_sums, &exact_sums, expansion_set<float>(),
                                      expansion_set<double>()};
  return kTable;
}

}  // namespace farsum::kernels::FARSUM_TARGET
