#include "io/openpmd/species.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

namespace farsum::io::openpmd {
namespace {

using hdf5::join;

constexpr std::size_t kSlabRows = 131072;
constexpr const char* kAxes[3] = {"x", "y", "z"};

}  // namespace

void report_progress(const Hooks& hooks, double done, double all) {
  if (hooks.should_stop && hooks.should_stop()) throw Error(ErrorCode::cancelled, "stopped by the caller");
  if (hooks.on_progress) hooks.on_progress(all > 0 ? std::min(1.0, done / all) : 1.0);
}

void Column::read(std::uint64_t start, std::size_t count, double* values, std::vector<double>& scratch) const {
  main->read(start, count, values);
  if (!offset) return;
  if (offset->is_constant()) {
    const double shift = offset->constant();
    if (shift == 0) return;
    for (std::size_t i = 0; i < count; ++i) values[i] += shift;
    return;
  }
  scratch.resize(count);
  offset->read(start, count, scratch.data());
  for (std::size_t i = 0; i < count; ++i) values[i] += scratch[i];
}

Species::Species(const hdf5::InputFile& file, const SpeciesPlace& place, const ReadOptions& options)
    : file_(file), place_(place), type_name_(file.text(place.group, "speciesType").value_or("")) {
  const std::string weighting = join(place.group, "weighting");
  if (file.kind(weighting) != hdf5::Kind::none) {
    weighting_.emplace(file, weighting, weighting, Quantity{dimension::kNone, true, 1.0});
  }
  const std::string status = join(place.group, "particleStatus");
  if (is_component(file, status)) status_.emplace(file, status, status, Quantity{dimension::kNone, false, 1.0});
  if (const auto type = particle_type(type_name_)) type_mass_ = type->mass;
  open_positions(options);
  open_motion();
  open_time();
  open_ids();
  charge_.emplace(file, place_, options, weighting_);
  count_rows();
  check_sizes();
}

void Species::open_vector(std::array<Column, 3>& columns, const std::string& record, const std::string& offset,
                          const Quantity& quantity) {
  const std::string group = join(place_.group, record), offset_group = join(place_.group, offset);
  const bool has_offset = !offset.empty() && file_.is_group(offset_group);
  for (int axis = 0; axis < 3; ++axis) {
    columns[axis].main.emplace(file_, group, join(group, kAxes[axis]), quantity);
    const std::string object = join(offset_group, kAxes[axis]);
    if (has_offset && file_.kind(object) != hdf5::Kind::none)
      columns[axis].offset.emplace(file_, offset_group, object, quantity);
  }
}

void Species::open_positions(const ReadOptions& options) {
  Quantity quantity{dimension::kLength, true, std::nullopt};
  if (!options.length_unit.empty()) quantity.fallback_unit = unit_factor(options.length_unit, dimension::kLength, "position");
  open_vector(position_, "position", "positionOffset", quantity);
}

void Species::open_motion() {
  const std::string mass = join(place_.group, "mass");
  if (is_component(file_, mass)) {
    mass_.emplace(file_, mass, mass, Quantity{dimension::kMass, true, std::nullopt});
    mass_rule_ = read_macro_rule(file_, mass, {false, 1.0, false});
  }
  const std::string momentum = join(place_.group, "momentum");
  if (file_.is_group(momentum)) {
    open_vector(momentum_, "momentum", "momentumOffset", {dimension::kMomentum, true, std::nullopt});
    momentum_rule_ = read_macro_rule(file_, momentum, {false, 1.0, false});
  } else if (file_.is_group(join(place_.group, "velocity"))) {
    open_vector(velocity_, "velocity", "", {dimension::kVelocity, true, std::nullopt});
  }
}

void Species::open_time() {
  const std::string time = join(place_.group, "time"), offset = join(place_.group, "timeOffset");
  if (!is_component(file_, time)) return;
  const Quantity quantity{dimension::kTime, true, 1.0};
  time_.main.emplace(file_, time, time, quantity);
  if (is_component(file_, offset)) time_.offset.emplace(file_, offset, offset, quantity);
}

void Species::open_ids() {
  const std::string object = join(place_.group, "id");
  if (!is_component(file_, object)) return;
  if (file_.kind(object) == hdf5::Kind::dataset) {
    id_.emplace(file_, object);
    if (id_->number_kind() == hdf5::NumberKind::floating) {
      throw Error(ErrorCode::item_wrong_type, "ids are floating-point numbers, whole numbers are expected", file_.path(),
                  object, {});
    }
    return;
  }
  id_constant_ = file_.number(object, "value");
  if (*id_constant_ < 0 || *id_constant_ != std::floor(*id_constant_)) {
    throw Error(ErrorCode::item_bad_value, fmt::format("id {} is no whole number from 0 on", *id_constant_), file_.path(),
                object, {});
  }
}

void Species::count_rows() {
  std::optional<std::uint64_t> declared;
  for (const Column& column : position_) {
    const Component& component = *column.main;
    if (!component.is_constant()) {
      rows_ = *component.size();
      return;
    }
    if (component.size()) declared = std::max(declared.value_or(0), *component.size());
  }
  if (!declared) {
    throw Error(ErrorCode::item_missing, "all components are constants without 'shape', so the number of particles is unknown",
                file_.path(), join(place_.group, "position"), {});
  }
  rows_ = *declared;
}

void Species::check_size(const Component& component) {
  if (!component.size() || *component.size() == rows_) return;
  if (component.is_constant() && *component.size() == 1) {
    notes_.push_back(fmt::format("{}: the constant has shape 1; it is taken for all {} rows.", component.object(), rows_));
    return;
  }
  throw Error(ErrorCode::item_wrong_size, fmt::format("has {} rows, the positions have {}", *component.size(), rows_),
              file_.path(), component.object(), {});
}

void Species::check_sizes() {
  for (const auto* columns : {&position_, &momentum_, &velocity_}) {
    for (const Column& column : *columns) {
      if (column.main) check_size(*column.main);
      if (column.offset) check_size(*column.offset);
    }
  }
  if (time_.main) check_size(*time_.main);
  if (time_.offset) check_size(*time_.offset);
  for (const auto* component : {&mass_, &weighting_, &status_})
    if (*component) check_size(**component);
  for (const Component* component : charge_->components()) check_size(*component);
  if (id_ && id_->size() != rows_) {
    throw Error(ErrorCode::item_wrong_size, fmt::format("has {} rows, the positions have {}", id_->size(), rows_), file_.path(),
                id_->object(), {});
  }
}

std::size_t Species::slab_rows() const {
  for (const Column& column : position_)
    if (const hdf5::Dataset* data = column.main->data()) return data->slab_size(kSlabRows);
  return kSlabRows;
}

void Species::read_position(int axis, std::uint64_t start, std::size_t count, double* values, Slab& slab) const {
  position_[static_cast<std::size_t>(axis)].read(start, count, values, slab.scratch);
}

void Species::read_time(std::uint64_t start, std::size_t count, double* values, Slab& slab) const {
  time_.read(start, count, values, slab.scratch);
}

void Species::divide_by_weight(double* values, const MacroRule& rule, Slab& slab) const {
  if (!rule.macro_weighted || rule.weighting_power == 0 || !weighting_) return;
  slab.scratch.resize(slab.count);
  weighting_->read(slab.start, slab.count, slab.scratch.data());
  for (std::size_t i = 0; i < slab.count; ++i) {
    const double weight = std::pow(slab.scratch[i], rule.weighting_power);
    if (weight > 0) values[i] /= weight;
  }
}

void Species::read_motion(Slab& slab) const {
  slab.mass.assign(slab.count, type_mass_);
  if (mass_) {
    mass_->read(slab.start, slab.count, slab.mass.data());
    divide_by_weight(slab.mass.data(), mass_rule_, slab);
  }
  const bool by_velocity = velocity_[0].present();
  for (std::size_t axis = 0; axis < 3; ++axis) {
    slab.vector[axis].resize(slab.count);
    (by_velocity ? velocity_ : momentum_)[axis].read(slab.start, slab.count, slab.vector[axis].data(), slab.scratch);
    if (!by_velocity) divide_by_weight(slab.vector[axis].data(), momentum_rule_, slab);
  }
  if (!by_velocity) return;
  for (std::size_t i = 0; i < slab.count; ++i) {
    const double beta = std::hypot(slab.vector[0][i], slab.vector[1][i], slab.vector[2][i]) / kSpeedOfLight;
    if (!(beta < 1)) {
      throw Error(ErrorCode::item_bad_value, fmt::format("row {} is not slower than light", slab.start + i), file_.path(),
                  join(place_.group, "velocity"), {});
    }
    const double gamma_mass = (slab.mass[i] > 0 ? slab.mass[i] : 1.0) / std::sqrt((1 - beta) * (1 + beta));
    for (auto& values : slab.vector) values[i] *= gamma_mass;
  }
}

void Species::read_beta_gamma(Slab& slab) const {
  read_motion(slab);
  for (std::size_t i = 0; i < slab.count; ++i) {
    const double mass = slab.mass[i] > 0 || !velocity_[0].present() ? slab.mass[i] : 1.0;
    const double factor = mass > 0 ? 1 / (mass * kSpeedOfLight) : NAN;
    for (auto& values : slab.vector) values[i] *= factor;
    if (!std::isfinite(slab.vector[0][i] + slab.vector[1][i] + slab.vector[2][i])) {
      throw Error(ErrorCode::item_bad_value, fmt::format("momentum or mass of row {} cannot be used", slab.start + i),
                  file_.path(), place_.group, {});
    }
  }
}

LostRows Species::lost_rows(const Hooks& hooks) const {
  LostRows lost;
  if (!status_) return lost;
  if (status_->is_constant()) {
    lost.all = status_->constant() != 1.0 && rows_ > 0;
    return lost;
  }
  std::vector<double> values;
  const std::size_t step = status_->data()->slab_size(kSlabRows);
  for (std::uint64_t start = 0; start < rows_; start += step) {
    const std::size_t count = static_cast<std::size_t>(std::min<std::uint64_t>(step, rows_ - start));
    values.resize(count);
    status_->read(start, count, values.data());
    for (std::size_t i = 0; i < count; ++i)
      if (values[i] != 1.0) lost.rows.push_back(start + i);
    report_progress(hooks, 0, 1);
  }
  lost.all = rows_ > 0 && lost.rows.size() == rows_;
  return lost;
}

}  // namespace farsum::io::openpmd
