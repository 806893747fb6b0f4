#pragma once
// Reads the chosen species of an openPMD file into arrays, and tells what a file holds.
#include <string>

#include "io/file_summary.hpp"
#include "io/particles.hpp"
#include "io/read_options.hpp"

namespace farsum::io::openpmd {

ParticleSet load(const std::string& path, const ReadOptions& options);
FileSummary summarise(const std::string& path, const ReadOptions& options, bool with_contents);

}  // namespace farsum::io::openpmd
