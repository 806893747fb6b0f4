#pragma once
// Per-particle records of an input species that are copied unchanged (in SI) into a result file: momentum, mass, weighting,
// charge and whatever else the file holds for each particle.
#include <cstdint>
#include <string>
#include <vector>

#include "io/openpmd/component.hpp"
#include "io/openpmd/layout.hpp"

namespace farsum::io::openpmd {

struct ExtraRecord {
  std::string name;
  std::vector<std::string> axes;  ///< names of components; empty for a scalar record
  std::string object;             ///< path in the input
  std::string offset;             ///< path of the record to add, or empty
};

/// Records to copy. `notes` (may be null) gets a line for each one that is not copied.
/// Throws item_wrong_size where a record has another length than `rows`.
std::vector<ExtraRecord> find_extra_records(const hdf5::InputFile& file, const SpeciesPlace& place, std::uint64_t rows,
                                            std::vector<std::string>* notes);

/// The same, only for its errors and notes, so that they come before any work is done.
void check_extra_records(const hdf5::InputFile& file, const SpeciesPlace& place, std::uint64_t rows,
                         std::vector<std::string>& notes);

}  // namespace farsum::io::openpmd
