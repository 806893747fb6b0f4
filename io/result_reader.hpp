#pragma once
// Reads back what write_result wrote, for an independent check of the numbers.
#include <cstddef>
#include <string>
#include <vector>

#include "io/particles.hpp"
#include "io/read_options.hpp"
#include "io/run_attributes.hpp"

namespace farsum::io {

/// Results of a file, SI, species after species. Columns that the file does not hold are empty.
struct ResultTable {
  ParticleSet particles;                          ///< the rows as the result file states them
  std::vector<double> potential;                  ///< V
  std::vector<double> field_x, field_y, field_z;  ///< V/m
  RunAttributes run;

  std::size_t size() const noexcept { return particles.size(); }
  bool has_field() const noexcept { return !field_x.empty(); }
};

/// Throws as read_particles; item_missing where the file holds neither potential nor electricField.
ResultTable read_result(const std::string& path, const ReadOptions& options = {});

/// For each row of the result the row of `input` with the same species and id. Where the result holds one species under another
/// name and both have just one, ids alone decide. Cost O(n log n), O(n) when the order is the same.
/// Throws Error(item_missing) for a row without partner and Error(item_bad_value) for an id that occurs twice in one species.
std::vector<std::size_t> match_rows(const ParticleSet& input, const ResultTable& result);

}  // namespace farsum::io
