#include "fmm/expansion/gradient.hpp"

#include <gtest/gtest.h>

#include <functional>
#include <limits>
#include <vector>

#include "tests/reference/random.hpp"
#include "tests/unit/harmonics.hpp"

namespace farsum {
namespace {

using unit::Vector;

template <class Real>
std::vector<Real> random_row(int order, std::uint64_t seed) {
  reference::Random random(seed);
  std::vector<Real> row(row_length<Real>(order), Real(0));
  for (std::size_t i = 0; i < term_count(order); ++i) row[i] = Real(random.uniform(-1, 1));
  return row;
}

/// Numerical derivative along an axis, five points, error of order h^4.
long double slope(const std::function<long double(const Vector&)>& f, Vector v, std::size_t axis) {
  const long double h = 1e-3L;
  const auto at = [&](int steps) {
    Vector moved = v;
    moved[axis] += h * steps;
    return f(moved);
  };
  return (8 * (at(1) - at(-1)) - (at(2) - at(-2))) / (12 * h);
}

/// Largest difference between the evaluated rows and the numerical derivative, over the largest derivative.
template <class Real>
double gradient_error(int order, bool multipole, bool swap = false) {
  const std::vector<Real> row = random_row<Real>(order, std::uint64_t(order) + 1);
  const int to = multipole ? order + 1 : order;
  std::vector<Real> d[3];
  for (std::vector<Real>& out : d) out.assign(row_length<Real>(to), Real(77));  // the call overwrites
  Real* const rows[3] = {d[0].data(), d[swap ? 2 : 1].data(), d[swap ? 1 : 2].data()};
  const GradientRows<Real> gradient(order);
  multipole ? gradient.of_multipole(row.data(), order, rows) : gradient.of_local(row.data(), order, rows);
  long double worst = 0, size = 0;
  for (const Vector& v : {Vector{0.4L, -0.3L, 0.55L}, Vector{-0.2L, 0.6L, -0.3L}, Vector{0.7L, 0.1L, 0.2L}}) {
    const Vector place = multipole ? Vector{2 * v[0], 2 * v[1], 2 * v[2]} : v;
    for (std::size_t axis = 0; axis < 3; ++axis) {
      const long double exact =
          slope([&](const Vector& x) { return unit::expansion_at(row, order, x, multipole); }, place, axis);
      worst = std::max(worst, std::abs(unit::expansion_at(d[axis], to, place, multipole) - exact));
      size = std::max(size, std::abs(exact));
    }
  }
  return double(worst / (size + (order == 0 && !multipole ? 1 : 0)));
}

TEST(GradientRows, OfLocalsAreDerivativesOfThePotential) {
  for (int order : {0, 1, 2, 3, 4, 7, 12, 20}) EXPECT_LE(gradient_error<double>(order, false), 1e-8) << order;
}

TEST(GradientRows, OfMultipolesAreDerivativesOfThePotential) {
  for (int order : {0, 1, 2, 3, 4, 7, 12, 20}) EXPECT_LE(gradient_error<double>(order, true), 1e-7) << order;
}

TEST(GradientRows, InSinglePrecisionAreGoodToItsRounding) {
  for (bool multipole : {false, true})
    for (int order : {1, 2, 8}) EXPECT_LE(gradient_error<float>(order, multipole), 1e-5) << order;
}

TEST(GradientRows, SwappedComponentsAreNoticed) {
  EXPECT_GT(gradient_error<double>(5, false, true), 1e-2);
  EXPECT_GT(gradient_error<double>(5, true, true), 1e-2);
}

/// Degree n of d^2/dx^2 + d^2/dy^2 + d^2/dz^2 of a row: zero for harmonics.
template <class Real>
std::vector<Real> laplacian(const std::vector<Real>& row, int order) {
  const GradientRows<Real> gradient(order);
  std::vector<Real> sum(row.size(), Real(0)), first[3], second[3];
  for (std::size_t axis = 0; axis < 3; ++axis) first[axis] = second[axis] = sum;
  gradient.of_local(row.data(), order, {first[0].data(), first[1].data(), first[2].data()});
  for (std::size_t axis = 0; axis < 3; ++axis) {
    gradient.of_local(first[axis].data(), order, {second[0].data(), second[1].data(), second[2].data()});
    for (std::size_t i = 0; i < sum.size(); ++i) sum[i] += second[axis][i];
  }
  return sum;
}

TEST(GradientRows, SecondDerivativesOfALocalHaveNoTraceAtTheHighestOrder) {
  const std::vector<double> row = random_row<double>(48, 3);
  for (double value : laplacian(row, 48)) EXPECT_NEAR(value, 0, 48 * 48 * 1e-14);
}

TEST(GradientRows, OfLocalsEndOneDegreeLower) {
  const std::vector<double> row = random_row<double>(6, 3);
  std::vector<double> d[3];
  for (std::vector<double>& out : d) out.assign(row_length<double>(6), 77);
  GradientRows<double>(6).of_local(row.data(), 6, {d[0].data(), d[1].data(), d[2].data()});
  for (const std::vector<double>& out : d)
    for (std::size_t i = term_count(5); i < out.size(); ++i) EXPECT_EQ(out[i], 0);
}

}  // namespace
}  // namespace farsum
