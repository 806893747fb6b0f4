#pragma once
// Writes openPMD 1.1.0 files: results beside the particles they belong to, and plain particle files. SI numbers (unitSI = 1),
// positionOffset 0, one patch a species, atomic output (io/output_file.hpp).
#include <cstdint>
#include <string>
#include <vector>

#include "io/particles.hpp"
#include "io/run_attributes.hpp"
#include "io/write_options.hpp"

namespace farsum::io {

/// Engine results for the rows of a ParticleSet, in its order. Records written: potential = k phi, electricField = k E,
/// force = Q k E, potentialEnergy = Q k phi / 2. A null pointer leaves out the records that need it.
struct ResultColumns {
  const double* potential = nullptr;                                        ///< C/m
  const double *field_x = nullptr, *field_y = nullptr, *field_z = nullptr;  ///< C/m^2
  double coulomb_constant = 0;                                              ///< k / permittivity, V m / C
  bool write_potential = true, write_field = true, write_force = true, write_energy = true;
};

/// Writes `particles` with their results to `path`. Records of the input file (momentum, mass, weighting and every other
/// numeric per-particle record) are copied by slabs for the rows of the set, converted to SI; `id` is the file's or the row
/// number. `run` becomes the attributes of the root group `run`. `only_species` limits what is written to those names (empty:
/// all); rows of other species are skipped. Result arrays run over all rows of the set. Memory: a few MB of slabs. Throws
/// Error: as check_output_target, file_not_writable, disk_full, range_exceeded (a result outside the double range),
/// file_damaged (the input changed meanwhile), cancelled; the target is then as before and no temporary is left.
void write_result(const std::string& path, const ParticleSet& particles, const ResultColumns& results, const RunAttributes& run,
                  const WriteOptions& options, const std::vector<std::string>& only_species = {});

/// Bytes that write_result will need on the disk, an upper bound for a check of free space.
std::uint64_t predict_result_bytes(const ParticleSet& particles);
std::uint64_t predict_result_bytes(std::uint64_t rows);

/// One species in memory, as viewed arrays: places in m, momenta of one real particle in kg m/s (null: none).
struct SpeciesColumns {
  std::string name;
  std::size_t count = 0;
  const double *x = nullptr, *y = nullptr, *z = nullptr;
  const double *momentum_x = nullptr, *momentum_y = nullptr, *momentum_z = nullptr;
  double charge = 0;           ///< C, of one real particle
  double mass = 0;             ///< kg, of one real particle; 0: not written
  double weighting = 1;        ///< real particles for each row
  std::uint64_t first_id = 0;  ///< ids are first_id, first_id + 1, ...
};

/// Writes a particle file, for example a demonstration scene. `run` as for write_result; no group when empty. Errors as
/// write_result.
void write_particles(const std::string& path, const std::vector<SpeciesColumns>& species, const RunAttributes& run,
                     const WriteOptions& options);

}  // namespace farsum::io
