#include "io/openpmd/record_rules.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <cmath>
#include <optional>

#include "io/openpmd/component.hpp"
#include "io/openpmd/known_records.hpp"

namespace farsum::io::openpmd {
namespace {

using hdf5::join;

constexpr std::size_t kRows = 131072;

class SpeciesRules {
 public:
  SpeciesRules(const hdf5::InputFile& file, const Layout& layout, const SpeciesPlace& place, Findings& findings)
      : file_(file), layout_(layout), place_(place), findings_(findings) {}

  void check() {
    check_name(place_.name, place_.group);
    for (const char* needed : {"position", "positionOffset"}) {
      if (file_.kind(join(place_.group, needed)) == hdf5::Kind::none) {
        findings_.error("required_record", place_.group, fmt::format("the required record '{}' is missing", needed));
      }
    }
    find_rows();
    for (const std::string& name : file_.children(place_.group)) {
      const std::string object = join(place_.group, name);
      if (name == "particlePatches") {
        findings_.guarded(object, [&] { check_patches(object); });
      } else {
        findings_.guarded(object, [&] { check_record(name, object); });
      }
    }
    if (file_.kind(join(place_.group, "particlePatches")) == hdf5::Kind::none) {
      findings_.warning("patches", place_.group, "the recommended group 'particlePatches' is missing");
    }
    findings_.guarded(join(place_.group, "id"), [&] { check_ids(); });
  }

 private:
  void check_name(const std::string& name, const std::string& object) {
    if (name != word(name))
      findings_.error("name", object, fmt::format("the name '{}' has other characters than letters, digits, underscore", name));
  }

  /// Number of particles: that of the first data set of the position, else the largest shape.
  void find_rows() {
    for (const char* axis : {"x", "y", "z"}) {
      findings_.guarded(place_.group, [&] {
        const std::string record = join(place_.group, "position"), object = join(record, axis);
        if (!is_component(file_, object)) return;
        const Component component(file_, record, object, {dimension::kLength, false, 1.0});
        const bool better =
            component.size() && (!rows_ || (rows_from_constant_ && (!component.is_constant() || *component.size() > *rows_)));
        if (!better) return;
        rows_ = component.size();
        rows_from_constant_ = component.is_constant();
      });
    }
  }

  void check_record(const std::string& name, const std::string& object) {
    const bool scalar = is_component(file_, object);
    std::vector<std::string> axes;
    if (!scalar) {
      if (!file_.is_group(object)) return;
      for (const std::string& child : file_.children(object)) {
        if (is_component(file_, join(object, child)))
          axes.push_back(child);
        else
          findings_.error("component", join(object, child), "is neither a data set nor a constant with 'value'");
      }
      if (axes.empty() && !find_known_record(name)) return;
    }
    check_name(name, object);
    check_record_attributes(name, object, scalar ? object : join(object, axes.empty() ? "x" : axes.front()));
    check_components_complete(name, object, scalar, axes);
    if (scalar) check_component(object, object);
    for (const std::string& axis : axes) {
      check_name(axis, join(object, axis));
      findings_.guarded(join(object, axis), [&] { check_component(object, join(object, axis)); });
    }
  }

  void check_components_complete(const std::string& name, const std::string& object, bool scalar,
                                 const std::vector<std::string>& axes) {
    const KnownRecord* known = find_known_record(name);
    if (!known) return;
    if (known->vector == scalar) {
      findings_.error("component", object,
                      known->vector ? "is a scalar, three components are expected" : "has components, a scalar is expected");
    }
    if (!known->vector || scalar) return;
    for (const char* axis : {"x", "y", "z"})
      if (std::find(axes.begin(), axes.end(), axis) == axes.end())
        findings_.error("component", object, fmt::format("the component '{}' is missing", axis));
  }

  void check_record_attributes(const std::string& name, const std::string& record, const std::string& first) {
    const auto exponents = file_.numbers(record, "unitDimension");
    if (!exponents)
      findings_.error("unit_dimension", record, "the required attribute 'unitDimension' is missing on the record");
    check_dimension(name, record, exponents);
    if (!exponents && first != record && file_.kind(first) != hdf5::Kind::none)
      check_dimension(name, first, file_.numbers(first, "unitDimension"));
    if (!file_.has_attribute(record, "timeOffset"))
      findings_.error("record_attribute", record, "the required attribute 'timeOffset' is missing");
    for (const char* attribute : {"macroWeighted", "weightingPower"})
      if (!file_.has_attribute(record, attribute))
        findings_.warning("record_attribute", record, fmt::format("the attribute '{}' is missing", attribute));
  }

  void check_dimension(const std::string& name, const std::string& object,
                       const std::optional<std::vector<double>>& exponents) {
    if (!exponents) return;
    if (exponents->size() != 7) {
      findings_.error("unit_dimension", object, fmt::format("unitDimension has {} entries, 7 are expected", exponents->size()));
      return;
    }
    Dimension stated{};
    std::copy(exponents->begin(), exponents->end(), stated.begin());
    const KnownRecord* known = find_known_record(name);
    if (known && !same_dimension(stated, known->dimension)) {
      findings_.error("unit_dimension", object,
                      fmt::format("the dimension is {}, expected is {}", describe(stated), describe(known->dimension)));
    }
  }

  void check_component(const std::string& record, const std::string& object) {
    const bool own_unit = file_.has_attribute(object, "unitSI");
    if (!own_unit) findings_.error("unit_si", object, "the required attribute 'unitSI' is missing");
    const Component component(file_, record, object, {dimension::kNone, false, 1.0});
    if (component.is_constant()) {
      const auto shape = file_.numbers(object, "shape");
      if (!shape) findings_.error("shape", object, "the constant has no 'shape'");
    }
    if (component.size() && rows_ && *component.size() != *rows_) {
      findings_.error(component.is_constant() ? "shape" : "equal_lengths", object,
                      fmt::format("has {} rows, the positions have {}", *component.size(), *rows_));
    }
    if (component.data() && component.data()->number_kind() == hdf5::NumberKind::floating) check_finite(component);
  }

  void check_finite(const Component& component) {
    std::vector<double> values;
    const std::size_t step = component.data()->slab_size(kRows);
    for (std::uint64_t start = 0; start < *component.size(); start += step) {
      values.resize(static_cast<std::size_t>(std::min<std::uint64_t>(step, *component.size() - start)));
      component.read(start, values.size(), values.data());
      const auto bad = std::find_if(values.begin(), values.end(), [](double value) { return !std::isfinite(value); });
      if (bad == values.end()) continue;
      findings_.error("finite", component.object(),
                      fmt::format("row {} is {}", start + static_cast<std::uint64_t>(bad - values.begin()), *bad));
      return;
    }
  }

  void check_ids() {
    const std::string object = join(place_.group, "id");
    if (file_.kind(object) != hdf5::Kind::dataset) return;
    const hdf5::Dataset data(file_, object);
    if (data.number_kind() == hdf5::NumberKind::floating) {
      findings_.error("id_type", object, "ids are floating-point numbers");
      return;
    }
    if (layout_.major_version == 1 && data.number_kind() != hdf5::NumberKind::unsigned_integer) {
      findings_.error("id_type", object, "ids are signed; version 1 wants unsigned 64-bit integers");
    }
    // Signed ids are read with their own signedness; a negative one differs from all others by its sign alone.
    std::vector<std::uint64_t> ids(static_cast<std::size_t>(data.size()));
    if (data.number_kind() == hdf5::NumberKind::unsigned_integer) {
      data.read(0, ids.size(), ids.data());
    } else {
      std::vector<std::int64_t> values(ids.size());
      data.read(0, values.size(), values.data());
      std::copy(values.begin(), values.end(), ids.begin());
    }
    std::sort(ids.begin(), ids.end());
    const auto twin = std::adjacent_find(ids.begin(), ids.end());
    if (twin != ids.end()) findings_.error("unique_ids", object, fmt::format("the id {} occurs more than once", *twin));
  }

  std::vector<double> read_all(const std::string& record, const std::string& object) {
    const Component component(file_, record, object, {dimension::kNone, false, 1.0});
    std::vector<double> values(static_cast<std::size_t>(component.size().value_or(0)));
    component.read(0, values.size(), values.data());
    return values;
  }

  void check_patches(const std::string& group) {
    const std::string counts_object = join(group, "numParticles"), starts_object = join(group, "numParticlesOffset");
    const std::vector<double> counts = read_all(counts_object, counts_object), starts = read_all(starts_object, starts_object);
    double sum = 0;
    for (const double count : counts) sum += count;
    if (rows_ && sum != static_cast<double>(*rows_)) {
      findings_.error("patches", counts_object, fmt::format("the patches hold {} particles, the species has {}", sum, *rows_));
      return;
    }
    if (starts.size() != counts.size()) {
      findings_.error("patches", starts_object, "numParticles and numParticlesOffset have different lengths");
      return;
    }
    for (const char* axis : {"x", "y", "z"}) check_patch_bounds(group, axis, counts, starts);
  }

  /// offset <= position + positionOffset < offset + extent, for the particles of each patch.
  void check_patch_bounds(const std::string& group, const std::string& axis, const std::vector<double>& counts,
                          const std::vector<double>& starts) {
    const std::vector<double> low = read_all(join(group, "offset"), join(group, "offset/" + axis));
    const std::vector<double> size = read_all(join(group, "extent"), join(group, "extent/" + axis));
    if (low.size() != counts.size() || size.size() != counts.size()) {
      findings_.error("patches", group, "offset or extent has another length than numParticles");
      return;
    }
    const std::string record = join(place_.group, "position"), offsets = join(place_.group, "positionOffset");
    const Component place(file_, record, join(record, axis), {dimension::kLength, false, 1.0});
    std::optional<Component> offset;
    if (is_component(file_, join(offsets, axis)))
      offset.emplace(file_, offsets, join(offsets, axis), Quantity{dimension::kLength, false, 1.0});
    std::vector<double> values, shift;
    for (std::size_t patch = 0; patch < counts.size(); ++patch) {
      if (starts[patch] < 0 || counts[patch] < 0 || starts[patch] + counts[patch] > static_cast<double>(rows_.value_or(0))) {
        findings_.error("patches", group, fmt::format("patch {} reaches beyond the particles", patch));
        return;
      }
      const auto first = static_cast<std::uint64_t>(starts[patch]);
      for (std::uint64_t done = 0, all = static_cast<std::uint64_t>(counts[patch]); done < all; done += kRows) {
        values.resize(static_cast<std::size_t>(std::min<std::uint64_t>(kRows, all - done)));
        shift.assign(values.size(), 0.0);
        place.read(first + done, values.size(), values.data());
        if (offset) offset->read(first + done, shift.size(), shift.data());
        for (std::size_t i = 0; i < values.size(); ++i) {
          const double at = values[i] + shift[i];
          if (at >= low[patch] && at < low[patch] + size[patch]) continue;
          findings_.error("patches", group,
                          fmt::format("particle {} lies outside its patch {} along {}", first + done + i, patch, axis));
          return;
        }
      }
    }
  }

  const hdf5::InputFile& file_;
  const Layout& layout_;
  const SpeciesPlace& place_;
  Findings& findings_;
  std::optional<std::uint64_t> rows_;
  bool rows_from_constant_ = false;
};

}  // namespace

void check_species(const hdf5::InputFile& file, const Layout& layout, const SpeciesPlace& place, Findings& findings) {
  SpeciesRules(file, layout, place, findings).check();
}

}  // namespace farsum::io::openpmd
