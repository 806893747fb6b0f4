#pragma once
// Owned arrays behind the views of fmm/points.hpp.
#include <array>
#include <cstddef>
#include <vector>

#include "fmm/points.hpp"

namespace farsum::reference {

using Point = std::array<double, 3>;

/// Points with charges; as a set of targets the charges are not used.
struct Charges {
  std::vector<double> x, y, z, q;

  std::size_t size() const { return x.size(); }
  PointsView points() const { return {x.data(), y.data(), z.data(), x.size(), 1}; }
  ChargesView values() const { return {q.data(), q.size(), 1}; }
  Point place(std::size_t i) const { return {x[i], y[i], z[i]}; }
  void add(const Point& p, double charge = 0) {
    x.push_back(p[0]);
    y.push_back(p[1]);
    z.push_back(p[2]);
    q.push_back(charge);
  }
};

/// Potential and field at n targets, filled with a value that no test can mistake for a result.
struct Result {
  static constexpr double kUntouched = -7.25e77;
  std::vector<double> potential, field_x, field_y, field_z;

  explicit Result(std::size_t n = 0)
      : potential(n, kUntouched), field_x(n, kUntouched), field_y(n, kUntouched), field_z(n, kUntouched) {}
  std::size_t size() const { return potential.size(); }
  ResultView view() { return {potential.data(), field_x.data(), field_y.data(), field_z.data(), 1}; }
  Point field(std::size_t i) const { return {field_x[i], field_y[i], field_z[i]}; }
  bool operator==(const Result&) const = default;
};

}  // namespace farsum::reference
