// The accuracy contract in small: seconds instead of minutes, also under the sanitizers.
#include <gtest/gtest.h>

#include "tests/accuracy/tolerance_check.hpp"

namespace farsum::accuracy {
namespace {

using reference::Shape;
using reference::Signs;

class QuickSweep : public testing::TestWithParam<Shape> {};

TEST_P(QuickSweep, KeepsTheContractWithTheTree) {
  for (Signs signs : {Signs::one, Signs::neutral}) {
    const Subject subject = make_subject(GetParam(), signs, 1000, 7);
    for (double t : {1e-3, 1e-6, 1e-9, 1e-12}) expect_contract(subject, reference::with(t));
  }
}

TEST_P(QuickSweep, KeepsTheContractWithTheDirectSum) {
  for (Signs signs : {Signs::one, Signs::random}) {
    const Subject subject = make_subject(GetParam(), signs, 700, 8);
    for (double t : {1e-2, 1e-5, 1e-10, 1e-13}) expect_contract(subject, reference::with(t, Method::direct));
  }
}

TEST_P(QuickSweep, KeepsTheContractWithTheAutomaticChoice) {
  const Subject subject = make_subject(GetParam(), Signs::random, 700, 9);
  for (double t : {1e-2, 1e-4, 1e-7, 1e-11}) expect_contract(subject, reference::with(t, Method::automatic));
}

/// Positions and charges far from 1, as in SI units, must not change anything.
TEST_P(QuickSweep, KeepsTheContractInExtremeUnits) {
  for (double length : {1e-10, 1e12}) {
    Subject subject = make_subject(GetParam(), Signs::random, 600, 10);
    for (std::vector<double>* axis : {&subject.charges.x, &subject.charges.y, &subject.charges.z}) {
      for (double& value : *axis) value *= length;
    }
    for (double& charge : subject.charges.q) charge *= 1.602176634e-19;
    subject.sample = whole(subject.charges);
    subject.name += " length=" + std::to_string(length * 1e10) + "e-10";
    for (double t : {1e-3, 1e-6, 1e-9, 1e-12}) expect_contract(subject, reference::with(t));
  }
}

INSTANTIATE_TEST_SUITE_P(Shapes, QuickSweep, testing::ValuesIn(reference::all_shapes()),
                         [](const testing::TestParamInfo<Shape>& kind) { return name_of(kind.param); });

class SmallCounts : public testing::TestWithParam<int> {};

TEST_P(SmallCounts, KeepTheContractWithTheTree) {
  for (Shape shape : {Shape::cube, Shape::shell, Shape::line, Shape::droplets, Shape::scales_1e9, Shape::box_faces}) {
    for (Signs signs : {Signs::one, Signs::random}) {
      const Subject subject = make_subject(shape, signs, static_cast<std::size_t>(GetParam()), 11);
      for (double t : {1e-2, 1e-3, 1e-6, 1e-9, 1e-12}) expect_contract(subject, reference::with(t), 3);
    }
  }
}

INSTANTIATE_TEST_SUITE_P(Counts, SmallCounts, testing::Values(2, 3, 4, 7, 17, 33, 65, 100, 257, 400));

/// With no more charges than samples every target is verified: what is stated is then exactly the defined norm.
TEST(StatedError, IsTheDefinedNormIfEveryTargetIsVerified) {
  for (Shape shape : {Shape::cube, Shape::line, Shape::close_pairs, Shape::heavy_charge, Shape::bunch_with_halo}) {
    for (Signs signs : {Signs::one, Signs::random}) {
      const Subject subject = make_subject(shape, signs, 201, 12);
      Options options = reference::with(1e-4);
      options.samples = 201;
      options.leaf_capacity = 8;
      expect_contract(subject, options, 1.02);
    }
  }
}

TEST(StatedError, IsTheDefinedNormIfSamplesAreAsMany) {
  const Subject subject = make_subject(Shape::gaussian, Signs::random, 1501, 13);
  Options options = reference::with(1e-5);
  options.samples = 100000;
  expect_contract(subject, options, 1.01);
}

TEST(StatedError, HoldsForForcedLeafCapacities) {
  const Subject subject = make_subject(Shape::ball, Signs::random, 1500, 14);
  for (int capacity : {1, 2, 8, 30, 100, 700}) {
    Options options = reference::with(1e-6);
    options.leaf_capacity = capacity;
    SCOPED_TRACE("leaf capacity " + std::to_string(capacity));
    expect_contract(subject, options);
  }
}

}  // namespace
}  // namespace farsum::accuracy
