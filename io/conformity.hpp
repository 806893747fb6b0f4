#pragma once
// Holds a particle file against the rules of openPMD that matter here, and says all that is wrong instead of stopping at the
// first.
#include <string>
#include <vector>

#include "io/read_options.hpp"

namespace farsum::io {

enum class Severity { error, warning };

struct Finding {
  Severity severity = Severity::error;
  std::string rule;     ///< stable word, for example "equal_lengths"
  std::string item;     ///< path in the file
  std::string message;  ///< what is wrong and what was expected
};

/// Checks every iteration and species: root attributes and their types, iteration attributes, record names, equal lengths,
/// shape of constants, seven dimension exponents and the dimension of known records, unitSI, finite values, unique ids, patches
/// that add up and enclose the positions. For text: that it reads. Empty result: nothing to complain about.
/// Throws Error for what cannot be opened at all (file_not_found, file_damaged, file_unsafe, ...).
std::vector<Finding> check_conformity(const std::string& path, const ReadOptions& options = {});

}  // namespace farsum::io
