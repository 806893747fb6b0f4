// The vector type of a target and the few operations that plain arithmetic on it does not give. Only target files include this.
// Built on the vector extensions of GCC and Clang: +, -, *, /, comparisons and ?: work on whole vectors.
#include <cstddef>
#include <utility>
#if defined(__AVX2__)
#include <immintrin.h>
#endif

#include "fmm/kernels/kernel_table.hpp"

namespace farsum::kernels::FARSUM_TARGET {

typedef double VecDouble __attribute__((vector_size(FARSUM_VECTOR_BYTES)));
typedef float VecFloat __attribute__((vector_size(FARSUM_VECTOR_BYTES)));
typedef long long MaskDouble __attribute__((vector_size(FARSUM_VECTOR_BYTES)));

template <class Real>
struct VecOf;
template <>
struct VecOf<double> {
  using Type = VecDouble;
};
template <>
struct VecOf<float> {
  using Type = VecFloat;
};
template <class Real>
using Vec = typename VecOf<Real>::Type;
template <class Real>
inline constexpr std::size_t kWidth = FARSUM_VECTOR_BYTES / sizeof(Real);

inline constexpr std::size_t round_up_to(std::size_t n, std::size_t block) {
  return (n + block - 1) / block * block;
}

template <class Real>
inline Vec<Real> load(const Real* p) {
  Vec<Real> v;
  __builtin_memcpy(&v, p, sizeof v);
  return v;
}
template <class Real>
inline void store(Real* p, Vec<Real> v) {
  __builtin_memcpy(p, &v, sizeof v);
}
template <class Real>
inline Vec<Real> splat(Real s) {
  return s - Vec<Real>{};
}

/// Sum of the lanes, halves first: a fixed order.
template <class Real>
inline Real sum_lanes(Vec<Real> v) {
  Real part[kWidth<Real>];
  store(part, v);
  for (std::size_t width = kWidth<Real> / 2; width > 0; width /= 2)
    for (std::size_t i = 0; i < width; ++i) part[i] += part[i + width];
  return part[0];
}
template <class Real>
inline Real min_lanes(Vec<Real> v) {
  Real least = v[0];
  for (std::size_t i = 1; i < kWidth<Real>; ++i) least = v[i] < least ? v[i] : least;
  return least;
}

inline VecDouble min(VecDouble a, VecDouble b) {
  return a < b ? a : b;
}

/// 1 / sqrt(r2). The start value of the instruction set is improved by cubic steps w += w e (1/2 + 3/8 e), e = 1 - r2 w^2,
/// each of which turns a relative error d into 5/2 d^3. Start 2^-14 (AVX-512), 1.5 * 2^-12 (AVX2); r2 within the float range
/// there.
template <RootAccuracy accuracy>
inline VecDouble reciprocal_root(VecDouble r2) {
#if defined(__AVX512F__)
  VecDouble w = VecDouble(_mm512_maskz_rsqrt14_pd(0xff, __m512d(r2)));
  constexpr int kSteps = accuracy == RootAccuracy::fast ? 1 : 2;
#elif defined(__AVX2__)
  VecDouble w = VecDouble(_mm256_cvtps_pd(_mm_rsqrt_ps(_mm256_cvtpd_ps(__m256d(r2)))));
  constexpr int kSteps = 2;
#endif
#if defined(__AVX2__)
  for (int step = 0; step < kSteps; ++step) {
    const VecDouble e = 1.0 - r2 * w * w;
    w += w * e * (0.5 + 0.375 * e);
  }
  return w;
#else
  VecDouble w;
  for (std::size_t i = 0; i < kWidth<double>; ++i) w[i] = 1.0 / __builtin_sqrt(r2[i]);
  return w;
#endif
}

/// One stage of the butterfly transposition: exchanges the off-diagonal lane blocks of size `step` of two rows.
template <class Real, std::size_t step, std::size_t... lane>
inline void exchange_blocks(Vec<Real>& a, Vec<Real>& b, std::index_sequence<lane...>) {
  constexpr std::size_t w = kWidth<Real>;
  const Vec<Real> upper = __builtin_shufflevector(a, b, ((lane & step) ? w + lane - step : lane)...);
  const Vec<Real> lower = __builtin_shufflevector(a, b, ((lane & step) ? w + lane : lane + step)...);
  a = upper;
  b = lower;
}

/// Transposes kWidth vectors in place.
template <class Real, std::size_t step = kWidth<Real> / 2>
inline void transpose(Vec<Real>* rows) {
  if constexpr (step > 0) {
    for (std::size_t i = 0; i < kWidth<Real>; ++i)
      if ((i & step) == 0) exchange_blocks<Real, step>(rows[i], rows[i + step], std::make_index_sequence<kWidth<Real>>{});
    transpose<Real, step / 2>(rows);
  }
}

}  // namespace farsum::kernels::FARSUM_TARGET
