#pragma once
// Building blocks of an openPMD 1.1.0 file: root, iteration, records, patches. Numbers are SI, so every unitSI is 1.
#include <cstdint>
#include <functional>
#include <string>
#include <vector>

#include "io/hdf5/output.hpp"
#include "io/run_attributes.hpp"
#include "io/units.hpp"
#include "io/write_options.hpp"

namespace farsum::io::openpmd {

/// Attributes of a record.
struct RecordStyle {
  Dimension dimension{};
  bool macro_weighted = false;
  double weighting_power = 0;
  const char* comment = nullptr;
};

/// Root attributes and the groups down to the particles of one iteration.
struct IterationTime {
  double time = 0, dt = 0, unit = 1;
};
void write_frame(const hdf5::Output& output, const std::string& iteration, const IterationTime& time,
                 const WriteOptions& options);
/// The root group `run`; nothing when there are no attributes.
void write_run(const hdf5::Output& output, const RunAttributes& run);
std::string particles_group(const std::string& iteration);

/// Gives the next rows [start, start + count) of a column. Returns the values, in the caller's memory or in `buffer`.
using ColumnFill = std::function<const double*(std::size_t start, std::size_t count, double* buffer)>;

class SpeciesOutput {
 public:
  SpeciesOutput(const hdf5::Output& output, std::string group, std::size_t rows, const Hooks& hooks);

  void vector_group(const std::string& record, const RecordStyle& style);
  /// Data sets; for a component of a vector `component` is "record/x" and the style that of the vector's group.
  void scalar(const std::string& record, const RecordStyle& style, const ColumnFill& fill);
  void component(const std::string& path, const ColumnFill& fill);
  /// Constants, stored as a group with `value` and `shape`.
  void scalar_constant(const std::string& record, const RecordStyle& style, double value);
  void component_constant(const std::string& path, double value);
  /// Integers (std::int64_t or std::uint64_t), filled slab by slab. `style` is null for a component of a vector.
  template <class Integer>
  void integers(const std::string& path, const RecordStyle* style,
                const std::function<void(std::size_t start, std::size_t count, Integer* values)>& fill);
  /// One patch that encloses all places.
  void patches(const double* x, const double* y, const double* z);

 private:
  std::string path(const std::string& name) const { return group_ + "/" + name; }
  void write_column(hdf5::ColumnOutput& column, const ColumnFill& fill);
  void between_slabs() const;

  const hdf5::Output& output_;
  std::string group_;
  std::size_t rows_;
  const Hooks& hooks_;
  std::vector<double> buffer_;
};

}  // namespace farsum::io::openpmd
