#pragma once
// The rules of openPMD that io/conformity.hpp checks.
#include <string>
#include <vector>

#include "io/findings.hpp"
#include "io/read_options.hpp"

namespace farsum::io::openpmd {

/// Adds what is wrong with an HDF5 file to `findings`.
void check_rules(const std::string& path, const ReadOptions& options, std::vector<Finding>& findings);

}  // namespace farsum::io::openpmd
