// Translations M2M, M2L and L2L for a batch of boxes that share the offset: lanes are boxes. With the offset turned to the z
// axis the translation is one small dense matrix per order m (White & Head-Gordon 1996); about 2 p^3 fused multiply-adds in
// all. Tables: expansion/translation.hpp. Matrices stand in blocks of kBlockRows rows (the last block may have fewer), each
// block column by column, so that one load of a lane vector serves all rows of the block.

namespace farsum::kernels::FARSUM_TARGET {

inline constexpr int kBlockRows = 4;
/// Lane vectors per batch: two hide the latency of the multiply-adds where there are registers enough.
inline constexpr std::size_t kBatchVectors = FARSUM_VECTOR_BYTES == 64 ? 2 : 1;

template <class Real, std::size_t vectors, int rows, class In, class Out>
inline void block_times(const Real* matrix, int columns, const In& in, const Out& out, int first_row) {
  Vec<Real> sum[rows][vectors] = {};
  for (int column = 0; column < columns; ++column) {
    const Vec<Real>* v = in(column);
    for (int row = 0; row < rows; ++row)
      for (std::size_t u = 0; u < vectors; ++u) sum[row][u] += matrix[column * rows + row] * v[u];
  }
  for (int row = 0; row < rows; ++row) {
    Vec<Real>* to = out(first_row + row);
    for (std::size_t u = 0; u < vectors; ++u) to[u] = sum[row][u];
  }
}

/// out(row) = sum over columns matrix * in(column); returns the end of the matrix.
template <class Real, std::size_t vectors, class In, class Out>
inline const Real* matrix_times(const Real* matrix, int rows, int columns, const In& in, const Out& out) {
  int row = 0;
  for (; row + kBlockRows <= rows; row += kBlockRows, matrix += kBlockRows * columns)
    block_times<Real, vectors, kBlockRows>(matrix, columns, in, out, row);
  const int left = rows - row;
  if (left == 1) block_times<Real, vectors, 1>(matrix, columns, in, out, row);
  if (left == 2) block_times<Real, vectors, 2>(matrix, columns, in, out, row);
  if (left == 3) block_times<Real, vectors, 3>(matrix, columns, in, out, row);
  return matrix + left * columns;
}

/// Work arrays of one batch. By degree: [n^2 + n + k]. By order: all degrees of m together, cosine and sine part side by side.
template <class Real, std::size_t vectors>
struct Batch {
  using V = Vec<Real>;
  const Translation<Real>& t;
  V* by_degree;
  V* by_order;
  V* shifted;

  V* degree_slot(int n, int k) const { return by_degree + std::size_t(n * n + n + k) * vectors; }
  /// First slot of order m: pairs (cosine, sine) for n = m, m + 1, ...
  std::size_t order_begin(int m) const { return std::size_t(m * (t.order + 1) - m * (m - 1) / 2) * 2 * vectors; }
  V* cosine_slot(V* base, int n, int m) const { return base + order_begin(m) + std::size_t(n - m) * 2 * vectors; }
  V* sine_slot(V* base, int n, int m) const { return cosine_slot(base, n, m) + vectors; }

  /// Rotation about z by -alpha (forward) or alpha, and the scale of each degree.
  template <bool forward>
  void rotate_about_z(const Real* scale) const {
    for (int n = 0; n <= t.order; ++n) {
      for (std::size_t u = 0; u < vectors; ++u) degree_slot(n, 0)[u] *= scale[n];
      for (int m = 1; m <= n; ++m) {
        const Real cosine = t.cos_m[m] * scale[n], sine = (forward ? t.sin_m[m] : -t.sin_m[m]) * scale[n];
        for (std::size_t u = 0; u < vectors; ++u) {
          const V c = degree_slot(n, m)[u], s = degree_slot(n, -m)[u];
          degree_slot(n, m)[u] = cosine * c + sine * s;
          degree_slot(n, -m)[u] = cosine * s - sine * c;
        }
      }
    }
  }

  void turn() const {
    const Real* matrix = t.turn;
    for (int n = 0; n <= t.order; ++n) {
      matrix = matrix_times<Real, vectors>(
          matrix, n + 1, n + 1, [&](int column) { return degree_slot(n, column); },
          [&](int row) { return cosine_slot(by_order, n, row); });
      matrix = matrix_times<Real, vectors>(
          matrix, n, n, [&](int column) { return degree_slot(n, -1 - column); },
          [&](int row) { return sine_slot(by_order, n, row + 1); });
    }
  }

  void shift() const {
    const Real* matrix = t.shift;
    for (int m = 0; m <= t.order; ++m) {
      const int size = t.order - m + 1;
      matrix = matrix_times<Real, 2 * vectors>(
          matrix, size, size, [&](int column) { return cosine_slot(by_order, m + column, m); },
          [&](int row) { return cosine_slot(shifted, m + row, m); });
    }
  }

  void turn_back() const {
    const Real* matrix = t.turn_back;
    for (int n = 0; n <= t.order; ++n) {
      matrix = matrix_times<Real, vectors>(
          matrix, n + 1, n + 1, [&](int column) { return cosine_slot(shifted, n, column); },
          [&](int row) { return degree_slot(n, row); });
      matrix = matrix_times<Real, vectors>(
          matrix, n, n, [&](int column) { return sine_slot(shifted, n, column + 1); },
          [&](int row) { return degree_slot(n, -1 - row); });
    }
  }
};

/// Rows of `count` boxes to lanes; missing lanes repeat the first row.
template <class Real, std::size_t vectors>
inline void gather_lanes(const Real* const* rows, std::size_t count, std::size_t terms, Vec<Real>* lanes) {
  constexpr std::size_t w = kWidth<Real>;
  for (std::size_t u = 0; u < vectors; ++u)
    for (std::size_t i = 0; i < terms; i += w) {
      Vec<Real> block[w];
      for (std::size_t k = 0; k < w; ++k) block[k] = load(rows[u * w + k < count ? u * w + k : 0] + i);
      transpose<Real>(block);
      for (std::size_t k = 0; k < w; ++k) lanes[(i + k) * vectors + u] = block[k];
    }
}

template <class Real>
inline void add_with_carry(Real* sum, Real* carry, Vec<Real> term) {
  const Vec<Real> old = load(sum), next = old + term, back = next - old;
  store(carry, load(carry) + ((old - (next - back)) + (term - back)));
  store(sum, next);
}

template <class Real, std::size_t vectors>
inline void scatter_lanes(const Vec<Real>* lanes, std::size_t terms, std::size_t count, std::size_t carry,
                          Real* const* targets) {
  constexpr std::size_t w = kWidth<Real>;
  for (std::size_t u = 0; u < vectors; ++u)
    for (std::size_t i = 0; i < terms; i += w) {
      Vec<Real> block[w];
      for (std::size_t k = 0; k < w; ++k) block[k] = lanes[(i + k) * vectors + u];
      transpose<Real>(block);
      const bool carried = carry > 0 && i * sizeof(Real) < 64;
      for (std::size_t k = 0; k < w && u * w + k < count; ++k) {
        Real* const to = targets[u * w + k] + i;
        if (carried)
          add_with_carry(to, to + carry, block[k]);
        else
          store(to, load(to) + block[k]);
      }
    }
}

template <class Real, std::size_t vectors>
inline void translate_batch(const Translation<Real>& t, const Real* const* rows, Real* const* targets, std::size_t count,
                            Vec<Real>* scratch) {
  constexpr std::size_t w = kWidth<Real>;
  const std::size_t used = std::size_t(t.order + 1) * std::size_t(t.order + 1), terms = round_up_to(used, w);
  const std::size_t pairs = std::size_t(t.order + 1) * std::size_t(t.order + 2) / 2;
  const Batch<Real, vectors> batch{t, scratch, scratch + terms * vectors, scratch + (terms + 2 * pairs) * vectors};
  gather_lanes<Real, vectors>(rows, count, terms, batch.by_degree);
  batch.template rotate_about_z<true>(t.scale_in);
  for (int m = 0; m <= t.order; ++m)
    for (std::size_t u = 0; u < vectors; ++u) batch.sine_slot(batch.by_order, m, 0)[u] = Vec<Real>{};
  batch.turn();
  batch.shift();
  batch.turn_back();
  batch.template rotate_about_z<false>(t.scale_out);
  for (std::size_t i = used * vectors; i < terms * vectors; ++i) batch.by_degree[i] = Vec<Real>{};
  scatter_lanes<Real, vectors>(batch.by_degree, terms, count, t.carry, targets);
}

template <class Real>
void translate(const Translation<Real>& translation, const Real* const* rows, Real* const* targets, std::size_t count,
               Real* scratch) {
  constexpr std::size_t w = kWidth<Real>;
  Vec<Real>* const lanes = reinterpret_cast<Vec<Real>*>(scratch);
  std::size_t i = 0;
  if constexpr (kBatchVectors > 1)
    for (; i + w < count; i += kBatchVectors * w)
      translate_batch<Real, kBatchVectors>(translation, rows + i, targets + i,
                                           count - i < kBatchVectors * w ? count - i : kBatchVectors * w, lanes);
  for (; i < count; i += w) translate_batch<Real, 1>(translation, rows + i, targets + i, count - i < w ? count - i : w, lanes);
}

}  // namespace farsum::kernels::FARSUM_TARGET
