#include "io/openpmd/component.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

namespace farsum::io::openpmd {

bool is_component(const hdf5::InputFile& file, const std::string& object) {
  const hdf5::Kind kind = file.kind(object);
  return kind == hdf5::Kind::dataset || (kind == hdf5::Kind::group && file.has_attribute(object, "value"));
}

Component::Component(const hdf5::InputFile& file, const std::string& record, const std::string& object,
                     const Quantity& quantity)
    : object_(object) {
  const hdf5::Kind kind = file.kind(object);
  if (kind == hdf5::Kind::none) throw Error(ErrorCode::item_missing, "is not in the file", file.path(), object, {});
  if (kind == hdf5::Kind::dataset) {
    data_.emplace(file, object);
    size_ = data_->size();
  } else {
    read_constant(file);
  }
  read_dimension(file, record, quantity);
  read_unit(file, record, quantity);
}

void Component::read_constant(const hdf5::InputFile& file) {
  if (!file.is_group(object_))
    throw Error(ErrorCode::item_wrong_type, "is neither data set nor group", file.path(), object_, {});
  const auto value = file.number(object_, "value");
  if (!value) {
    throw Error(ErrorCode::item_missing, "is a group without the attribute 'value', so it holds no numbers", file.path(),
                object_, {});
  }
  value_ = *value;
  const auto shape = file.number(object_, "shape");
  if (!shape) return;
  if (*shape < 0 || *shape > 9007199254740992.0 || *shape != std::floor(*shape)) {
    throw Error(ErrorCode::item_bad_value, fmt::format("shape {} is no count", *shape), file.path(), object_ + "@shape", {});
  }
  size_ = static_cast<std::uint64_t>(*shape);
}

void Component::read_dimension(const hdf5::InputFile& file, const std::string& record, const Quantity& quantity) {
  std::string owner = object_;
  auto exponents = file.numbers(owner, "unitDimension");
  if (!exponents && record != object_) exponents = file.numbers(owner = record, "unitDimension");
  if (!exponents) return;
  if (exponents->size() != 7) {
    throw Error(ErrorCode::item_wrong_size, fmt::format("has {} entries, 7 are expected", exponents->size()), file.path(),
                owner + "@unitDimension", {});
  }
  stated_.emplace();
  std::copy(exponents->begin(), exponents->end(), stated_->begin());
  if (quantity.check_dimension && !same_dimension(*stated_, quantity.dimension)) {
    throw Error(ErrorCode::unit_wrong_dimension,
                fmt::format("has the dimension {}, expected is {}", describe(*stated_), describe(quantity.dimension)),
                file.path(), owner + "@unitDimension", {});
  }
}

void Component::read_unit(const hdf5::InputFile& file, const std::string& record, const Quantity& quantity) {
  auto unit = file.number(object_, "unitSI");
  if (!unit && record != object_) unit = file.number(record, "unitSI");
  if (!unit) unit = quantity.fallback_unit;
  if (!unit) {
    throw Error(ErrorCode::unit_unknown, "has no unitSI, so its numbers have no unit", file.path(), object_,
                "state the unit with --length-unit or --charge-unit where it is a place or a charge");
  }
  if (!std::isfinite(*unit) || *unit <= 0) {
    throw Error(ErrorCode::item_bad_value, fmt::format("unitSI is {}, a positive number is expected", *unit), file.path(),
                object_ + "@unitSI", {});
  }
  unit_ = *unit;
}

void Component::read(std::uint64_t start, std::size_t count, double* values) const {
  if (!data_) {
    std::fill_n(values, count, constant());
    return;
  }
  data_->read(start, count, values);
  if (unit_ == 1.0) return;
  for (std::size_t i = 0; i < count; ++i) values[i] *= unit_;
}

MacroRule read_macro_rule(const hdf5::InputFile& file, const std::string& record, MacroRule usual) {
  const auto weighted = file.number(record, "macroWeighted");
  const auto power = file.number(record, "weightingPower");
  if (weighted) usual.macro_weighted = *weighted != 0;
  if (power) usual.weighting_power = *power;
  usual.stated = weighted && power;
  return usual;
}

}  // namespace farsum::io::openpmd
