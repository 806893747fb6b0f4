#pragma once
// Reads particle files. The format is decided by the content, never by the name: openPMD in HDF5 (1.x strictly, 2.x and bunch
// files tolerantly) or delimited text with a header that names columns and units (io/text/text_header.hpp has the grammar).
#include <string>

#include "io/file_summary.hpp"
#include "io/particles.hpp"
#include "io/read_options.hpp"

namespace farsum::io {

enum class Depth {
  counts,    ///< structure, counts, lost particles, snapshot or not
  contents,  ///< also Contents: reads positions, charges, momenta once by slabs
};

/// What `path` holds under `options`. Does not refuse a file without charge, with several iterations or with spread times:
/// those show in the summary. Memory: a few MB. Throws the same errors as read_particles for everything that is damaged or
/// unsafe.
FileSummary inspect(const std::string& path, const ReadOptions& options = {}, Depth depth = Depth::contents);

/// All live rows of the chosen iteration and species, SI, in file order. Peak memory: the set itself (32 B a row, 40 B with
/// ids) and a few MB of slabs; the size is known, checked and compared with the limit before anything is allocated. Throws
/// Error: file_not_found, file_not_readable, file_damaged, file_unsafe, format_unsupported, item_missing, item_wrong_type,
/// item_wrong_size, item_bad_value, not_finite (first bad row), unit_unknown, unit_wrong_dimension, choice_needed (several
/// iterations), not_a_snapshot, memory_refused, out_of_memory, cancelled. Thread safe: HDF5 work is serialised inside.
ParticleSet read_particles(const std::string& path, const ReadOptions& options = {});

}  // namespace farsum::io
