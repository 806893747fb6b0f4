#pragma once
// Where things are in an openPMD file: version, iterations, species. Tolerates the variants met in real files: base paths other
// than /data/%T/ or without %T, particle paths such as "./", and an iteration group that is itself the species.
#include <string>
#include <vector>

#include "io/hdf5/input_file.hpp"
#include "io/read_options.hpp"

namespace farsum::io::openpmd {

struct Layout {
  std::string version;  ///< as in the file, "1.1.0"
  int major_version = 1;
  std::string base_path, particles_path;
  std::vector<std::string> iterations;  ///< names in numeric order; one empty name where basePath has no %T
  std::vector<std::string> notes;
};

struct SpeciesPlace {
  std::string name;   ///< letters, digits, underscore
  std::string group;  ///< absolute path
};

/// Throws format_unsupported (no openPMD attribute, other major version), item_missing (no iterations).
Layout find_layout(const hdf5::InputFile& file);

/// Group of one iteration.
std::string iteration_group(const Layout& layout, const std::string& iteration);

/// The iteration that the caller asked for, or the only one. Throws choice_needed listing all.
std::string choose_iteration(const hdf5::InputFile& file, const Layout& layout, const ReadOptions& options);

/// Species of an iteration in the order of the file; all of them, whatever the options select.
std::vector<SpeciesPlace> find_species(const hdf5::InputFile& file, const Layout& layout, const std::string& iteration);

/// The selected ones. Throws choice_needed for a name that is not there.
std::vector<SpeciesPlace> select_species(const hdf5::InputFile& file, const std::vector<SpeciesPlace>& all,
                                         const std::vector<std::string>& names);

/// Letters, digits and underscores of a name; others become underscores; never empty.
std::string word(const std::string& name);

}  // namespace farsum::io::openpmd
