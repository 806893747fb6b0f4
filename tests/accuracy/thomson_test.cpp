// Thomson's problem: lowest energy of N unit charges on the unit sphere, minimised with the engine's own forces. Published
// energies: T. Erber, G. M. Hockney, J. Phys. A 24, L1369 (1991); J. R. Edmundson, Acta Cryst. A 48, 60 (1992); E. L.
// Altschuler et al., Phys. Rev. Lett. 78, 2681 (1997). N = 2, 3, 4, 5, 6 are 1/2, sqrt 3, 3 sqrt(3/2), 1/2 + 3 sqrt 2 + sqrt 3,
// 3/2 + 6 sqrt 2.
#include <gtest/gtest.h>

#include <cmath>
#include <deque>
#include <limits>

#include "tests/accuracy/tolerance_check.hpp"
#include "tests/reference/random.hpp"

namespace farsum::accuracy {
namespace {

using namespace reference;
using Vector = std::vector<double>;

double dot(const Vector& a, const Vector& b) {
  double sum = 0;
  for (std::size_t i = 0; i < a.size(); ++i) sum += a[i] * b[i];
  return sum;
}

Vector combined(const Vector& a, double factor, const Vector& b) {
  Vector sum = a;
  for (std::size_t i = 0; i < a.size(); ++i) sum[i] += factor * b[i];
  return sum;
}

/// Energy and its gradient along the sphere for points x/|x|.
class SphereEnergy {
 public:
  explicit SphereEnergy(std::size_t n) : solver_(options()), result_(n) {
    for (std::size_t i = 0; i < n; ++i) points_.add({0, 0, 0}, 1);
  }

  double operator()(const Vector& places, Vector& gradient) {
    const std::size_t n = points_.size();
    Vector length(n);
    for (std::size_t i = 0; i < n; ++i) {
      length[i] = std::hypot(places[3 * i], places[3 * i + 1], places[3 * i + 2]);
      points_.x[i] = places[3 * i] / length[i];
      points_.y[i] = places[3 * i + 1] / length[i];
      points_.z[i] = places[3 * i + 2] / length[i];
    }
    solver_.set_charges(points_.points(), points_.values());
    solver_.evaluate(kBoth, result_.view());
    double energy = 0;
    gradient.resize(3 * n);
    for (std::size_t i = 0; i < n; ++i) {
      const Point p = points_.place(i), field = result_.field(i);
      const double radial = p[0] * field[0] + p[1] * field[1] + p[2] * field[2];
      for (std::size_t axis = 0; axis < 3; ++axis) gradient[3 * i + axis] = (radial * p[axis] - field[axis]) / length[i];
      energy += 0.5 * result_.potential[i];
    }
    return energy;
  }

 private:
  static Options options() {
    Options options = with(1e-12, Method::automatic);
    options.verification = Verification::never;  // thousands of small evaluations
    options.threads = 1;
    return options;
  }
  Solver solver_;
  Charges points_;
  Result result_;
};

/// Limited-memory BFGS (J. Nocedal, Math. Comp. 35, 773 (1980)) with step halving; returns the energy reached.
double minimised(SphereEnergy& energy, Vector places, double& residual) {
  struct Pair {
    Vector step, change;
  };
  std::deque<Pair> memory;
  Vector gradient, next_gradient;
  double value = energy(places, gradient);
  for (int iteration = 0; iteration < 1000 && std::sqrt(dot(gradient, gradient)) > 1e-9; ++iteration) {
    Vector direction = gradient, weights;
    for (auto pair = memory.rbegin(); pair != memory.rend(); ++pair) {
      weights.push_back(dot(pair->step, direction) / dot(pair->step, pair->change));
      direction = combined(direction, -weights.back(), pair->change);
    }
    const double scale =
        memory.empty() ? 0.05 : dot(memory.back().step, memory.back().change) / dot(memory.back().change, memory.back().change);
    for (double& component : direction) component *= -scale;
    for (const Pair& pair : memory) {
      const double slope = dot(pair.change, direction) / dot(pair.step, pair.change);
      direction = combined(direction, -weights.back() - slope, pair.step);
      weights.pop_back();
    }
    double length = 1, next = std::numeric_limits<double>::infinity();
    Vector moved;
    for (; length > 1e-6; length *= 0.5) {
      moved = combined(places, length, direction);
      next = energy(moved, next_gradient);
      if (next <= value + 1e-13 * value) break;
    }
    Pair pair = {combined(moved, -1, places), combined(next_gradient, -1, gradient)};
    if (dot(pair.step, pair.change) > 0) memory.push_back(std::move(pair));
    if (memory.size() > 12 || length <= 1e-6) memory.pop_front();
    places = moved;
    value = next;
    gradient = next_gradient;
  }
  residual = std::sqrt(dot(gradient, gradient));
  return value;
}

struct Known {
  int count;
  double energy;
};

const Known kKnown[] = {{2, 0.5},
                        {3, 1.732050808},
                        {4, 3.674234614},
                        {5, 6.474691495},
                        {6, 9.985281374},
                        {7, 14.452977414},
                        {8, 19.675287861},
                        {9, 25.759986531},
                        {10, 32.716949460},
                        {11, 40.596450508},
                        {12, 49.165253058},
                        {13, 58.853230612},
                        {14, 69.306363297},
                        {15, 80.670244114},
                        {16, 92.911655303},
                        {17, 106.050404829},
                        {18, 120.084467447},
                        {19, 135.089467557},
                        {20, 150.881568334},
                        {21, 167.641622399},
                        {22, 185.287536149},
                        {23, 203.930190663},
                        {24, 223.347074052},
                        {30, 359.603945904},
                        {32, 412.261274651}};

class Thomson : public testing::TestWithParam<Known> {};

TEST_P(Thomson, MinimumIsThePublishedOne) {
  const auto [count, known] = GetParam();
  SphereEnergy energy(static_cast<std::size_t>(count));
  Random random(81);
  double best = std::numeric_limits<double>::infinity(), residual = 1;
  for (int start = 0; start < 40 && best > known + 1e-8; ++start) {
    Vector places;
    for (int i = 0; i < count; ++i) {
      const Point p = random.direction();
      places.insert(places.end(), p.begin(), p.end());
    }
    best = std::min(best, minimised(energy, places, residual));
  }
  EXPECT_NEAR(best, known, 1e-9);  // printed to nine decimals
  EXPECT_LT(residual, 1e-6) << "no equilibrium: a force along the sphere is left";
}

std::string known_name(const testing::TestParamInfo<Known>& known) {
  std::string name = "N";
  return name.append(std::to_string(known.param.count));
}

INSTANTIATE_TEST_SUITE_P(Counts, Thomson, testing::ValuesIn(kKnown), known_name);

}  // namespace
}  // namespace farsum::accuracy
