#include "apps/farsum/motion.hpp"

#include <fmt/format.h>

#include <algorithm>

#include "apps/farsum/display.hpp"
#include "fmm/error.hpp"

namespace farsum::command {
namespace {

/// "0.0731 c"; as many nines as it takes for speeds close to that of light.
std::string speed(double share) {
  return share > 0.99 ? fmt::format("{:.6f} c", share) : fmt::format("{:.3g} c", share);
}

const io::SpeciesSummary* fastest(const io::FileSummary& summary) {
  const io::SpeciesSummary* found = nullptr;
  for (const io::SpeciesSummary& species : summary.species)
    if (species.contents.has_motion && (!found || species.contents.mean_speed_over_c() > found->contents.mean_speed_over_c()))
      found = &species;
  return found;
}

}  // namespace

double greatest_mean_speed(const io::FileSummary& summary) {
  const io::SpeciesSummary* species = fastest(summary);
  return species ? species->contents.mean_speed_over_c() : 0;
}

void require_slow_charges(const io::FileSummary& summary, bool as_static) {
  const io::SpeciesSummary* species = fastest(summary);
  if (as_static || !species || species->contents.mean_speed_over_c() <= kFastestMeanSpeed) return;
  throw Error(ErrorCode::moving_frame,
              fmt::format("these charges move at {} (mean beta gamma {:.4g}); the static sum is not their space-charge field",
                          speed(species->contents.mean_speed_over_c()), species->contents.mean_beta_gamma),
              summary.file, "species " + species->name,
              "give the places in the frame in which the bunch is at rest, or add --static to sum them as if at rest");
}

std::string motion_caution(const io::FileSummary& summary) {
  const double mean_speed = greatest_mean_speed(summary);
  if (mean_speed > kFastestMeanSpeed)
    return fmt::format("the charges move at {} and were summed as if at rest (--static)", speed(mean_speed));
  double beta_gamma = 0;
  for (const io::SpeciesSummary& species : summary.species) beta_gamma = std::max(beta_gamma, species.contents.mean_beta_gamma);
  if (beta_gamma > kFastestMeanSpeed)
    return fmt::format(
        "single charges are fast (mean beta gamma {}) although their mean velocity is small; they were summed as if at rest",
        short_number(beta_gamma, 3));
  return {};
}

void require_snapshot(const io::FileSummary& summary) {
  for (const io::SpeciesSummary& species : summary.species) {
    if (species.snapshot) continue;
    throw Error(
        ErrorCode::not_a_snapshot,
        fmt::format("the particles were recorded at different times ({:.6g} s to {:.6g} s), so their places are no snapshot",
                    species.time_first, species.time_last),
        summary.file, "species " + species.name,
        "choose --advance-to TIME to move each freely to one time, or --as-snapshot to take the places as they stand");
  }
}

}  // namespace farsum::command
