#pragma once
// Where the charge of a macroparticle comes from. Files state it in five ways; the first that applies is taken:
//   1 record `charge`, times `weighting` to its power where the record is that of one real particle;
//   2 record `chargeState` in elementary charges, times the number of real particles;
//   3 record `weight` that holds charge without a sign, with the sign of the species type;
//   4 record `weighting` (number of real particles), times the charge of the species type;
//   5 ReadOptions::charge_each, times the number of real particles.
#include <optional>
#include <string>
#include <vector>

#include "io/openpmd/component.hpp"
#include "io/openpmd/layout.hpp"
#include "io/read_options.hpp"

namespace farsum::io::openpmd {

/// Charge in elementary charges and mass in kg of the elementary particles that a species type can name.
struct ParticleType {
  double charge = 0, mass = 0;
};
std::optional<ParticleType> particle_type(const std::string& species_type);

class ChargeSource {
 public:
  /// Tells nothing where the file has no charge: known() is false and problem() says why.
  ChargeSource(const hdf5::InputFile& file, const SpeciesPlace& place, const ReadOptions& options,
               const std::optional<Component>& weighting);

  ChargeSource(const ChargeSource&) = delete;
  ChargeSource& operator=(const ChargeSource&) = delete;

  bool known() const noexcept { return problem_.empty(); }
  const std::string& description() const noexcept { return description_; }
  const std::string& problem() const noexcept { return problem_; }
  /// Record whose values are copied unchanged when results are written, or empty: charge must be written as read here.
  bool is_plain_record() const noexcept { return plain_record_; }
  const std::vector<const Component*>& components() const noexcept { return parts_; }

  /// Charge of the macroparticles of some rows, C. Throws item_bad_value for a negative weight.
  void read(const hdf5::InputFile& file, std::uint64_t start, std::size_t count, double* charge,
            std::vector<double>& scratch) const;

 private:
  bool use_charge_record(const hdf5::InputFile& file, const SpeciesPlace& place, const ReadOptions& options);
  bool use_charge_state(const hdf5::InputFile& file, const SpeciesPlace& place);
  bool use_weight_as_charge(const hdf5::InputFile& file, const SpeciesPlace& place, const ReadOptions& options);
  bool use_type_or_option(const hdf5::InputFile& file, const SpeciesPlace& place, const ReadOptions& options);
  void open_weight(const hdf5::InputFile& file, const SpeciesPlace& place);

  std::string description_, problem_;
  bool plain_record_ = false;
  const Component* weighting_ = nullptr;  ///< the species' own
  std::optional<Component> weight_;       ///< record `weight`: a count or a charge
  bool weight_is_charge_ = false;
  std::optional<Component> values_, sign_;
  double factor_ = 1;  ///< charge = factor * values * weight^power
  const Component* count_ = nullptr;
  double power_ = 0;
  std::vector<const Component*> parts_;
};

}  // namespace farsum::io::openpmd
