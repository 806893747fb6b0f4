#pragma once
// One component of a particle record: a data set, or a group whose attribute `value` holds for every row. Values come out in
// SI.
#include <cstdint>
#include <optional>
#include <string>

#include "io/hdf5/dataset.hpp"
#include "io/units.hpp"

namespace farsum::io::openpmd {

/// What a component is expected to be.
struct Quantity {
  Dimension dimension{};
  bool check_dimension = true;
  /// Used where neither component nor record has unitSI; without it a missing unitSI is an error.
  std::optional<double> fallback_unit;
};

class Component {
 public:
  /// `record` is the group that holds the component, or the component itself for a scalar record.
  Component(const hdf5::InputFile& file, const std::string& record, const std::string& object, const Quantity& quantity);

  const std::string& object() const noexcept { return object_; }
  bool is_constant() const noexcept { return !data_; }
  double unit() const noexcept { return unit_; }
  double constant() const noexcept { return value_ * unit_; }  ///< SI; only where is_constant()
  /// Rows, or empty for a constant without shape.
  std::optional<std::uint64_t> size() const noexcept { return size_; }
  const hdf5::Dataset* data() const noexcept { return data_ ? &*data_ : nullptr; }
  /// Dimension as stated on component or record, if any.
  const std::optional<Dimension>& stated_dimension() const noexcept { return stated_; }

  /// SI values of the rows [start, start + count).
  void read(std::uint64_t start, std::size_t count, double* values) const;

 private:
  void read_constant(const hdf5::InputFile& file);
  void read_dimension(const hdf5::InputFile& file, const std::string& record, const Quantity& quantity);
  void read_unit(const hdf5::InputFile& file, const std::string& record, const Quantity& quantity);

  std::string object_;
  std::optional<hdf5::Dataset> data_;
  double value_ = 0, unit_ = 1;
  std::optional<std::uint64_t> size_;
  std::optional<Dimension> stated_;
};

/// True if `object` is a data set or a group with the attribute `value`.
bool is_component(const hdf5::InputFile& file, const std::string& object);

/// macroWeighted and weightingPower of a record, or the usual ones of the standard for its name.
struct MacroRule {
  bool macro_weighted = false;
  double weighting_power = 0;
  bool stated = false;
};
MacroRule read_macro_rule(const hdf5::InputFile& file, const std::string& record, MacroRule usual);

}  // namespace farsum::io::openpmd
