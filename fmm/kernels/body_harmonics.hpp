// Harmonics of points: projection of charges (P2M, P2L) and evaluation of expansions (L2P, M2P). Lanes are points.
// Basis and coefficient order: expansion/indexing.hpp. With C, S the cosine and sine parts of degree n, order m:
//   regular    C_mm + i S_mm = d_m (x + i y) (C + i S)_{m-1,m-1},   H_nm = a_nm z H_{n-1,m} - b_nm r^2 H_{n-2,m},  H_00 = 1
//   irregular  the same with (x, y, z, r^2) / r^2 for (x, y, z, r^2) and H_00 = 1/r, except that r^2 becomes 1/r^2.

namespace farsum::kernels::FARSUM_TARGET {

/// Arguments of the recurrence for `vectors` vectors of points.
template <class Real, std::size_t vectors>
struct HarmonicInput {
  Vec<Real> x[vectors], y[vectors], z[vectors], square[vectors], start[vectors];
};

template <class Real>
inline Vec<Real> root(Vec<Real> v) {
  for (std::size_t i = 0; i < kWidth<Real>; ++i) v[i] = Real(__builtin_sqrt(v[i]));
  return v;
}

template <class Real, std::size_t vectors>
inline HarmonicInput<Real, vectors> harmonic_input(const PointBlock<Real>& points, std::size_t first, bool irregular) {
  HarmonicInput<Real, vectors> in;
  for (std::size_t u = 0; u < vectors; ++u) {
    const std::size_t at = first + u * kWidth<Real>;
    const Vec<Real> x = load(points.x + at), y = load(points.y + at), z = load(points.z + at), r2 = x * x + y * y + z * z;
    const Vec<Real> inverse = irregular ? Real(1) / r2 : splat(Real(1));
    in.x[u] = x * inverse;
    in.y[u] = y * inverse;
    in.z[u] = z * inverse;
    in.square[u] = irregular ? inverse : r2;
    in.start[u] = irregular ? root<Real>(inverse) : splat(Real(1));
  }
  return in;
}

/// Calls visit(index of C, index of S, cosine, sine) for all degrees and orders; for m = 0 both indices are equal and sine is
/// 0.
template <class Real, std::size_t vectors, class Visit>
inline void for_harmonics(const HarmonicInput<Real, vectors>& in, int order, const Recurrence<Real>& recurrence,
                          Visit&& visit) {
  Vec<Real> start_c[vectors], start_s[vectors], c[vectors], s[vectors], last_c[vectors], last_s[vectors];
  for (std::size_t u = 0; u < vectors; ++u) {
    start_c[u] = in.start[u];
    start_s[u] = Vec<Real>{};
  }
  for (int m = 0; m <= order; ++m) {
    const Real* row = recurrence.table + std::size_t(m) * recurrence.stride;
    for (std::size_t u = 0; u < vectors; ++u) {
      if (m > 0) {
        const Vec<Real> previous = start_c[u];
        start_c[u] = row[0] * (in.x[u] * previous - in.y[u] * start_s[u]);
        start_s[u] = row[0] * (in.x[u] * start_s[u] + in.y[u] * previous);
      }
      c[u] = start_c[u];
      s[u] = start_s[u];
      last_c[u] = last_s[u] = Vec<Real>{};
    }
    visit(m * m + 2 * m, m * m, c, s);
    for (int n = m + 1; n <= order; ++n) {
      const Real a = row[2 * (n - m)], b = row[2 * (n - m) + 1];
      for (std::size_t u = 0; u < vectors; ++u) {
        const Vec<Real> az = a * in.z[u], bs = b * in.square[u];
        const Vec<Real> next_c = az * c[u] - bs * last_c[u], next_s = az * s[u] - bs * last_s[u];
        last_c[u] = c[u];
        last_s[u] = s[u];
        c[u] = next_c;
        s[u] = next_s;
      }
      visit(n * n + n + m, n * n + n - m, c, s);
    }
  }
}

template <class Real, std::size_t vectors>
inline void project_vectors(const PointBlock<Real>& points, std::size_t first, int order, bool irregular,
                            const Recurrence<Real>& recurrence, Real* sums) {
  const HarmonicInput<Real, vectors> in = harmonic_input<Real, vectors>(points, first, irregular);
  Vec<Real> q[vectors];
  for (std::size_t u = 0; u < vectors; ++u) q[u] = load(points.q + first + u * kWidth<Real>);
  const auto add = [&](int index, const Vec<Real>* values) {
    Real* at = sums + std::size_t(index) * kWidth<Real>;
    Vec<Real> sum = load(at);
    for (std::size_t u = 0; u < vectors; ++u) sum += q[u] * values[u];
    store(at, sum);
  };
  for_harmonics<Real, vectors>(in, order, recurrence, [&](int cosine, int sine, const Vec<Real>* c, const Vec<Real>* s) {
    add(cosine, c);
    if (sine != cosine) add(sine, s);
  });
}

template <class Real>
void project(const PointBlock<Real>& points, int order, bool irregular, const Recurrence<Real>& recurrence, Real* coefficients,
             Real* scratch) {
  constexpr std::size_t w = kWidth<Real>;
  const std::size_t terms = round_up_to(std::size_t(order + 1) * std::size_t(order + 1), w);
  for (std::size_t i = 0; i < terms; ++i) store(scratch + i * w, Vec<Real>{});
  std::size_t first = 0;
  for (; first + 2 * w <= points.count; first += 2 * w)
    project_vectors<Real, 2>(points, first, order, irregular, recurrence, scratch);
  if (first < points.count) project_vectors<Real, 1>(points, first, order, irregular, recurrence, scratch);
  for (std::size_t i = 0; i < terms; i += w) {
    Vec<Real> rows[w];
    for (std::size_t k = 0; k < w; ++k) rows[k] = load(scratch + (i + k) * w);
    transpose<Real>(rows);
    for (std::size_t half = w / 2; half > 0; half /= 2)
      for (std::size_t k = 0; k < half; ++k) rows[k] += rows[k + half];
    store(coefficients + i, load(coefficients + i) + rows[0]);
  }
}

template <class Real, std::size_t vectors, int n_rows>
inline void evaluate_vectors(const PointBlock<Real>& points, std::size_t first, int order, bool irregular,
                             const Recurrence<Real>& recurrence, const Real* const* rows, Real* const* values) {
  const HarmonicInput<Real, vectors> in = harmonic_input<Real, vectors>(points, first, irregular);
  // The term of degree 0 is by far the largest of a potential: it comes last, so that it does not round the others away.
  Vec<Real> sum[n_rows][vectors] = {};
  for_harmonics<Real, vectors>(in, order, recurrence, [&](int cosine, int sine, const Vec<Real>* c, const Vec<Real>* s) {
    if (cosine == 0) return;
    for (int row = 0; row < n_rows; ++row) {
      const Real weight_c = rows[row][cosine], weight_s = rows[row][sine];
      for (std::size_t u = 0; u < vectors; ++u) sum[row][u] += weight_c * c[u] + weight_s * s[u];
    }
  });
  for (int row = 0; row < n_rows; ++row)
    for (std::size_t u = 0; u < vectors; ++u)
      store(values[row] + first + u * kWidth<Real>, sum[row][u] + rows[row][0] * in.start[u]);
}

template <class Real, int n_rows>
inline void evaluate_rows(const PointBlock<Real>& points, int order, bool irregular, const Recurrence<Real>& recurrence,
                          const Real* const* rows, Real* const* values) {
  constexpr std::size_t w = kWidth<Real>;
  std::size_t first = 0;
  for (; first + 2 * w <= points.count; first += 2 * w)
    evaluate_vectors<Real, 2, n_rows>(points, first, order, irregular, recurrence, rows, values);
  for (; first < points.count; first += w)
    evaluate_vectors<Real, 1, n_rows>(points, first, order, irregular, recurrence, rows, values);
}

template <class Real>
void evaluate(const PointBlock<Real>& points, int order, bool irregular, const Recurrence<Real>& recurrence,
              const Real* const* rows, int n_rows, Real* const* values) {
  if (n_rows == 1)
    evaluate_rows<Real, 1>(points, order, irregular, recurrence, rows, values);
  else
    evaluate_rows<Real, 4>(points, order, irregular, recurrence, rows, values);
}

}  // namespace farsum::kernels::FARSUM_TARGET
