#pragma once
// Integration rules for smooth functions over intervals and spheres.
#include <cmath>
#include <cstddef>
#include <numbers>
#include <vector>

#include "tests/reference/charges.hpp"

namespace farsum::reference {

struct Rule {
  std::vector<double> node, weight;
};

/// Gauss-Legendre rule with n nodes on [-1, 1] by Newton's method on P_n (Abramowitz & Stegun 25.4.29).
inline Rule gauss_legendre(int n) {
  Rule rule;
  for (int i = 0; i < n; ++i) {
    long double x = std::cos(std::numbers::pi_v<long double> * (i + 0.75L) / (n + 0.5L)), slope = 1;
    for (int step = 0; step < 8; ++step) {
      long double p = 1, previous = 0;
      for (int k = 1; k <= n; ++k) {
        const long double next = ((2 * k - 1) * x * p - (k - 1) * previous) / k;
        previous = p;
        p = next;
      }
      slope = n * (x * p - previous) / (x * x - 1);
      x -= p / slope;
    }
    rule.node.push_back(static_cast<double>(x));
    rule.weight.push_back(static_cast<double>(2 / ((1 - x * x) * slope * slope)));
  }
  return rule;
}

/// Points on a sphere; `q` holds the weights of an integral over its surface (Gauss in the height, equal steps around the
/// axis).
inline Charges sphere_rule(const Point& centre, double radius, int n) {
  const Rule rule = gauss_legendre(n);
  Charges points;
  for (std::size_t i = 0; i < rule.node.size(); ++i) {
    const double z = rule.node[i], rho = std::sqrt(1 - z * z);
    for (int k = 0; k < 2 * n; ++k) {
      const double angle = std::numbers::pi * (k + 0.5) / n;
      points.add(
          {centre[0] + radius * rho * std::cos(angle), centre[1] + radius * rho * std::sin(angle), centre[2] + radius * z},
          rule.weight[i] * radius * radius * std::numbers::pi / n);
    }
  }
  return points;
}

}  // namespace farsum::reference
