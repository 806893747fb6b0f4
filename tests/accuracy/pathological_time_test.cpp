// Shapes that defeat a careless tree: accuracy is asserted, seconds against the cube's are printed and recorded.
#include <gtest/gtest.h>

#include <algorithm>
#include <cstdio>
#include <string>

#include "tests/accuracy/tolerance_check.hpp"
#include "tests/reference/random.hpp"

namespace farsum::accuracy {
namespace {

using namespace reference;

constexpr std::size_t kCount = 200000;
constexpr double kTolerance = 1e-6;

/// Nearly one place: offsets of a few last bits around (1/3, 1/3, 1/3).
Charges almost_one_place() {
  Random random(131);
  Charges charges;
  for (std::size_t i = 0; i < kCount; ++i) {
    Point p;
    for (double& coordinate : p) coordinate = 1.0 / 3 + 0x1p-54 * static_cast<double>(random.index(4000));
    charges.add(p, random.uniform(0.5, 1.5));
  }
  return charges;
}

double solve_seconds(const Charges& charges, const char* name) {
  Options options = with(kTolerance);
  options.coincident = Coincident::skip;
  double best = 1e30;
  for (int repeat = 0; repeat < 2; ++repeat) {
    const Outcome outcome = solve(charges, options);
    // Charges over nine decades may miss the norm "typical" (DEVELOPERS.md, known limits); the time counts all the same.
    const bool known_limit = std::string(name) == "scales_1e9" && outcome.code == ErrorCode::accuracy_not_reached;
    EXPECT_TRUE(outcome.good() || known_limit) << name << ": " << outcome.message;
    EXPECT_TRUE(outcome.report.error.met || known_limit) << name;
    best = std::min(best, outcome.report.seconds.solve);
  }
  std::printf("%-16s %8.3f s\n", name, best);
  testing::Test::RecordProperty("seconds_" + std::string(name), std::to_string(best));
  return best;
}

TEST(PathologicalShapes, AreSolvedAndTimed) {
  const double cube = solve_seconds(make_scene(Shape::cube, Signs::one, kCount, 132), "cube");
  for (Shape shape : {Shape::scales_1e9, Shape::line, Shape::shell, Shape::far_pair, Shape::droplets, Shape::plane,
                      Shape::outlier, Shape::bunch_with_halo, Shape::helix}) {
    const double seconds = solve_seconds(make_scene(shape, Signs::one, kCount, 133), name_of(shape).c_str());
    std::printf("    %.2f x cube\n", seconds / cube);
  }
  const double seconds = solve_seconds(almost_one_place(), "almost_one_place");
  std::printf("    %.2f x cube\n", seconds / cube);
}

}  // namespace
}  // namespace farsum::accuracy
