// Compiled with AVX-512 flags and therefore free of anything that other files could share with it.
#include "bench/yardstick/yardstick.hpp"

#if defined(__AVX512F__) && defined(__AVX512DQ__)
#include <immintrin.h>

namespace farsum::yardstick {
namespace {

/// Two vectors of targets at a time: enough independent work to hide the latency of the root.
constexpr std::size_t kVectors = 2;

struct DoubleLane {
  using Real = double;
  using Vector = __m512d;
  static constexpr std::size_t kWidth = 8;
  static Vector load(const double* p) { return _mm512_loadu_pd(p); }
  static void store(double* p, Vector v) { _mm512_storeu_pd(p, v); }
  static Vector splat(double v) { return _mm512_set1_pd(v); }
  static Vector add_product(Vector a, Vector b, Vector c) { return _mm512_fmadd_pd(a, b, c); }

  /// 1 / sqrt(r2), 0 where r2 = 0: 14 bits from the table, then a step of third order and one of second.
  static Vector reciprocal_root(Vector r2) {
    const Vector one = splat(1.0), half = splat(0.5), three_eighths = splat(0.375);
    Vector w = _mm512_maskz_rsqrt14_pd(_mm512_cmp_pd_mask(r2, _mm512_setzero_pd(), _CMP_NEQ_OQ), r2);
    Vector rest = _mm512_fnmadd_pd(_mm512_mul_pd(r2, w), w, one);
    w = _mm512_fmadd_pd(w, _mm512_mul_pd(_mm512_fmadd_pd(rest, three_eighths, half), rest), w);
    rest = _mm512_fnmadd_pd(_mm512_mul_pd(r2, w), w, one);
    return _mm512_fmadd_pd(_mm512_mul_pd(w, half), rest, w);
  }
};

struct FloatLane {
  using Real = float;
  using Vector = __m512;
  static constexpr std::size_t kWidth = 16;
  static Vector load(const float* p) { return _mm512_loadu_ps(p); }
  static void store(float* p, Vector v) { _mm512_storeu_ps(p, v); }
  static Vector splat(float v) { return _mm512_set1_ps(v); }
  static Vector add_product(Vector a, Vector b, Vector c) { return _mm512_fmadd_ps(a, b, c); }

  /// 14 bits from the table and one step of second order.
  static Vector reciprocal_root(Vector r2) {
    const Vector one = splat(1.0f), half = splat(0.5f);
    const Vector w = _mm512_maskz_rsqrt14_ps(_mm512_cmp_ps_mask(r2, _mm512_setzero_ps(), _CMP_NEQ_OQ), r2);
    const Vector rest = _mm512_fnmadd_ps(_mm512_mul_ps(r2, w), w, one);
    return _mm512_fmadd_ps(_mm512_mul_ps(w, half), rest, w);
  }
};

template <class Lane>
void sums(const typename Lane::Real* const sources[4], std::size_t n_sources, const typename Lane::Real* const targets[3],
          std::size_t n_targets, typename Lane::Real* const results[4]) {
  using Vector = typename Lane::Vector;
  for (std::size_t i = 0; i < n_targets; i += kVectors * Lane::kWidth) {
    Vector place[kVectors][3], sum[kVectors][4];
    for (std::size_t k = 0; k < kVectors; ++k) {
      for (int c = 0; c < 3; ++c) place[k][c] = Lane::load(targets[c] + i + k * Lane::kWidth);
      for (int c = 0; c < 4; ++c) sum[k][c] = Lane::splat(0);
    }
    for (std::size_t j = 0; j < n_sources; ++j) {
      const Vector x = Lane::splat(sources[0][j]), y = Lane::splat(sources[1][j]), z = Lane::splat(sources[2][j]);
      const Vector charge = Lane::splat(sources[3][j]);
      for (std::size_t k = 0; k < kVectors; ++k) {
        const Vector dx = place[k][0] - x, dy = place[k][1] - y, dz = place[k][2] - z;
        const Vector w = Lane::reciprocal_root(Lane::add_product(dx, dx, Lane::add_product(dy, dy, dz * dz)));
        const Vector qw = charge * w, q3 = qw * (w * w);
        sum[k][0] += qw;
        sum[k][1] = Lane::add_product(q3, dx, sum[k][1]);
        sum[k][2] = Lane::add_product(q3, dy, sum[k][2]);
        sum[k][3] = Lane::add_product(q3, dz, sum[k][3]);
      }
    }
    for (std::size_t k = 0; k < kVectors; ++k)
      for (int c = 0; c < 4; ++c) Lane::store(results[c] + i + k * Lane::kWidth, sum[k][c]);
  }
}

}  // namespace

bool available() noexcept {
  return __builtin_cpu_supports("avx512f") && __builtin_cpu_supports("avx512dq");
}

void pair_sums(const double* const sources[4], std::size_t n_sources, const double* const targets[3], std::size_t n_targets,
               double* const results[4]) noexcept {
  sums<DoubleLane>(sources, n_sources, targets, n_targets, results);
}

void pair_sums(const float* const sources[4], std::size_t n_sources, const float* const targets[3], std::size_t n_targets,
               float* const results[4]) noexcept {
  sums<FloatLane>(sources, n_sources, targets, n_targets, results);
}

}  // namespace farsum::yardstick

#else

namespace farsum::yardstick {

bool available() noexcept {
  return false;
}
void pair_sums(const double* const*, std::size_t, const double* const*, std::size_t, double* const*) noexcept {}
void pair_sums(const float* const*, std::size_t, const float* const*, std::size_t, float* const*) noexcept {}

}  // namespace farsum::yardstick

#endif
