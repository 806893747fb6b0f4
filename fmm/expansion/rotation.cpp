#include "fmm/expansion/rotation.hpp"

#include <cmath>
#include <cstdlib>

namespace farsum {

AxisTurn::AxisTurn(int order, long double cosine, long double sine) {
  levels_.resize(std::size_t(order) + 1);
  for (int k = 0; k <= 2 * order + 2; ++k) {
    roots_.push_back(std::sqrt((long double)(k)));
    inverse_roots_.push_back(k == 0 ? 0.0L : 1 / roots_.back());
  }
  levels_[0] = {1.0L};
  if (order == 0) return;
  // Degree 1 in the order (y, z, x): k = -1 is y, 0 is z, 1 is x.
  levels_[1] = {1, 0, 0, 0, cosine, sine, 0, -sine, cosine};
  for (int n = 2; n <= order; ++n) fill_level(n);
}

void AxisTurn::fill_level(int n) {
  std::vector<long double>& level = levels_[std::size_t(n)];
  level.assign(std::size_t((2 * n + 1) * (2 * n + 1)), 0.0L);
  // The transpose is the rotation by the opposite angle, which a reflection of x undoes: D(column, m) = (-1)^(m + column) D(m,
  // column).
  for (int m = -n; m <= n; ++m)
    for (int column = m < 0 ? -n : 0; column <= m; ++column) {
      const long double value = new_entry(n, m, column);
      level[slot(n, m, column)] = value;
      level[slot(n, column, m)] = (m + column) % 2 == 0 ? value : -value;
    }
}

/// The P of the recursion: entries of degree n - 1 combined with those of degree 1.
long double AxisTurn::product(int axis, int n, int a, int b) const {
  if (b == -n) return entry(1, axis, 1) * entry(n - 1, a, -n + 1) + entry(1, axis, -1) * entry(n - 1, a, n - 1);
  if (b == n) return entry(1, axis, 1) * entry(n - 1, a, n - 1) - entry(1, axis, -1) * entry(n - 1, a, -n + 1);
  return entry(1, axis, 0) * entry(n - 1, a, b);
}

long double AxisTurn::new_entry(int n, int m, int column) const {
  const auto root = [&](int k) { return roots_[std::size_t(k)]; };
  const int size = std::abs(m);
  const long double scale = std::abs(column) == n
                                ? inverse_roots_[std::size_t(2 * n)] * inverse_roots_[std::size_t(2 * n - 1)]
                                : inverse_roots_[std::size_t(n + column)] * inverse_roots_[std::size_t(n - column)];
  const long double u = root(n + m) * root(n - m) * scale;
  const long double v = (m == 0 ? -0.5L * root(2) : 0.5L) * root(n + size - 1) * root(n + size) * scale;
  const long double w = m == 0 || size >= n - 1 ? 0.0L : -0.5L * root(n - size - 1) * root(n - size) * scale;
  long double sum = 0;
  if (u != 0) sum += u * product(0, n, m, column);
  if (v != 0) {
    long double part;
    if (m == 0)
      part = product(1, n, 1, column) + product(-1, n, -1, column);
    else if (m > 0)
      part = m == 1 ? root(2) * product(1, n, 0, column) : product(1, n, m - 1, column) - product(-1, n, -m + 1, column);
    else
      part = m == -1 ? root(2) * product(-1, n, 0, column) : product(1, n, m + 1, column) + product(-1, n, -m - 1, column);
    sum += v * part;
  }
  if (w != 0)
    sum += w * (m > 0 ? product(1, n, m + 1, column) + product(-1, n, -m - 1, column)
                      : product(1, n, m - 1, column) - product(-1, n, -m + 1, column));
  return sum;
}

}  // namespace farsum
