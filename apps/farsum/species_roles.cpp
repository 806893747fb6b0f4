#include "apps/farsum/species_roles.hpp"

#include <fmt/format.h>

#include <algorithm>

#include "apps/farsum/display.hpp"
#include "fmm/error.hpp"

namespace farsum::command {
namespace {

bool contains(const std::vector<std::string>& names, const std::string& name) {
  return std::find(names.begin(), names.end(), name) != names.end();
}

void require_known(const io::ParticleSet& set, const std::vector<std::string>& wanted, const char* option) {
  std::vector<std::string> known;
  for (const io::SpeciesRange& species : set.species) known.push_back(species.name);
  for (const std::string& name : wanted)
    if (!contains(known, name))
      throw Error(ErrorCode::item_missing, fmt::format("there is no species '{}' among those read", name), set.file, {},
                  fmt::format("name species with {} out of: {}", option, joined(known)));
}

}  // namespace

RowRoles assign_roles(const io::ParticleSet& set, const SpeciesRoles& roles) {
  require_known(set, roles.sources, "--sources");
  require_known(set, roles.targets, "--targets");
  RowRoles rows;
  rows.everything = true;
  for (const io::SpeciesRange& species : set.species) {
    const bool acts = roles.sources.empty() || contains(roles.sources, species.name);
    const bool evaluated = roles.targets.empty() || contains(roles.targets, species.name);
    if (acts) rows.acting.push_back(species);
    if (acts && evaluated) rows.both.push_back(species);
    if (!acts && evaluated) rows.only_evaluated.push_back(species);
    if (evaluated) rows.evaluated_names.push_back(species.name);
    if (!acts || !evaluated) rows.everything = false;
  }
  return rows;
}

std::size_t count_rows(const std::vector<io::SpeciesRange>& ranges) {
  std::size_t count = 0;
  for (const io::SpeciesRange& range : ranges) count += range.count();
  return count;
}

}  // namespace farsum::command
