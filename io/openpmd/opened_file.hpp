#pragma once
// An openPMD file with the chosen iteration and species opened, as reader, summary and writer need it.
#include <memory>
#include <string>
#include <vector>

#include "io/openpmd/species.hpp"

namespace farsum::io::openpmd {

struct OpenedSpecies {
  std::unique_ptr<Species> columns;
  LostRows lost;
};

/// Times of the live rows of all species, where the file has them.
struct TimeSpan {
  bool known = false;
  double first = 0, last = 0;
  bool spread() const noexcept { return known && first != last; }
  void add(const TimeSpan& other) noexcept;
};

class OpenedFile {
 public:
  /// Holds the HDF5 session for its life. Throws as read_particles.
  OpenedFile(const std::string& path, const ReadOptions& options);

  const hdf5::InputFile& file() const noexcept { return file_; }
  const Layout& layout() const noexcept { return layout_; }
  /// Opens iteration and species that the options choose.
  void open_species();
  const std::string& iteration() const noexcept { return iteration_; }
  const std::vector<OpenedSpecies>& species() const noexcept { return species_; }

 private:
  hdf5::Session session_;
  ReadOptions options_;
  hdf5::InputFile file_;
  Layout layout_;
  std::string iteration_;
  std::vector<OpenedSpecies> species_;
};

/// Calls visit(start, count, first_lost, end_lost) for each slab of rows; the pointers bound the lost rows inside the slab.
template <class Visit>
void for_each_slab(std::uint64_t rows, std::size_t step, const std::vector<std::uint64_t>& lost, Visit&& visit) {
  const std::uint64_t* next = lost.data();
  const std::uint64_t* const end = lost.data() + lost.size();
  for (std::uint64_t start = 0; start < rows; start += step) {
    const std::size_t count = static_cast<std::size_t>(rows - start < step ? rows - start : step);
    const std::uint64_t* first = next;
    while (next != end && *next < start + count) ++next;
    visit(start, count, first, next);
  }
}

/// Moves the kept values of a slab to its front and returns their number.
template <class Value>
std::size_t drop_rows(Value* values, std::uint64_t start, std::size_t count, const std::uint64_t* first,
                      const std::uint64_t* last) {
  if (first == last) return count;
  std::size_t kept = 0;
  for (std::size_t i = 0; i < count; ++i) {
    if (first != last && *first == start + i) {
      ++first;
      continue;
    }
    values[kept++] = values[i];
  }
  return kept;
}

/// Times of the live rows of one species.
TimeSpan time_span(const Species& species, const LostRows& lost, const Hooks& hooks);

}  // namespace farsum::io::openpmd
