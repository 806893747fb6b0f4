#include "io/openpmd/load.hpp"

#include <fmt/format.h>
#include <unistd.h>

#include <algorithm>
#include <cmath>
#include <limits>

#include "io/openpmd/extra_records.hpp"
#include "io/openpmd/opened_file.hpp"

namespace farsum::io::openpmd {
namespace {

/// Rows read so far over all columns, for the progress.
struct Progress {
  const Hooks& hooks;
  double done = 0, all = 0;
  void add(std::size_t rows) { report_progress(hooks, done += static_cast<double>(rows), all); }
};

std::uint64_t count_live(const OpenedFile& opened) {
  std::uint64_t total = 0;
  for (const OpenedSpecies& species : opened.species()) {
    const std::uint64_t rows = species.columns->rows();
    if (species.lost.all) {
      throw Error(ErrorCode::item_bad_value, fmt::format("none of the {} particles is alive (no particleStatus is 1)", rows),
                  opened.file().path(), hdf5::join(species.columns->place().group, "particleStatus"),
                  "read them all the same with --keep-lost");
    }
    total += rows - species.lost.rows.size();
  }
  return total;
}

bool has_ids(const OpenedFile& opened) {
  return std::any_of(opened.species().begin(), opened.species().end(),
                     [](const OpenedSpecies& species) { return species.columns->id_data().has_value(); });
}

void check_memory(const OpenedFile& opened, std::uint64_t live, const ReadOptions& options) {
  const std::uint64_t row_bytes =
      (options.load_motion ? 8 : 4) * sizeof(double) + (has_ids(opened) ? sizeof(std::uint64_t) : 0);
  const double bytes = static_cast<double>(live) * static_cast<double>(row_bytes);
  if (options.memory_limit > 0 && bytes > static_cast<double>(options.memory_limit)) {
    throw Error(ErrorCode::memory_refused,
                fmt::format("its {} particles need {:.0f} MiB, the limit is {:.0f} MiB", live, bytes / 1048576.0,
                            static_cast<double>(options.memory_limit) / 1048576.0),
                opened.file().path(), {}, "raise --memory-limit or choose fewer species");
  }
  // An allocation beyond all memory may seem to succeed and end in a kill later, so the size is compared first.
  if (bytes > static_cast<double>(sysconf(_SC_PHYS_PAGES)) * static_cast<double>(sysconf(_SC_PAGESIZE))) {
    throw Error(ErrorCode::out_of_memory,
                fmt::format("declares {} particles, more than the memory of this machine holds", live), opened.file().path(),
                {}, "choose fewer species");
  }
}

void check_snapshot(const OpenedFile& opened, const ReadOptions& options) {
  if (options.non_snapshot != NonSnapshot::refuse) return;
  TimeSpan span;
  for (const OpenedSpecies& species : opened.species()) span.add(time_span(*species.columns, species.lost, options.hooks));
  if (!span.spread()) return;
  throw Error(ErrorCode::not_a_snapshot,
              fmt::format("the particles were recorded at different times ({:.9g} s to {:.9g} s), so they are no snapshot",
                          span.first, span.last),
              opened.file().path(), hdf5::join(opened.species().front().columns->place().group, "time"),
              "move all to one time T in seconds with --advance-to T, or take the places as they stand with --as-snapshot");
}

void check_charges_known(const OpenedFile& opened) {
  for (const OpenedSpecies& species : opened.species()) {
    if (species.columns->charge().known()) continue;
    throw Error(ErrorCode::item_missing, fmt::format("the charge is not known: {}", species.columns->charge().problem()),
                opened.file().path(), species.columns->place().group,
                "state the charge of one particle with --particle-charge");
  }
}

void check_finite(const double* values, std::size_t count, const char* what, const OpenedFile& opened, const ParticleSet& set,
                  const SpeciesRange& range, std::size_t first) {
  double probe = 0;
  for (std::size_t i = 0; i < count; ++i) probe += values[i] * 0.0;
  if (probe == 0) return;
  for (std::size_t i = 0; i < count; ++i) {
    if (std::isfinite(values[i])) continue;
    throw Error(ErrorCode::not_finite, fmt::format("row {} is {}", set.file_row(first + i), values[i]), opened.file().path(),
                fmt::format("species {}, {}", range.name, what), "remove or repair this row");
  }
}

/// Moves positions of a slab freely by v (T - t).
void advance(const Species& species, const ReadOptions& options, Slab& slab, std::vector<double>& times, int axis,
             double* values) {
  if (options.non_snapshot != NonSnapshot::advance || !species.has_time()) return;
  if (!species.has_motion()) {
    throw Error(ErrorCode::item_missing, "momentum and mass are needed to move particles to a common time", {},
                species.place().group, "take the places as they stand with --as-snapshot");
  }
  times.resize(slab.count);
  species.read_time(slab.start, slab.count, times.data(), slab);
  species.read_beta_gamma(slab);
  for (std::size_t i = 0; i < slab.count; ++i) {
    const double u =
        slab.vector[0][i] * slab.vector[0][i] + slab.vector[1][i] * slab.vector[1][i] + slab.vector[2][i] * slab.vector[2][i];
    const double velocity = kSpeedOfLight * slab.vector[static_cast<std::size_t>(axis)][i] / std::sqrt(1 + u);
    values[i] += velocity * (options.advance_to - times[i]);
  }
}

class Loader {
 public:
  Loader(const OpenedFile& opened, const ReadOptions& options, ParticleSet& set, Progress& progress)
      : opened_(opened), options_(options), set_(set), progress_(progress) {}

  void load_species(const OpenedSpecies& species, const SpeciesRange& range) {
    std::vector<double>* axes[3] = {&set_.x, &set_.y, &set_.z};
    for (int axis = 0; axis < 3; ++axis) load_axis(species, range, axis, axes[axis]->data());
    load_charge(species, range);
    load_ids(species, range);
    if (options_.load_motion) load_motion(species, range);
  }

 private:
  void load_axis(const OpenedSpecies& species, const SpeciesRange& range, int axis, double* all) {
    const Species& columns = *species.columns;
    std::size_t at = range.begin;
    const char* name[3] = {"position x", "position y", "position z"};
    for_each_slab(columns.rows(), columns.slab_rows(), species.lost.rows, [&](auto start, auto count, auto first, auto last) {
      slab_.start = start;
      slab_.count = count;
      // Without lost rows the slab goes straight to its place; there is no second copy.
      double* target = first == last ? all + at : buffer(count);
      columns.read_position(axis, start, count, target, slab_);
      advance(columns, options_, slab_, times_, axis, target);
      const std::size_t kept = drop_rows(target, start, count, first, last);
      if (first != last) std::copy_n(target, kept, all + at);
      check_finite(all + at, kept, name[axis], opened_, set_, range, at);
      at += kept;
      progress_.add(count);
    });
  }

  void load_charge(const OpenedSpecies& species, const SpeciesRange& range) {
    const Species& columns = *species.columns;
    std::size_t at = range.begin;
    double all_rows = 0, live_rows = 0;
    for_each_slab(columns.rows(), columns.slab_rows(), species.lost.rows, [&](auto start, auto count, auto first, auto last) {
      double* values = buffer(count);
      columns.charge().read(opened_.file(), start, count, values, slab_.scratch);
      for (std::size_t i = 0; i < count; ++i) all_rows += std::abs(values[i]);
      const std::size_t kept = drop_rows(values, start, count, first, last);
      for (std::size_t i = 0; i < kept; ++i) live_rows += std::abs(values[i]);
      std::copy_n(values, kept, set_.charge.data() + at);
      check_finite(values, kept, "charge", opened_, set_, range, at);
      at += kept;
      progress_.add(count);
    });
    if (columns.rows() > 0) check_total(columns, all_rows, live_rows);
  }

  /// Bunch files state the sum of their weights; another sum means that the weights were misread.
  void check_total(const Species& columns, double all_rows, double live_rows) const {
    if (columns.charge().is_plain_record()) return;
    const std::string& group = columns.place().group;
    const auto total = opened_.file().number(group, "totalCharge");
    if (!total) return;
    const double stated = std::abs(*total * opened_.file().number(group, "chargeUnitSI").value_or(1.0));
    const auto near = [stated](double sum) { return std::abs(sum - stated) <= 1e-6 * std::max(sum, stated); };
    if (near(all_rows) || near(live_rows)) return;
    throw Error(ErrorCode::item_bad_value,
                fmt::format("states {:.9g} C, but the charges found ({}) add up to {:.9g} C", stated,
                            columns.charge().description(), all_rows),
                opened_.file().path(), group + "@totalCharge", "correct the attribute or the weights");
  }

  void load_ids(const OpenedSpecies& species, const SpeciesRange& range) {
    if (set_.id.empty()) return;
    const Species& columns = *species.columns;
    std::uint64_t* at = set_.id.data() + range.begin;
    std::vector<std::uint64_t> ids;
    for_each_slab(columns.rows(), columns.slab_rows(), species.lost.rows, [&](auto start, auto count, auto first, auto last) {
      ids.resize(count);
      if (!columns.id_data()) {
        for (std::size_t i = 0; i < count; ++i) ids[i] = start + i;
      } else if (columns.id_data()->number_kind() == hdf5::NumberKind::unsigned_integer) {
        columns.id_data()->read(start, count, ids.data());
      } else {
        read_signed_ids(columns, start, ids);
      }
      const std::size_t kept = drop_rows(ids.data(), start, count, first, last);
      at = std::copy_n(ids.data(), kept, at);
      progress_.add(count);
    });
  }

  void read_signed_ids(const Species& columns, std::uint64_t start, std::vector<std::uint64_t>& ids) const {
    std::vector<std::int64_t> values(ids.size());
    columns.id_data()->read(start, values.size(), values.data());
    for (std::size_t i = 0; i < values.size(); ++i) {
      if (values[i] < 0) {
        throw Error(ErrorCode::item_bad_value, fmt::format("row {} is {}; ids are not negative", start + i, values[i]),
                    opened_.file().path(), columns.id_data()->object(), {});
      }
      ids[i] = static_cast<std::uint64_t>(values[i]);
    }
  }

  void load_motion(const OpenedSpecies& species, const SpeciesRange& range) {
    const Species& columns = *species.columns;
    if (set_.motion.mass.empty()) return;
    std::size_t at = range.begin;
    std::vector<double>* out[3] = {&set_.motion.momentum_x, &set_.motion.momentum_y, &set_.motion.momentum_z};
    for_each_slab(columns.rows(), columns.slab_rows(), species.lost.rows, [&](auto start, auto count, auto first, auto last) {
      slab_.start = start;
      slab_.count = count;
      if (columns.has_momentum()) {
        columns.read_motion(slab_);
      } else {
        slab_.mass.assign(count, 0.0);
        for (auto& values : slab_.vector) values.assign(count, 0.0);
      }
      std::size_t kept = drop_rows(slab_.mass.data(), start, count, first, last);
      std::copy_n(slab_.mass.data(), kept, set_.motion.mass.data() + at);
      for (std::size_t axis = 0; axis < 3; ++axis) {
        drop_rows(slab_.vector[axis].data(), start, count, first, last);
        std::copy_n(slab_.vector[axis].data(), kept, out[axis]->data() + at);
      }
      at += kept;
    });
  }

  double* buffer(std::size_t count) {
    buffer_.resize(std::max(count, buffer_.size()));
    return buffer_.data();
  }

  const OpenedFile& opened_;
  const ReadOptions& options_;
  ParticleSet& set_;
  Progress& progress_;
  Slab slab_;
  std::vector<double> buffer_, times_;
};

void allocate(ParticleSet& set, const OpenedFile& opened, std::uint64_t live, const ReadOptions& options) {
  if (live > std::numeric_limits<std::ptrdiff_t>::max() / sizeof(double)) {
    throw Error(ErrorCode::item_wrong_size, fmt::format("declares {} particles", live), opened.file().path(), {}, {});
  }
  const std::size_t count = static_cast<std::size_t>(live);
  for (auto* values : {&set.x, &set.y, &set.z, &set.charge}) values->resize(count);
  if (has_ids(opened)) set.id.resize(count);
  if (!options.load_motion) return;
  for (auto* values : {&set.motion.momentum_x, &set.motion.momentum_y, &set.motion.momentum_z, &set.motion.mass})
    values->resize(count);
}

/// Ids that repeat the row numbers are not kept.
void forget_plain_ids(ParticleSet& set) {
  for (std::size_t row = 0, s = 0; row < set.id.size(); ++row) {
    while (row >= set.species[s].end) ++s;
    const std::uint64_t expected = set.species[s].dropped_rows.empty() ? row - set.species[s].begin : set.file_row(row);
    if (set.id[row] != expected) return;
  }
  std::vector<std::uint64_t>().swap(set.id);
}

}  // namespace

ParticleSet load(const std::string& path, const ReadOptions& options) {
  OpenedFile opened(path, options);
  opened.open_species();
  const std::uint64_t live = count_live(opened);
  check_memory(opened, live, options);
  check_charges_known(opened);
  check_snapshot(opened, options);
  ParticleSet set;
  set.file = path;
  set.format = fmt::format("openPMD {}", opened.layout().version);
  set.iteration = opened.iteration();
  set.allow_external = options.allow_external;
  set.notes = opened.layout().notes;
  allocate(set, opened, live, options);
  Progress progress{options.hooks};
  std::size_t begin = 0;
  for (const OpenedSpecies& species : opened.species()) {
    const Species& columns = *species.columns;
    const std::size_t kept = static_cast<std::size_t>(columns.rows() - species.lost.rows.size());
    set.species.push_back(
        {columns.place().name, begin, begin + kept, static_cast<std::size_t>(columns.rows()), species.lost.rows});
    set.notes.insert(set.notes.end(), columns.notes().begin(), columns.notes().end());
    check_extra_records(opened.file(), columns.place(), columns.rows(), set.notes);
    progress.all += static_cast<double>(columns.rows()) * (set.id.empty() ? 4 : 5);
    begin += kept;
  }
  Loader loader(opened, options, set, progress);
  for (std::size_t s = 0; s < set.species.size(); ++s) loader.load_species(opened.species()[s], set.species[s]);
  forget_plain_ids(set);
  return set;
}

}  // namespace farsum::io::openpmd
