#include "io/result_reader.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <numeric>

#include "fmm/error.hpp"
#include "io/openpmd/component.hpp"
#include "io/openpmd/layout.hpp"
#include "io/particle_reader.hpp"

namespace farsum::io {
namespace {

using hdf5::join;

void read_column(const hdf5::InputFile& file, const std::string& record, const std::string& object, const Dimension& dimension,
                 const SpeciesRange& range, std::vector<double>& values) {
  const openpmd::Component component(file, record, object, {dimension, true, std::nullopt});
  if (component.size() && *component.size() != range.count()) {
    throw Error(ErrorCode::item_wrong_size, fmt::format("has {} rows, the positions have {}", *component.size(), range.count()),
                file.path(), object, {});
  }
  const std::size_t first = values.size();
  values.resize(first + range.count());
  component.read(0, range.count(), values.data() + first);
  for (std::size_t i = first; i < values.size(); ++i) {
    if (std::isfinite(values[i])) continue;
    throw Error(ErrorCode::not_finite, fmt::format("row {} is {}", i - first, values[i]), file.path(), object, {});
  }
}

/// True if all species hold the record, false if none does.
bool all_hold(const hdf5::InputFile& file, const std::vector<std::string>& groups, const char* record) {
  std::size_t found = 0;
  for (const std::string& group : groups) found += file.kind(join(group, record)) != hdf5::Kind::none;
  if (found == 0 || found == groups.size()) return found > 0;
  throw Error(ErrorCode::item_missing, fmt::format("only some species hold the record '{}'", record), file.path(), {}, {});
}

RunAttributes read_run(const hdf5::InputFile& file) {
  RunAttributes run;
  if (!file.is_group("/run")) return run;
  for (const std::string& name : file.attribute_names("/run")) {
    if (const auto text = file.text("/run", name)) {
      run.push_back({name, *text});
    } else if (const auto number = file.number("/run", name)) {
      run.push_back({name, *number});
    }
  }
  return run;
}

/// Rows of a range, sorted by id. Throws if two have the same.
std::vector<std::size_t> rows_by_id(const ParticleSet& set, const SpeciesRange& range) {
  std::vector<std::size_t> rows(range.count());
  std::iota(rows.begin(), rows.end(), range.begin);
  const auto less = [&set](std::size_t a, std::size_t b) { return set.id_of(a) < set.id_of(b); };
  if (!std::is_sorted(rows.begin(), rows.end(), less)) std::sort(rows.begin(), rows.end(), less);
  for (std::size_t i = 1; i < rows.size(); ++i) {
    if (set.id_of(rows[i - 1]) != set.id_of(rows[i])) continue;
    throw Error(ErrorCode::item_bad_value, fmt::format("the id {} occurs twice", set.id_of(rows[i])), set.file,
                "species " + range.name, {});
  }
  return rows;
}

const SpeciesRange& partner(const ParticleSet& input, const ParticleSet& result, const SpeciesRange& range) {
  for (const SpeciesRange& candidate : input.species)
    if (openpmd::word(candidate.name) == range.name) return candidate;
  if (input.species.size() == 1 && result.species.size() == 1) return input.species.front();
  throw Error(ErrorCode::item_missing, fmt::format("has no species '{}' of the result", range.name), input.file, {}, {});
}

void match_species(const ParticleSet& input, const SpeciesRange& from, const ParticleSet& result, const SpeciesRange& range,
                   std::vector<std::size_t>& rows) {
  const std::vector<std::size_t> own = rows_by_id(result, range), others = rows_by_id(input, from);
  std::size_t at = 0;
  for (const std::size_t row : own) {
    const std::uint64_t id = result.id_of(row);
    while (at < others.size() && input.id_of(others[at]) < id) ++at;
    if (at == others.size() || input.id_of(others[at]) != id) {
      throw Error(ErrorCode::item_missing, fmt::format("has no particle with the id {} of the result", id), input.file,
                  "species " + from.name, "compare the result with the input that it was made from");
    }
    rows[row] = others[at];
  }
}

/// The usual case: same rows in the same order.
bool same_order(const ParticleSet& input, const SpeciesRange& from, const ParticleSet& result, const SpeciesRange& range) {
  if (from.count() != range.count()) return false;
  if (input.id.empty() && result.id.empty() && from.dropped_rows.empty()) return true;
  for (std::size_t i = 0; i < range.count(); ++i) {
    if (input.id_of(from.begin + i) != result.id_of(range.begin + i)) return false;
    if (i > 0 && result.id_of(range.begin + i) <= result.id_of(range.begin + i - 1)) return false;
  }
  return true;
}

}  // namespace

ResultTable read_result(const std::string& path, const ReadOptions& options) {
  ResultTable table;
  table.particles = read_particles(path, options);
  if (!table.particles.format.starts_with("openPMD")) {
    throw Error(ErrorCode::format_unsupported, "is no result file: results are openPMD files", path, {}, {});
  }
  const hdf5::Session session;
  const hdf5::InputFile file(path, options.allow_external);
  const openpmd::Layout layout = openpmd::find_layout(file);
  std::vector<std::string> groups;
  for (const auto& place :
       openpmd::select_species(file, openpmd::find_species(file, layout, table.particles.iteration), options.species))
    groups.push_back(place.group);
  const bool potential = all_hold(file, groups, "potential"), field = all_hold(file, groups, "electricField");
  if (!potential && !field) {
    throw Error(ErrorCode::item_missing, "holds neither 'potential' nor 'electricField', so it is no result", path,
                groups.front(), {});
  }
  std::vector<double>* axes[3] = {&table.field_x, &table.field_y, &table.field_z};
  for (std::size_t s = 0; s < groups.size(); ++s) {
    const SpeciesRange& range = table.particles.species[s];
    const std::string record = join(groups[s], "electricField");
    if (potential)
      read_column(file, join(groups[s], "potential"), join(groups[s], "potential"), dimension::kPotential, range,
                  table.potential);
    for (int axis = 0; field && axis < 3; ++axis)
      read_column(file, record, join(record, std::string(1, "xyz"[axis])), dimension::kField, range, *axes[axis]);
  }
  table.run = read_run(file);
  return table;
}

std::vector<std::size_t> match_rows(const ParticleSet& input, const ResultTable& result) {
  std::vector<std::size_t> rows(result.size());
  for (const SpeciesRange& range : result.particles.species) {
    const SpeciesRange& from = partner(input, result.particles, range);
    if (same_order(input, from, result.particles, range)) {
      std::iota(rows.begin() + static_cast<std::ptrdiff_t>(range.begin), rows.begin() + static_cast<std::ptrdiff_t>(range.end),
                from.begin);
    } else {
      match_species(input, from, result.particles, range, rows);
    }
  }
  return rows;
}

}  // namespace farsum::io
