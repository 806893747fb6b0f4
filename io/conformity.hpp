#pragma once
// Holds a particle file against the rules of openPMD that matter here, and says all that is wrong instead of stopping at the
// first.
#include <string>
#include <vector>

#include "io/findings.hpp"
#include "io/read_options.hpp"

namespace farsum::io {

/// Checks every iteration and species: root attributes and their types, iteration attributes, record names, equal lengths,
/// shape of constants, seven dimension exponents and the dimension of known records, unitSI, finite values, unique ids, patches
/// that add up and enclose the positions. For text: that it reads. Empty result: nothing to complain about.
/// Throws Error for what cannot be opened at all (file_not_found, file_damaged, file_unsafe, ...).
std::vector<Finding> check_conformity(const std::string& path, const ReadOptions& options = {});

}  // namespace farsum::io
