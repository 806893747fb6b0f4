// The whole tolerance sweep: every kind of input, every pattern of signs, every decade that matters. The tree is forced.
#include <gtest/gtest.h>

#include <tuple>

#include "tests/accuracy/tolerance_check.hpp"

namespace farsum::accuracy {
namespace {

using reference::Shape;
using reference::Signs;

constexpr double kTolerances[] = {1e-2, 1e-3, 1e-4, 1e-6, 1e-8, 1e-9, 1e-11, 1e-12, 1e-13};

using Kind = std::tuple<Shape, Signs>;
class ToleranceSweep : public testing::TestWithParam<Kind> {};

std::string kind_name(const testing::TestParamInfo<Kind>& info) {
  return name_of(std::get<0>(info.param)) + "_" + name_of(std::get<1>(info.param));
}

TEST_P(ToleranceSweep, KeepsTheContractAtEveryTolerance) {
  const auto [shape, signs] = GetParam();
  const Subject subject = make_subject(shape, signs, 4000, 20);
  for (double t : kTolerances) expect_contract(subject, reference::with(t));
}

INSTANTIATE_TEST_SUITE_P(Kinds, ToleranceSweep,
                         testing::Combine(testing::ValuesIn(reference::all_shapes()),
                                          testing::Values(Signs::one, Signs::random, Signs::alternating, Signs::neutral)),
                         kind_name);

class LargerSweep : public testing::TestWithParam<Kind> {};

TEST_P(LargerSweep, KeepsTheContractAtEveryTolerance) {
  const auto [shape, signs] = GetParam();
  const Subject subject = make_subject(shape, signs, 20000, 21);
  for (double t : {1e-3, 1e-6, 1e-9, 1e-12}) expect_contract(subject, reference::with(t));
}

INSTANTIATE_TEST_SUITE_P(Kinds, LargerSweep,
                         testing::Combine(testing::Values(Shape::cube, Shape::shell, Shape::line, Shape::plane, Shape::droplets,
                                                          Shape::bunch_with_halo, Shape::scales_1e9, Shape::far_pair),
                                          testing::Values(Signs::one, Signs::random)),
                         kind_name);

/// Other seeds draw other charges: the sampled error estimate must hold for them as well.
class SeedSweep : public testing::TestWithParam<int> {};

TEST_P(SeedSweep, KeepsTheContractAtSixDigits) {
  for (Shape shape : {Shape::line, Shape::shell, Shape::droplets, Shape::close_pairs, Shape::gaussian}) {
    for (Signs signs : {Signs::one, Signs::random}) {
      expect_contract(make_subject(shape, signs, 2500, 100 + static_cast<std::uint64_t>(GetParam())), reference::with(1e-6));
    }
  }
}

INSTANTIATE_TEST_SUITE_P(Seeds, SeedSweep, testing::Range(0, 8));

}  // namespace
}  // namespace farsum::accuracy
