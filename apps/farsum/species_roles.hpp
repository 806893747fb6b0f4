#pragma once
// Which species act and which are evaluated.
#include <string>
#include <vector>

#include "io/particles.hpp"

namespace farsum::command {

/// Names as given on the command line; empty means all that were read.
struct SpeciesRoles {
  std::vector<std::string> sources, targets;
  bool limited() const noexcept { return !sources.empty() || !targets.empty(); }
};

/// Rows of a ParticleSet by role. A row may have both.
struct RowRoles {
  std::vector<io::SpeciesRange> acting;          ///< species that act, in the order of the set
  std::vector<io::SpeciesRange> both;            ///< species that act and are evaluated
  std::vector<io::SpeciesRange> only_evaluated;  ///< species that are evaluated and do not act
  std::vector<std::string> evaluated_names;      ///< all that are evaluated, in the order of the set
  bool everything = false;                       ///< every row has both roles
};

/// Throws Error(item_missing) naming the known species for a name that the set does not have.
RowRoles assign_roles(const io::ParticleSet& set, const SpeciesRoles& roles);

std::size_t count_rows(const std::vector<io::SpeciesRange>& ranges);

}  // namespace farsum::command
