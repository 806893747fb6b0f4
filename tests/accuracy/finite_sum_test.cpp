// Systems of many charges whose energy is known in closed form: rings, simple cubic blocks, Thomson's points on a sphere.
#include <gtest/gtest.h>

#include <cmath>
#include <numbers>

#include "tests/accuracy/tolerance_check.hpp"

namespace farsum::accuracy {
namespace {

using namespace reference;
using std::numbers::pi;

/// N unit charges on the unit circle: U = (N/4) sum_{k=1}^{N-1} 1/sin(pi k/N); radial force U/N on each, no tangential one.
class RingOfCharges : public testing::TestWithParam<int> {};

TEST_P(RingOfCharges, HasItsEnergyToTwelveDigits) {
  const int n = GetParam();
  long double energy = 0;
  for (int k = 1; k < n; ++k) energy += 0.25L * n / std::sin(std::numbers::pi_v<long double> * k / n);
  Charges ring;
  for (int i = 0; i < n; ++i) ring.add({std::cos(2 * pi * i / n), std::sin(2 * pi * i / n), 0}, 1);
  const Outcome outcome = solve(ring, with(1e-12, n < 1000 ? Method::automatic : Method::tree));
  ASSERT_TRUE(outcome.good()) << outcome.message;
  EXPECT_NEAR(outcome.report.energy.value / static_cast<double>(energy), 1, 1e-12);
  const double force = static_cast<double>(energy / n);
  double square = 0;
  for (std::size_t i = 0; i < ring.size(); ++i) {
    const Point field = outcome.result.field(i);
    square += std::pow(field[0] - force * ring.x[i], 2) + std::pow(field[1] - force * ring.y[i], 2) + std::pow(field[2], 2);
  }
  // Places are rounded by 1e-16: the fields of neighbours at 2 pi/N change by that times (N/2 pi)^3, the force is of order N.
  EXPECT_LE(std::sqrt(square / n) / force, 1e-12 + 1e-17 * n * n);
}

INSTANTIATE_TEST_SUITE_P(Counts, RingOfCharges, testing::Values(2, 3, 4, 6, 10, 100, 1000, 10000, 100000));

/// Simple cubic block, spacing 1: U = 1/2 sum over displacements d != 0 of prod(n - |d_i|) s(d)/|d| (a finite sum, exact).
long double block_energy(int n, bool alternating) {
  long double sum = 0;
  for (int i = 1 - n; i < n; ++i) {
    for (int j = 1 - n; j < n; ++j) {
      for (int k = 1 - n; k < n; ++k) {
        if (i == 0 && j == 0 && k == 0) continue;
        const long double pairs = static_cast<long double>(n - std::abs(i)) * (n - std::abs(j)) * (n - std::abs(k));
        const long double sign = alternating && (i + j + k) % 2 != 0 ? -1 : 1;
        sum += 0.5L * sign * pairs / std::sqrt(static_cast<long double>(i * i + j * j + k * k));
      }
    }
  }
  return sum;
}

struct Block {
  int edge;
  bool alternating;
};

class CubicBlock : public testing::TestWithParam<Block> {};

/// Like charges carry 1e-12. Rock salt does not from edge 33 on (S_i grows like edge^2 while the potential stays at
/// Madelung's 1.75), and its symmetry keeps truncation errors from averaging out: the best effort at 1e-13 gives its energy
/// twelve digits.
TEST_P(CubicBlock, HasItsEnergyToTwelveDigits) {
  const auto [edge, alternating] = GetParam();
  const Charges block = cubic_block(edge, alternating);
  Options options = with(1e-12, edge < 10 ? Method::automatic : Method::tree);
  if (alternating && edge >= 10) {
    options.tolerance = 1e-13;
    options.best_effort = true;
  }
  const Outcome outcome = solve(block, options);
  ASSERT_TRUE(outcome.good()) << outcome.message;
  EXPECT_NEAR(outcome.report.energy.value / static_cast<double>(block_energy(edge, alternating)), 1, 1e-12);
}

std::string block_name(const testing::TestParamInfo<Block>& info) {
  return (info.param.alternating ? "alternating_" : "like_") + std::to_string(info.param.edge);
}

INSTANTIATE_TEST_SUITE_P(Edges, CubicBlock,
                         testing::Values(Block{2, false}, Block{2, true}, Block{3, true}, Block{4, false}, Block{5, true},
                                         Block{8, false}, Block{8, true}, Block{16, false}, Block{16, true}, Block{20, false},
                                         Block{20, true}, Block{33, true}, Block{50, false}, Block{50, true}, Block{64, false},
                                         Block{64, true}),
                         block_name);

TEST(CubicBlockSum, MatchesTheClosedFormsOfTheSmallestBlock) {
  EXPECT_NEAR(static_cast<double>(block_energy(2, false)), 12 + 12 / std::sqrt(2.0) + 4 / std::sqrt(3.0), 1e-13);
  EXPECT_NEAR(static_cast<double>(block_energy(2, true)), -12 + 12 / std::sqrt(2.0) - 4 / std::sqrt(3.0), 1e-13);
}

/// Madelung's constant of rock salt, 1.747564594633182 (Y. Sakamoto, J. Chem. Phys. 28, 164 (1958)): the potential at the
/// centre of an odd cube with faces of half, edges of quarter and corners of eighth charges (H. M. Evjen, Phys. Rev. 39, 675
/// (1932)).
TEST(Madelung, IsReachedByEvjensCube) {
  double previous = 1;
  for (int half : {4, 8, 16}) {
    Charges cube = cubic_block(2 * half + 1, true);
    std::size_t centre = 0;
    for (std::size_t i = 0; i < cube.size(); ++i) {
      for (double coordinate : cube.place(i)) {
        if (coordinate == 0 || coordinate == 2 * half) cube.q[i] *= 0.5;
      }
      if (cube.place(i) == Point{double(half), double(half), double(half)}) centre = i;
    }
    const Outcome outcome = solve(cube, with(1e-10));
    ASSERT_TRUE(outcome.good()) << outcome.message;
    const double error = std::fabs(-cube.q[centre] * outcome.result.potential[centre] - 1.747564594633182);
    EXPECT_LT(error, 0.3 * previous) << half;
    previous = error;
  }
  EXPECT_LT(previous, 3e-5);
}

}  // namespace
}  // namespace farsum::accuracy
