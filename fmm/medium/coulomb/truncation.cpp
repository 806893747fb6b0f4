#include "fmm/medium/coulomb/truncation.hpp"

#include <algorithm>
#include <cmath>

namespace farsum::coulomb {
namespace {

constexpr int kDegrees = 120;   // terms beyond this degree are below 1e-14 of the sum for distances of two and more

/// Means of r^(2n) over the unit cube, from the multinomial expansion of (x^2 + y^2 + z^2)^n.
std::vector<double> cube_moments() {
  // mean of x^(2a) over [-1/2, 1/2] is 4^-a / (2a + 1)
  std::vector<double> axis(kDegrees + 1), two(kDegrees + 1), three(kDegrees + 1);
  for (int a = 0; a <= kDegrees; ++a) axis[std::size_t(a)] = std::pow(0.25, a) / (2 * a + 1);
  const auto combine = [](const std::vector<double>& f, const std::vector<double>& g, std::vector<double>& out) {
    for (int n = 0; n <= kDegrees; ++n) {
      double binomial = 1, sum = 0;
      for (int a = 0; a <= n; ++a) {
        sum += binomial * f[std::size_t(a)] * g[std::size_t(n - a)];
        binomial *= double(n - a) / (a + 1);
      }
      out[std::size_t(n)] = sum;
    }
  };
  combine(axis, axis, two);
  combine(two, axis, three);
  return three;
}

/// Logarithms of the factorials of even numbers: entry k is log (2k)!.
std::vector<double> log_even_factorials() {
  std::vector<double> result(2 * kDegrees + 1);
  for (std::size_t k = 0; k < result.size(); ++k) result[k] = std::lgamma(2.0 * double(k) + 1);
  return result;
}

}  // namespace

std::vector<TruncationError> truncation_errors(int max_order, int squared_distance) {
  static const std::vector<double> moment = cube_moments(), log_factorial = log_even_factorials();
  const double log_distance = 0.5 * std::log(double(squared_distance));
  // terms[k] = sum of the terms with max(n, l) = k
  std::vector<double> potential(kDegrees + 1), field(kDegrees + 1);
  for (int n = 0; n <= kDegrees; ++n)
    for (int l = 0; l <= kDegrees; ++l) {
      const std::size_t top = std::size_t(std::max(n, l));
      const double common = std::exp(log_factorial[std::size_t(n + l)] - log_factorial[std::size_t(n)] - log_factorial[std::size_t(l)] -
                                     (2.0 * (n + l) + 2) * log_distance) / (2 * n + 1) * moment[std::size_t(n)];
      potential[top] += common / (2 * l + 1) * moment[std::size_t(l)];
      if (l > 0) field[top] += common * l * moment[std::size_t(l - 1)];
    }
  std::vector<TruncationError> errors(std::size_t(max_order) + 1);
  double potential2 = 0, field2 = 0;
  for (int k = kDegrees; k > 0; --k) {
    potential2 += potential[std::size_t(k)];
    field2 += field[std::size_t(k)];
    if (k - 1 <= max_order) errors[std::size_t(k - 1)] = {std::sqrt(potential2), std::sqrt(field2)};
  }
  return errors;
}

}  // namespace farsum::coulomb
