#pragma once
// Reads a delimited text file of particles; text_header.hpp has the grammar. Numbers are read without regard to the locale.
#include <string>

#include "io/file_summary.hpp"
#include "io/particles.hpp"
#include "io/read_options.hpp"

namespace farsum::io::text {

ParticleSet load(const std::string& path, const ReadOptions& options);
FileSummary summarise(const std::string& path, const ReadOptions& options, bool with_contents);

}  // namespace farsum::io::text
