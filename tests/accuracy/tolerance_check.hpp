#pragma once
// The accuracy contract at one set of charges, judged by the independent sums of tests/reference.
#include <string>

#include "tests/reference/norms.hpp"
#include "tests/reference/run_solver.hpp"
#include "tests/reference/scenes.hpp"

namespace farsum::accuracy {

/// A scene with its exact values; made once, used for many tolerances.
struct Subject {
  std::string name;
  reference::Charges charges;
  reference::Sample sample;
};

/// Exact values at every charge up to `all_below` charges, above it at chosen ones (closest pairs, largest fields, strided).
Subject make_subject(reference::Shape shape, reference::Signs signs, std::size_t count, std::uint64_t seed,
                     std::size_t all_below = 6000);

/// Expects of one evaluation with the tree forced:
///  - rms <= t and typical <= 3 t for both outputs by the independent sums, and that the tree was used;
///  - the stated rms and typical error within a factor `stated_factor` of the independent ones, plus kRoundingUnits of
///  rounding;
///  - if it ends with tolerance_unreachable, that the data really do not carry t; if not, that they do.
void expect_contract(const Subject& subject, const Options& options, double stated_factor = 2);

/// Slack in units of 2^-53 rms(S_i) / scale where a measured error is itself of the size of rounding.
constexpr double kRoundingUnits = 2;
/// The data carry t if t * scale >= kFloorUnits * 2^-53 * rms(S_i) (the contract's own number).
constexpr double kFloorUnits = 8;
/// The engine knows rms(S_i) and scale from its sample only.
constexpr double kFloorSlack = 2;

}  // namespace farsum::accuracy
