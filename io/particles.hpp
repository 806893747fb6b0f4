#pragma once
// Point charges as read from a file: SI numbers, one contiguous array a quantity, all chosen species one after the other in the
// order of the file. Rows of lost particles are left out; everything else of the file stays there and is copied when results
// are written.
#include <cstddef>
#include <cstdint>
#include <string>
#include <vector>

#include "fmm/points.hpp"

namespace farsum::io {

/// The rows [begin, end) of a ParticleSet that came from one species.
struct SpeciesRange {
  std::string name;
  std::size_t begin = 0, end = 0;
  std::size_t stored = 0;                   ///< rows in the file, live and lost
  std::vector<std::uint64_t> dropped_rows;  ///< rows of the file that were left out, ascending

  std::size_t count() const noexcept { return end - begin; }
};

/// Columns that a set keeps only when there is no file to copy them from (delimited text) or when ReadOptions::load_motion
/// asks. Each is empty or as long as the set. Values are those of one real particle, not of the macroparticle.
struct MotionColumns {
  std::vector<double> momentum_x, momentum_y, momentum_z;  ///< kg m/s
  std::vector<double> mass;                                ///< kg
};

struct ParticleSet {
  std::string file;             ///< path as given by the caller
  std::string format;           ///< "openPMD 1.1.0", "delimited text"
  std::string iteration;        ///< name in the file, empty when it has none
  bool allow_external = false;  ///< links to other files were followed, and are again when records are copied
  std::vector<SpeciesRange> species;
  std::vector<double> x, y, z;    ///< m
  std::vector<double> charge;     ///< C, of the whole macroparticle
  std::vector<double> weighting;  ///< real particles for each row; only from text, else empty
  std::vector<std::uint64_t> id;  ///< empty: the id of a row is its row number in its species
  MotionColumns motion;
  std::vector<std::string> notes;  ///< what the reader decided or corrected, one sentence each

  std::size_t size() const noexcept { return x.size(); }
  std::size_t lost() const noexcept;
  PointsView points() const noexcept { return {x.data(), y.data(), z.data(), x.size(), 1}; }
  ChargesView charges() const noexcept { return {charge.data(), charge.size(), 1}; }
  /// Species of a row, as an index into `species`. Cost O(number of species).
  std::size_t species_of(std::size_t row) const;
  /// Row of the file, within its species, that this row came from. Cost O(log dropped).
  std::uint64_t file_row(std::size_t row) const;
  /// The file's id of a row, or its row number in its species when the file has no ids.
  std::uint64_t id_of(std::size_t row) const { return id.empty() ? file_row(row) : id[row]; }
};

}  // namespace farsum::io
