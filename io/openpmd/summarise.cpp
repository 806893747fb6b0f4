#include <fmt/format.h>

#include <algorithm>

#include "io/openpmd/load.hpp"
#include "io/openpmd/opened_file.hpp"
#include "io/summary/contents_sums.hpp"

namespace farsum::io::openpmd {
namespace {

using hdf5::join;

/// Reads positions, charges and momenta of the live rows once.
void add_contents(const OpenedFile& opened, const OpenedSpecies& species, const Hooks& hooks, ContentsSums& own,
                  ContentsSums& all) {
  const Species& columns = *species.columns;
  if (species.lost.all) return;
  Slab slab;
  std::array<std::vector<double>, 3> place;
  std::vector<double> charge;
  for_each_slab(columns.rows(), columns.slab_rows(), species.lost.rows, [&](auto start, auto count, auto first, auto last) {
    slab.start = start;
    slab.count = count;
    charge.assign(count, 0.0);
    for (int axis = 0; axis < 3; ++axis) {
      auto& values = place[static_cast<std::size_t>(axis)];
      values.resize(count);
      columns.read_position(axis, start, count, values.data(), slab);
      drop_rows(values.data(), start, count, first, last);
    }
    if (columns.charge().known()) columns.charge().read(opened.file(), start, count, charge.data(), slab.scratch);
    const std::size_t kept = drop_rows(charge.data(), start, count, first, last);
    if (columns.has_motion()) {
      columns.read_beta_gamma(slab);
      for (auto& values : slab.vector) drop_rows(values.data(), start, count, first, last);
    }
    for (ContentsSums* sums : {&own, &all}) {
      for (std::size_t i = 0; i < kept; ++i) {
        sums->add_place(place[0][i], place[1][i], place[2][i]);
        sums->add_charge(charge[i]);
        if (columns.has_motion())
          sums->add_motion(slab.vector[0][i], slab.vector[1][i], slab.vector[2][i], columns.charge().known() ? charge[i] : 1.0);
      }
    }
    report_progress(hooks, static_cast<double>(start + count), static_cast<double>(columns.rows()));
  });
}

SpeciesSummary describe_species(const OpenedFile& opened, const OpenedSpecies& species, const Hooks& hooks) {
  const Species& columns = *species.columns;
  SpeciesSummary summary;
  summary.name = columns.place().name;
  summary.particle_type = columns.type_name();
  summary.stored = columns.rows();
  summary.lost = species.lost.count(columns.rows());
  summary.charge_source = columns.charge().known() ? columns.charge().description() : std::string();
  summary.has_id = columns.id_data().has_value();
  summary.has_mass = columns.has_mass();
  summary.has_momentum = columns.has_momentum();
  summary.has_weighting = columns.has_weighting();
  if (!species.lost.all) {
    const TimeSpan span = time_span(columns, species.lost, hooks);
    summary.snapshot = !span.spread();
    if (!summary.snapshot) {
      summary.time_first = span.first;
      summary.time_last = span.last;
    }
  }
  for (const std::string& child : opened.file().children(columns.place().group)) {
    const std::string object = join(columns.place().group, child);
    const bool vector = opened.file().is_group(object) && is_component(opened.file(), join(object, "x"));
    if (vector || is_component(opened.file(), object)) summary.records.push_back(child);
  }
  if (!columns.charge().known()) summary.missing.push_back(fmt::format("charge: {}", columns.charge().problem()));
  if (!columns.has_momentum()) summary.missing.push_back("momentum: whether the charges move is not known");
  if (columns.has_momentum() && !columns.has_motion())
    summary.missing.push_back("mass: how fast the charges move is not known");
  if (!columns.id_data()) summary.missing.push_back("id: row numbers are used");
  return summary;
}

}  // namespace

FileSummary summarise(const std::string& path, const ReadOptions& options, bool with_contents) {
  OpenedFile opened(path, options);
  FileSummary summary;
  summary.file = path;
  summary.format = fmt::format("openPMD {}", opened.layout().version);
  summary.iterations = opened.layout().iterations;
  summary.length_unit = std::string(kSi.length);
  summary.charge_unit = std::string(kSi.charge);
  summary.notes = opened.layout().notes;
  if (!options.iteration && summary.iterations.size() > 1) return summary;
  opened.open_species();
  summary.iteration = opened.iteration();
  ContentsSums all;
  for (const OpenedSpecies& species : opened.species()) {
    summary.species.push_back(describe_species(opened, species, options.hooks));
    const auto& notes = species.columns->notes();
    summary.notes.insert(summary.notes.end(), notes.begin(), notes.end());
    if (!with_contents) continue;
    ContentsSums own;
    add_contents(opened, species, options.hooks, own, all);
    summary.species.back().contents = own.result();
  }
  if (with_contents) summary.contents = all.result();
  return summary;
}

}  // namespace farsum::io::openpmd
