#include "fmm/octree/frame.hpp"

#include <gtest/gtest.h>

#include <algorithm>
#include <cmath>
#include <vector>

#include "tests/reference/random.hpp"

namespace farsum {
namespace {

__extension__ using Quad = __float128;  // 113 bits

constexpr std::int64_t kUnits = std::int64_t{1} << kMaxLevel;

Bounds bounds_at(double offset) {
  return {{offset, offset - 0.25, offset + 3}, {offset + 1, offset + 0.25, offset + 3.5}, false};
}

/// Largest error of a box centre relative to the larger of centre and side, over random boxes of all levels.
double centre_error(double offset, double side) {
  const Frame frame(bounds_at(offset), side, 0.45);
  reference::Random random(3);
  Quad worst = 0;
  for (int level = 0; level <= kMaxLevel; ++level)
    for (int i = 0; i < 20; ++i) {
      BoxCoordinates box;
      for (std::int64_t& c : box) c = std::int64_t(random.bits() & ((std::uint64_t{1} << level) - 1));
      const auto centre = frame.centre(box, level);
      for (std::size_t axis = 0; axis < 3; ++axis) {
        const Quad exact = Quad(frame.corner()[axis]) + (Quad(box[axis]) + Quad(0.5)) * Quad(std::ldexp(side, -level));
        const Quad error = Quad(centre[axis].high) + Quad(centre[axis].low) - exact, size = exact < 0 ? -exact : exact;
        worst = std::max(worst, (error < 0 ? -error : error) / std::max(size, Quad(side)));
      }
    }
  return double(worst);
}

TEST(Frame, CentresAreGoodTo100Bits) {
  for (double side : {1.0, 1.25, 1.1371}) {
    EXPECT_LE(centre_error(0, side), 0x1p-100) << side;
    EXPECT_LE(centre_error(-0.5, side), 0x1p-100) << side;
    EXPECT_LE(centre_error(12345.678, side), 0x1p-100) << side;
  }
}

TEST(Frame, TheMiddleOfTheBoundsLiesAtItsFraction) {
  for (double middle : {0.4, 3.0 / 7, 0.5}) {
    const Frame frame(bounds_at(2), 1.5, middle);
    EXPECT_NEAR((2.5 - frame.corner()[0]) / 1.5, middle, 1e-15);
    EXPECT_NEAR((2.0 - frame.corner()[1]) / 1.5, middle, 1e-15);
    EXPECT_NEAR((5.25 - frame.corner()[2]) / 1.5, middle, 1e-15);
  }
}

TEST(Frame, OfEmptyBoundsIsACubeAtTheOrigin) {
  const Frame frame(Bounds{}, 1, 0.5);
  EXPECT_EQ(frame.corner()[2], 0.0);
  EXPECT_EQ(frame.box_side(3), 0.125);
}

TEST(Frame, LatticeIsMonotone) {
  const Frame frame(bounds_at(0.3), 1.1371, 0.47);
  reference::Random random(5);
  std::vector<double> values;
  for (int i = 0; i < 4000; ++i) values.push_back(random.uniform(-0.2, 1.6));
  for (int level = 1; level < 30; ++level) {  // neighbouring doubles around faces of boxes
    double value = frame.corner()[0] + frame.box_side(level);
    for (int i = 0; i < 20; ++i) value = std::nextafter(value, 0);
    for (int i = 0; i < 40; ++i) values.push_back(value = std::nextafter(value, 9));
  }
  std::sort(values.begin(), values.end());
  std::vector<std::int64_t> lattice;
  for (double value : values) lattice.push_back(frame.lattice(0, value));
  EXPECT_TRUE(std::is_sorted(lattice.begin(), lattice.end()));
}

TEST(Frame, LatticeIsTheFloorOfTheExactQuotient) {
  const Frame frame(bounds_at(-7), 1.1371, 0.47);
  reference::Random random(6);
  for (int i = 0; i < 2000; ++i) {
    const double value = random.uniform(-7, -6);
    const Quad exact = (Quad(value) - Quad(frame.corner()[0])) / Quad(1.1371) * Quad(kUnits);
    EXPECT_NEAR(double(exact - Quad(frame.lattice(0, value))), 0.5, 0.5 + 1e-9) << value;
  }
}

TEST(Frame, CoarseLatticeIsTheTopOfTheLattice) {
  const Frame frame(bounds_at(0.3), 1.1371, 0.47);
  reference::Random random(8);
  for (int i = 0; i < 20000; ++i) {
    double value = random.uniform(-0.2, 1.8);
    if (i % 2 == 0)  // at a face of a box of level 20, or next to it
      value = frame.corner()[0] + std::floor(random.uniform() * 0x1p20) * frame.box_side(kKeyLevels);
    if (i % 4 == 0) value = std::nextafter(value, i % 8 == 0 ? -9 : 9);
    ASSERT_EQ(frame.coarse_lattice(0, value), frame.lattice(0, value) >> (kMaxLevel - kKeyLevels)) << value;
  }
}

TEST(Frame, LatticeTellsPointsApartThatAreNearTheOriginAndClose) {
  const Frame frame(Bounds{{0, 0, 0}, {1, 1, 1}, false}, 1.25, 0.45);
  EXPECT_LT(frame.lattice(0, 0), frame.lattice(0, 0x1p-55));
  EXPECT_LT(frame.lattice(0, 0x1p-55), frame.lattice(0, 0x1p-54));
}

TEST(Frame, LatticeStaysInsideTheCube) {
  const Frame frame(bounds_at(0), 1, 0.5);
  for (double value : {-1e300, -1.0, 0.0, 1.0, std::nextafter(1.0, 0.0), 2.0, 1e300}) {
    EXPECT_GE(frame.lattice(0, value), 0) << value;
    EXPECT_LT(frame.lattice(0, value), kUnits) << value;
  }
}

TEST(Frame, PaddingIsFarOutside) {
  const Frame frame(bounds_at(5), 1.2, 0.5);
  for (double place : frame.padding_place()) EXPECT_GT(place, 500);
}

TEST(Interleave, SpreadsTheBitsOfThreeCoordinates) {
  EXPECT_EQ(interleave(1, 0, 0), 1u);
  EXPECT_EQ(interleave(0, 1, 0), 2u);
  EXPECT_EQ(interleave(0, 0, 1), 4u);
  reference::Random random(7);
  for (int i = 0; i < 200; ++i) {
    const std::uint32_t c[3] = {std::uint32_t(random.bits() >> 43), std::uint32_t(random.bits() >> 43),
                                std::uint32_t(random.bits() >> 43)};
    std::uint64_t exact = 0;
    for (int bit = 0; bit < 21; ++bit)
      for (int axis = 0; axis < 3; ++axis) exact |= std::uint64_t(c[axis] >> bit & 1) << (3 * bit + axis);
    ASSERT_EQ(interleave(c[0], c[1], c[2]), exact);
  }
}

}  // namespace
}  // namespace farsum
