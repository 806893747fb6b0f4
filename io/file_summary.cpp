#include "io/file_summary.hpp"

#include <algorithm>
#include <cmath>

#include "io/units.hpp"

namespace farsum::io {

double Contents::extent() const noexcept {
  return std::max({upper[0] - lower[0], upper[1] - lower[1], upper[2] - lower[2], 0.0});
}

double Contents::mean_speed_over_c() const noexcept {
  return std::hypot(mean_velocity[0], mean_velocity[1], mean_velocity[2]) / kSpeedOfLight;
}

std::uint64_t FileSummary::stored() const noexcept {
  std::uint64_t total = 0;
  for (const SpeciesSummary& entry : species) total += entry.stored;
  return total;
}

std::uint64_t FileSummary::lost() const noexcept {
  std::uint64_t total = 0;
  for (const SpeciesSummary& entry : species) total += entry.lost;
  return total;
}

bool FileSummary::snapshot() const noexcept {
  return std::all_of(species.begin(), species.end(), [](const SpeciesSummary& entry) { return entry.snapshot; });
}

std::uint64_t FileSummary::memory_bytes() const noexcept {
  const bool ids = std::any_of(species.begin(), species.end(), [](const SpeciesSummary& entry) { return entry.has_id; });
  return live() * (ids ? 40 : 32);
}

}  // namespace farsum::io
