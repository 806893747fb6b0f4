#include "io/result_writer.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <memory>
#include <optional>

#include "io/openpmd/charge.hpp"
#include "io/openpmd/copy_records.hpp"
#include "io/openpmd/layout.hpp"
#include "io/openpmd/particle_output.hpp"

namespace farsum::io {
namespace {

using openpmd::ColumnFill;
using openpmd::RecordStyle;
using openpmd::SpeciesOutput;

constexpr const char* kAxes[3] = {"x", "y", "z"};
const RecordStyle kPositionStyle{dimension::kLength, false, 0, nullptr};
const RecordStyle kMomentumStyle{dimension::kMomentum, false, 1, nullptr};
const RecordStyle kChargeOfOne{dimension::kCharge, false, 1, nullptr};
const RecordStyle kChargeOfAll{dimension::kCharge, true, 1, nullptr};
const RecordStyle kMassStyle{dimension::kMass, false, 1, nullptr};
const RecordStyle kWeightingStyle{dimension::kNone, true, 1, nullptr};
const RecordStyle kIdStyle{dimension::kNone, false, 0, nullptr};
const RecordStyle kPotentialStyle{dimension::kPotential, false, 0,
                                  "Coulomb potential at the particle of all other charges; zero at infinity"};
const RecordStyle kFieldStyle{dimension::kField, false, 0,
                              "Electric field at the particle of all other charges; no external field"};
const RecordStyle kForceStyle{dimension::kForce, true, 1,
                              "Coulomb force on the whole macroparticle: its charge times electricField"};
const RecordStyle kEnergyStyle{dimension::kEnergy, true, 1,
                               "Half of charge times potential, so that the sum over particles is the total energy"};

/// Values that are in memory already.
ColumnFill view(const double* values) {
  return [values](std::size_t start, std::size_t, double*) { return values + start; };
}

/// Creates the temporary, lets `write` fill it, and puts it in place.
template <class Write>
void write_atomically(const std::string& path, const WriteOptions& options, std::uint64_t bytes, Write&& write) {
  const std::string target = check_output_target(path, options.overwrite, bytes, options.inputs);
  OutputFile file(target, options.overwrite, options.on_temporary);
  try {
    const hdf5::Session session;
    hdf5::Output output(file.temporary());
    write(output);
    output.close();
  } catch (const Error& error) {
    // Messages speak of the file that the user asked for, not of the temporary.
    throw Error(error.code(), error.message(), error.file() == file.temporary() ? path : error.file(), error.item(),
                error.remedy());
  }
  file.commit();
}

void write_places(SpeciesOutput& output, const double* x, const double* y, const double* z) {
  const double* places[3] = {x, y, z};
  output.vector_group("position", kPositionStyle);
  for (int axis = 0; axis < 3; ++axis) output.component(std::string("position/") + kAxes[axis], view(places[axis]));
  output.vector_group("positionOffset", kPositionStyle);
  for (const char* axis : kAxes) output.component_constant(std::string("positionOffset/") + axis, 0.0);
  output.patches(x, y, z);
}

/// One output column: factor(row) times an engine sum; the result must stay inside the double range.
template <class Formula>
ColumnFill computed(const char* what, const SpeciesRange& range, Formula formula) {
  return [what, &range, formula](std::size_t start, std::size_t count, double* buffer) {
    double probe = 0;
    for (std::size_t i = 0; i < count; ++i) probe += (buffer[i] = formula(range.begin + start + i)) * 0.0;
    for (std::size_t i = 0; probe != 0 && i < count; ++i) {
      if (std::isfinite(buffer[i])) continue;
      throw Error(ErrorCode::range_exceeded, fmt::format("{} of row {} is outside the double range", what, start + i), {},
                  "species " + range.name, "use units in which charges and lengths are nearer to one");
    }
    return static_cast<const double*>(buffer);
  };
}

void write_results(SpeciesOutput& output, const SpeciesRange& range, const ParticleSet& set, const ResultColumns& results) {
  const double k = results.coulomb_constant;
  const double* charge = set.charge.data();
  const double* potential = results.potential;
  const double* field[3] = {results.field_x, results.field_y, results.field_z};
  const bool has_field = field[0] && field[1] && field[2];
  if (potential && results.write_potential) {
    output.scalar("potential", kPotentialStyle,
                  computed("the potential", range, [=](std::size_t i) { return k * potential[i]; }));
  }
  if (potential && results.write_energy) {
    output.scalar("potentialEnergy", kEnergyStyle,
                  computed("the energy", range, [=](std::size_t i) { return 0.5 * charge[i] * (k * potential[i]); }));
  }
  if (has_field && results.write_field) {
    output.vector_group("electricField", kFieldStyle);
    for (int axis = 0; axis < 3; ++axis) {
      output.component(std::string("electricField/") + kAxes[axis],
                       computed("the field", range, [=, e = field[axis]](std::size_t i) { return k * e[i]; }));
    }
  }
  if (has_field && results.write_force) {
    output.vector_group("force", kForceStyle);
    for (int axis = 0; axis < 3; ++axis) {
      output.component(std::string("force/") + kAxes[axis],
                       computed("the force", range, [=, e = field[axis]](std::size_t i) { return charge[i] * (k * e[i]); }));
    }
  }
}

void write_ids(SpeciesOutput& output, const SpeciesRange& range, const ParticleSet& set) {
  output.integers<std::uint64_t>("id", &kIdStyle, [&](std::size_t start, std::size_t count, std::uint64_t* values) {
    for (std::size_t i = 0; i < count; ++i) values[i] = set.id_of(range.begin + start + i);
  });
}

/// Columns that only a set from a text file holds in memory.
void write_kept_columns(SpeciesOutput& output, const SpeciesRange& range, const ParticleSet& set) {
  if (!set.weighting.empty()) output.scalar("weighting", kWeightingStyle, view(set.weighting.data() + range.begin));
  if (!set.motion.mass.empty()) output.scalar("mass", kMassStyle, view(set.motion.mass.data() + range.begin));
  if (set.motion.momentum_x.empty()) return;
  output.vector_group("momentum", kMomentumStyle);
  output.component("momentum/x", view(set.motion.momentum_x.data() + range.begin));
  output.component("momentum/y", view(set.motion.momentum_y.data() + range.begin));
  output.component("momentum/z", view(set.motion.momentum_z.data() + range.begin));
}

/// The input file, where the set came from one that records can be copied from.
class InputRecords {
 public:
  explicit InputRecords(const ParticleSet& set) : set_(set) {
    if (!set.format.starts_with("openPMD")) return;
    file_.emplace(set.file, set.allow_external);
    const openpmd::Layout layout = openpmd::find_layout(*file_);
    group_ = openpmd::iteration_group(layout, set.iteration);
    places_ = openpmd::find_species(*file_, layout, set.iteration);
  }

  openpmd::IterationTime time() const {
    if (!file_) return {};
    return {file_->number(group_, "time").value_or(0.0), file_->number(group_, "dt").value_or(0.0),
            file_->number(group_, "timeUnitSI").value_or(1.0)};
  }

  /// Copies what the input holds beside places and ids; false if the charge was not among it.
  bool copy(SpeciesOutput& output, const SpeciesRange& range) const {
    if (!file_) return false;
    const auto place =
        std::find_if(places_.begin(), places_.end(), [&](const auto& entry) { return entry.name == range.name; });
    if (place == places_.end()) {
      throw Error(ErrorCode::file_damaged, fmt::format("species '{}' is gone: the file was changed meanwhile", range.name),
                  set_.file, {}, {});
    }
    const auto records = openpmd::find_extra_records(*file_, *place, range.stored, nullptr);
    openpmd::copy_records(*file_, records, range, output);
    const auto holds = [&records](const char* name) {
      return std::any_of(records.begin(), records.end(), [name](const auto& record) { return record.name == name; });
    };
    // The species type is no part of version 1.1, so what it says about the mass is written out.
    const auto type = openpmd::particle_type(file_->text(place->group, "speciesType").value_or(""));
    if (type && !holds("mass")) output.scalar_constant("mass", kMassStyle, type->mass);
    return holds("charge");
  }

 private:
  const ParticleSet& set_;
  std::optional<hdf5::InputFile> file_;
  std::string group_;
  std::vector<openpmd::SpeciesPlace> places_;
};

bool is_wanted(const std::string& name, const std::vector<std::string>& only) {
  return only.empty() || std::find(only.begin(), only.end(), name) != only.end();
}

/// Iteration name without leading zeros, as the standard wants it; 0 where the input has none.
std::string iteration_name(const std::string& name) {
  const std::size_t first = name.find_first_not_of('0');
  return first == std::string::npos ? "0" : name.substr(first);
}

void write_species(const hdf5::Output& output, const InputRecords& input, const SpeciesRange& range, const ParticleSet& set,
                   const ResultColumns& results, const std::string& group, const Hooks& hooks) {
  SpeciesOutput species(output, group + "/" + openpmd::word(range.name), range.count(), hooks);
  write_places(species, set.x.data() + range.begin, set.y.data() + range.begin, set.z.data() + range.begin);
  write_ids(species, range, set);
  const bool has_charge = input.copy(species, range);
  if (!has_charge) species.scalar("charge", kChargeOfAll, view(set.charge.data() + range.begin));
  if (!set.format.starts_with("openPMD")) write_kept_columns(species, range, set);
  write_results(species, range, set, results);
}

void write_momentum(SpeciesOutput& output, const SpeciesColumns& species) {
  const double* momentum[3] = {species.momentum_x, species.momentum_y, species.momentum_z};
  if (!momentum[0] || !momentum[1] || !momentum[2]) return;
  output.vector_group("momentum", kMomentumStyle);
  for (int axis = 0; axis < 3; ++axis) output.component(std::string("momentum/") + kAxes[axis], view(momentum[axis]));
}

}  // namespace

void write_result(const std::string& path, const ParticleSet& particles, const ResultColumns& results, const RunAttributes& run,
                  const WriteOptions& options, const std::vector<std::string>& only_species) {
  WriteOptions checked = options;
  checked.inputs.push_back(particles.file);
  write_atomically(path, checked, predict_result_bytes(particles), [&](const hdf5::Output& output) {
    const InputRecords input(particles);
    const std::string iteration = iteration_name(particles.iteration);
    openpmd::write_frame(output, iteration, input.time(), options);
    std::size_t done = 0;
    for (const SpeciesRange& range : particles.species) {
      if (is_wanted(range.name, only_species)) {
        write_species(output, input, range, particles, results, openpmd::particles_group(iteration), options.hooks);
      }
      done += range.count();
      if (options.hooks.on_progress) {
        options.hooks.on_progress(particles.size() ? static_cast<double>(done) / static_cast<double>(particles.size()) : 1.0);
      }
    }
    openpmd::write_run(output, run);
  });
}

std::uint64_t predict_result_bytes(std::uint64_t rows) {
  return rows * 160 + (1u << 20);
}
std::uint64_t predict_result_bytes(const ParticleSet& particles) {
  return predict_result_bytes(std::uint64_t{particles.size()});
}

void write_particles(const std::string& path, const std::vector<SpeciesColumns>& species, const RunAttributes& run,
                     const WriteOptions& options) {
  std::uint64_t rows = 0;
  for (const SpeciesColumns& columns : species) rows += columns.count;
  write_atomically(path, options, rows * 72 + (1u << 20), [&](const hdf5::Output& output) {
    openpmd::write_frame(output, "0", {}, options);
    for (const SpeciesColumns& columns : species) {
      SpeciesOutput group(output, openpmd::particles_group("0") + "/" + openpmd::word(columns.name), columns.count,
                          options.hooks);
      write_places(group, columns.x, columns.y, columns.z);
      group.integers<std::uint64_t>("id", &kIdStyle, [&](std::size_t start, std::size_t count, std::uint64_t* values) {
        for (std::size_t i = 0; i < count; ++i) values[i] = columns.first_id + start + i;
      });
      write_momentum(group, columns);
      group.scalar_constant("charge", kChargeOfOne, columns.charge);
      if (columns.mass > 0) group.scalar_constant("mass", kMassStyle, columns.mass);
      group.scalar_constant("weighting", kWeightingStyle, columns.weighting);
    }
    openpmd::write_run(output, run);
  });
}

}  // namespace farsum::io
