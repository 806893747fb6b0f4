#pragma once
// Copies records of an input species into a result file by slabs, for the rows that were read.
#include "io/openpmd/extra_records.hpp"
#include "io/openpmd/particle_output.hpp"
#include "io/particles.hpp"

namespace farsum::io::openpmd {

/// Copies `records` for the rows of `range`, in SI, with the macro rules of the input.
void copy_records(const hdf5::InputFile& file, const std::vector<ExtraRecord>& records, const SpeciesRange& range,
                  SpeciesOutput& output);

}  // namespace farsum::io::openpmd
