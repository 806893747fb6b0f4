#pragma once
// What a particle file holds, without holding it.
#include <array>
#include <cstdint>
#include <string>
#include <vector>

namespace farsum::io {

/// Facts that need a pass over the live rows. Sums run over the rows in file order, compensated.
struct Contents {
  double total_charge = 0, total_absolute_charge = 0;  ///< C
  std::array<double, 3> lower{}, upper{};              ///< m, bounding box; zeros without rows
  bool has_motion = false;                             ///< momenta and masses, or velocities, are known
  std::array<double, 3> mean_velocity{};               ///< m/s, each row weighted by |Q|
  double mean_beta_gamma = 0;                          ///< |p| / (m c), each row weighted by |Q|
  double extent() const noexcept;                      ///< largest edge of the box, m
  double mean_speed_over_c() const noexcept;           ///< |mean velocity| / c
};

struct SpeciesSummary {
  std::string name;
  std::string particle_type;  ///< speciesType of the file, empty if none
  std::uint64_t stored = 0, lost = 0;
  std::uint64_t live() const noexcept { return stored - lost; }
  std::string charge_source;  ///< how charge is found, for example "charge x weighting"; empty: not known
  bool has_id = false, has_mass = false, has_momentum = false, has_weighting = false;
  bool snapshot = true;                  ///< false: rows were recorded at different times
  double time_first = 0, time_last = 0;  ///< s, where not a snapshot
  std::vector<std::string> records;      ///< names in the file
  std::vector<std::string> missing;      ///< what a solve or a check of motion would need
  Contents contents;                     ///< only with Depth::contents
};

struct FileSummary {
  std::string file;
  std::string format;                    ///< "openPMD 1.1.0", "delimited text"
  std::vector<std::string> iterations;   ///< names as in the file, in numeric order
  std::string iteration;                 ///< the one described below; empty if several and none was chosen
  std::vector<SpeciesSummary> species;   ///< the chosen ones; empty if an iteration must be chosen first
  std::string length_unit, charge_unit;  ///< as the file states them; "m" and "C" where numbers carry unitSI
  std::vector<std::string> notes;
  Contents contents;  ///< over all chosen species; only with Depth::contents

  std::uint64_t stored() const noexcept;
  std::uint64_t lost() const noexcept;
  std::uint64_t live() const noexcept { return stored() - lost(); }
  bool snapshot() const noexcept;
  /// Bytes that read_particles will keep in memory for the live rows (at most; ids are counted when the file has them).
  std::uint64_t memory_bytes() const noexcept;
};

}  // namespace farsum::io
