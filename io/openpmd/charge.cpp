#include "io/openpmd/charge.hpp"

#include <fmt/format.h>

#include <cmath>

namespace farsum::io::openpmd {
namespace {

using hdf5::join;

const Component* count_of(const std::optional<Component>& weight, bool weight_is_charge, const Component* weighting) {
  if (weighting) return weighting;
  return weight && !weight_is_charge ? &*weight : nullptr;
}

}  // namespace

std::optional<ParticleType> particle_type(const std::string& species_type) {
  if (species_type == "electron") return ParticleType{-1, kElectronMass};
  if (species_type == "positron") return ParticleType{1, kElectronMass};
  if (species_type == "proton") return ParticleType{1, kProtonMass};
  if (species_type == "anti-proton" || species_type == "antiproton") return ParticleType{-1, kProtonMass};
  if (species_type == "muon") return ParticleType{-1, kMuonMass};
  if (species_type == "antimuon" || species_type == "anti-muon") return ParticleType{1, kMuonMass};
  return std::nullopt;
}

ChargeSource::ChargeSource(const hdf5::InputFile& file, const SpeciesPlace& place, const ReadOptions& options,
                           const std::optional<Component>& weighting)
    : weighting_(weighting ? &*weighting : nullptr) {
  open_weight(file, place);
  const bool found = use_charge_record(file, place, options) || use_charge_state(file, place) ||
                     use_weight_as_charge(file, place, options) || use_type_or_option(file, place, options);
  if (!found && problem_.empty())
    problem_ = "no record 'charge', 'chargeState' or 'weight' and no known speciesType tells the charge";
  if (values_) parts_.push_back(&*values_);
  if (sign_) parts_.push_back(&*sign_);
  if (weight_ && (!values_ || values_->object() != weight_->object())) parts_.push_back(&*weight_);
}

void ChargeSource::open_weight(const hdf5::InputFile& file, const SpeciesPlace& place) {
  const std::string object = join(place.group, "weight");
  if (!is_component(file, object)) return;
  Quantity quantity;
  quantity.check_dimension = false;
  quantity.fallback_unit = 1.0;
  weight_.emplace(file, object, object, quantity);
  const auto& stated = weight_->stated_dimension();
  const bool dimension_of_charge = stated && same_dimension(*stated, dimension::kCharge);
  if (stated && !dimension_of_charge && !same_dimension(*stated, dimension::kNone)) {
    throw Error(ErrorCode::unit_wrong_dimension,
                fmt::format("has the dimension {}, expected is a charge or a number", describe(*stated)), file.path(), object,
                {});
  }
  weight_is_charge_ = dimension_of_charge || file.has_attribute(place.group, "chargeUnitSI");
}

bool ChargeSource::use_charge_record(const hdf5::InputFile& file, const SpeciesPlace& place, const ReadOptions& options) {
  const std::string object = join(place.group, "charge");
  if (file.kind(object) == hdf5::Kind::none) return false;
  Quantity quantity{dimension::kCharge, true, std::nullopt};
  if (!options.charge_unit.empty()) quantity.fallback_unit = unit_factor(options.charge_unit, dimension::kCharge, "charge");
  values_.emplace(file, object, object, quantity);
  const MacroRule rule = read_macro_rule(file, object, {false, 1.0, false});
  if (!rule.macro_weighted && rule.weighting_power != 0 && weighting_) {
    count_ = weighting_;
    power_ = rule.weighting_power;
  }
  plain_record_ = true;
  description_ = count_ ? "charge x weighting" : "charge";
  return true;
}

bool ChargeSource::use_charge_state(const hdf5::InputFile& file, const SpeciesPlace& place) {
  const std::string object = join(place.group, "chargeState");
  if (!is_component(file, object)) return false;
  values_.emplace(file, object, object, Quantity{dimension::kNone, true, 1.0});
  factor_ = kElementaryCharge;
  count_ = count_of(weight_, weight_is_charge_, weighting_);
  power_ = 1;
  if (!count_ && weight_) {  // the weight is the size of the charge; the state only gives its sign, row by row
    sign_ = std::exchange(values_, std::nullopt);
    values_ = std::exchange(weight_, std::nullopt);
    factor_ = 1;
    description_ = "weight as charge, sign of chargeState";
    return true;
  }
  description_ = count_ ? "chargeState x e x weight" : "chargeState x e";
  return true;
}

bool ChargeSource::use_weight_as_charge(const hdf5::InputFile& file, const SpeciesPlace& place, const ReadOptions& options) {
  if (!weight_ || !weight_is_charge_) return false;
  const std::string name = file.text(place.group, "speciesType").value_or("");
  const auto type = particle_type(name);
  double sign = type ? type->charge : 0.0;
  if (sign == 0 && options.charge_each) sign = *options.charge_each < 0 ? -1.0 : 1.0;
  if (sign == 0) {
    problem_ = fmt::format("'weight' holds charge without a sign, and the species type '{}' does not tell it", name);
    return false;
  }
  values_.emplace(*std::exchange(weight_, std::nullopt));
  factor_ = sign;
  count_ = nullptr;
  description_ = fmt::format("weight as charge, {}", sign < 0 ? "negative" : "positive");
  return true;
}

bool ChargeSource::use_type_or_option(const hdf5::InputFile& file, const SpeciesPlace& place, const ReadOptions& options) {
  if (!problem_.empty()) return false;
  count_ = count_of(weight_, weight_is_charge_, weighting_);
  power_ = 1;
  const std::string name = file.text(place.group, "speciesType").value_or("");
  if (const auto type = particle_type(name); type && count_) {
    factor_ = type->charge * kElementaryCharge;
    description_ = fmt::format("weight x charge of {}", name);
    return true;
  }
  if (!options.charge_each) return false;
  factor_ = *options.charge_each;
  description_ = count_ ? "charge given by the user x weight" : "charge given by the user";
  return true;
}

void ChargeSource::read(const hdf5::InputFile& file, std::uint64_t start, std::size_t count, double* charge,
                        std::vector<double>& scratch) const {
  if (values_) {
    values_->read(start, count, charge);
    if (factor_ != 1)
      for (std::size_t i = 0; i < count; ++i) charge[i] *= factor_;
  } else {
    std::fill_n(charge, count, factor_);
  }
  scratch.resize(count);
  if (sign_) {
    sign_->read(start, count, scratch.data());
    for (std::size_t i = 0; i < count; ++i) charge[i] *= (scratch[i] > 0) - (scratch[i] < 0);
  }
  if (!count_) return;
  count_->read(start, count, scratch.data());
  for (std::size_t i = 0; i < count; ++i) {
    if (scratch[i] < 0) {
      throw Error(ErrorCode::item_bad_value, fmt::format("row {} is {}; a weight is never negative", start + i, scratch[i]),
                  file.path(), count_->object(), {});
    }
    charge[i] *= power_ == 1 ? scratch[i] : std::pow(scratch[i], power_);
  }
}

}  // namespace farsum::io::openpmd
