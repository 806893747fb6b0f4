#include "fmm/medium/coulomb/shifts.hpp"

#include <cmath>

namespace farsum::coulomb {

// Factorials up to (2 order)! <= 96! stay far inside the range of long double (1e4932) and keep its 64 bits.
Shifts::Shifts(int order) : factorial_(static_cast<unsigned>(2 * order + 2)), root_factorial_(factorial_.size()) {
  factorial_[0] = root_factorial_[0] = 1;
  for (unsigned n = 1; n < factorial_.size(); ++n) {
    factorial_[n] = factorial_[n - 1] * (long double)(n);
    root_factorial_[n] = std::sqrt(factorial_[n]);
  }
}

long double Shifts::child(int n, int l, int m) const {
  if (l > n || m > l) return 0;
  const auto root = [&](int k) { return root_factorial_[static_cast<unsigned>(k)]; };
  return root(n - m) * root(n + m) / (root(l - m) * root(l + m) * factorial_[static_cast<unsigned>(n - l)]);
}

long double Shifts::far(int l, int n, int m) const {
  const auto root = [&](int k) { return root_factorial_[static_cast<unsigned>(k)]; };
  const long double size = factorial_[static_cast<unsigned>(n + l)] / (root(n - m) * root(n + m) * root(l - m) * root(l + m));
  return (n + m) % 2 == 0 ? size : -size;
}

}  // namespace farsum::coulomb
