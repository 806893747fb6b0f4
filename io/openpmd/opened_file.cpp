#include "io/openpmd/opened_file.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

namespace farsum::io::openpmd {

void TimeSpan::add(const TimeSpan& other) noexcept {
  if (!other.known) return;
  first = known ? std::min(first, other.first) : other.first;
  last = known ? std::max(last, other.last) : other.last;
  known = true;
}

OpenedFile::OpenedFile(const std::string& path, const ReadOptions& options)
    : options_(options), file_(path, options.allow_external), layout_(find_layout(file_)) {}

void OpenedFile::open_species() {
  iteration_ = choose_iteration(file_, layout_, options_);
  for (const SpeciesPlace& place : select_species(file_, find_species(file_, layout_, iteration_), options_.species)) {
    OpenedSpecies opened{std::make_unique<Species>(file_, place, options_), {}};
    if (!options_.keep_lost) opened.lost = opened.columns->lost_rows(options_.hooks);
    species_.push_back(std::move(opened));
  }
}

TimeSpan time_span(const Species& species, const LostRows& lost, const Hooks& hooks) {
  TimeSpan span;
  if (!species.has_time()) return span;
  Slab slab;
  std::vector<double> times;
  for_each_slab(species.rows(), species.slab_rows(), lost.rows, [&](auto start, auto count, auto first, auto last) {
    times.resize(count);
    species.read_time(start, count, times.data(), slab);
    const std::size_t kept = drop_rows(times.data(), start, count, first, last);
    if (kept == 0) return;
    const auto [low, high] = std::minmax_element(times.begin(), times.begin() + static_cast<std::ptrdiff_t>(kept));
    if (!std::isfinite(*low) || !std::isfinite(*high)) {
      throw Error(ErrorCode::not_finite, fmt::format("a time in the rows {} to {} is not finite", start, start + count - 1), {},
                  hdf5::join(species.place().group, "time"), {});
    }
    span.add({true, *low, *high});
    report_progress(hooks, 0, 1);
  });
  return span;
}

}  // namespace farsum::io::openpmd
