#include "io/particles.hpp"

#include <algorithm>

namespace farsum::io {

std::size_t ParticleSet::lost() const noexcept {
  std::size_t total = 0;
  for (const SpeciesRange& range : species) total += range.dropped_rows.size();
  return total;
}

std::size_t ParticleSet::species_of(std::size_t row) const {
  std::size_t index = 0;
  while (index + 1 < species.size() && row >= species[index].end) ++index;
  return index;
}

std::uint64_t ParticleSet::file_row(std::size_t row) const {
  if (species.empty()) return row;
  const SpeciesRange& range = species[species_of(row)];
  const std::vector<std::uint64_t>& dropped = range.dropped_rows;
  const std::uint64_t kept = row - range.begin;
  // Dropped row d at place i has d - i kept rows before it, which never falls with i.
  std::size_t low = 0, high = dropped.size();
  while (low < high) {
    const std::size_t middle = (low + high) / 2;
    if (dropped[middle] - middle <= kept) {
      low = middle + 1;
    } else {
      high = middle;
    }
  }
  return kept + low;
}

}  // namespace farsum::io
