#pragma once
// One species of an openPMD file: its columns in SI, ready to be read by slabs. Opening it checks types, units, dimensions and
// equal lengths of everything that will be read.
#include <array>
#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "io/openpmd/charge.hpp"

namespace farsum::io::openpmd {

/// A component and the offset to add to it, each with its own unit.
struct Column {
  std::optional<Component> main, offset;
  bool present() const noexcept { return main.has_value(); }
  void read(std::uint64_t start, std::size_t count, double* values, std::vector<double>& scratch) const;
};

/// Buffers of one slab, reused.
struct Slab {
  std::uint64_t start = 0;
  std::size_t count = 0;
  std::vector<double> scratch, mass;
  std::array<std::vector<double>, 3> vector;
};

/// Lost particles of a species, ascending; `all` also where the status is one constant and `rows` stays empty.
struct LostRows {
  std::vector<std::uint64_t> rows;
  bool all = false;
  std::uint64_t count(std::uint64_t stored) const noexcept { return all ? stored : rows.size(); }
};

class Species {
 public:
  Species(const hdf5::InputFile& file, const SpeciesPlace& place, const ReadOptions& options);
  Species(const Species&) = delete;
  Species& operator=(const Species&) = delete;

  const SpeciesPlace& place() const noexcept { return place_; }
  const std::string& type_name() const noexcept { return type_name_; }
  std::uint64_t rows() const noexcept { return rows_; }
  const ChargeSource& charge() const noexcept { return *charge_; }
  bool has_weighting() const noexcept { return weighting_.has_value(); }
  bool has_momentum() const noexcept { return momentum_[0].present() || velocity_[0].present(); }
  bool has_mass() const noexcept { return mass_.has_value() || type_mass_ > 0; }
  bool has_motion() const noexcept { return velocity_[0].present() || (momentum_[0].present() && has_mass()); }
  bool has_time() const noexcept { return time_.present(); }
  const std::optional<hdf5::Dataset>& id_data() const noexcept { return id_; }
  std::optional<double> id_constant() const noexcept { return id_constant_; }
  const std::vector<std::string>& notes() const noexcept { return notes_; }

  /// Rows per slab: near 131072, a whole number of chunks of the first data set.
  std::size_t slab_rows() const;
  void read_position(int axis, std::uint64_t start, std::size_t count, double* values, Slab& slab) const;
  void read_time(std::uint64_t start, std::size_t count, double* values, Slab& slab) const;
  /// u = p / (m c) of one real particle into slab.vector, for the slab's rows. Needs has_motion().
  void read_beta_gamma(Slab& slab) const;
  /// Momentum (kg m/s) of one real particle into slab.vector and mass (kg; 0 where unknown) into slab.mass. Needs
  /// has_momentum().
  void read_motion(Slab& slab) const;
  /// Rows with a particleStatus other than 1.
  LostRows lost_rows(const Hooks& hooks) const;
  bool has_status() const noexcept { return status_.has_value(); }

 private:
  void open_positions(const ReadOptions& options);
  void open_motion();
  void open_time();
  void open_ids();
  void open_vector(std::array<Column, 3>& columns, const std::string& record, const std::string& offset,
                   const Quantity& quantity);
  void count_rows();
  void check_size(const Component& component);
  void check_sizes();
  void divide_by_weight(double* values, const MacroRule& rule, Slab& slab) const;

  const hdf5::InputFile& file_;
  SpeciesPlace place_;
  std::string type_name_;
  std::uint64_t rows_ = 0;
  std::array<Column, 3> position_, momentum_, velocity_;
  Column time_;
  std::optional<Component> mass_, weighting_, status_;
  MacroRule momentum_rule_, mass_rule_;
  double type_mass_ = 0;
  std::optional<hdf5::Dataset> id_;
  std::optional<double> id_constant_;
  std::optional<ChargeSource> charge_;
  std::vector<std::string> notes_;
};

/// Calls the hooks after `done` of `all` rows; throws cancelled when the caller wants to stop.
void report_progress(const Hooks& hooks, double done, double all);

}  // namespace farsum::io::openpmd
