#pragma once
// Records that the standard or this project gives a meaning, with what they must look like.
#include <string_view>

#include "io/openpmd/component.hpp"

namespace farsum::io::openpmd {

struct KnownRecord {
  std::string_view name;
  Dimension dimension;
  MacroRule rule;  ///< usual macroWeighted and weightingPower
  bool vector;     ///< components x, y, z
};

/// The entry of that name, or nullptr.
const KnownRecord* find_known_record(std::string_view name) noexcept;

}  // namespace farsum::io::openpmd
