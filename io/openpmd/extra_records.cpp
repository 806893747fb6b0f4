#include "io/openpmd/extra_records.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <string_view>

namespace farsum::io::openpmd {
namespace {

using hdf5::join;

// Written by the result writer itself, or meaningless after it: places and times are those of the solved snapshot.
constexpr std::array<std::string_view, 11> kNotCopied = {
    "position",  "positionOffset", "id",    "particleStatus", "time", "timeOffset", "particlePatches",
    "potential", "electricField",  "force", "potentialEnergy"};

bool is_excluded(const std::string& name) {
  return std::find(kNotCopied.begin(), kNotCopied.end(), name) != kNotCopied.end();
}

/// `weight` beside no `charge` holds the charge, which the result file states as record `charge`.
bool is_charge_in_disguise(const hdf5::InputFile& file, const SpeciesPlace& place, const std::string& name) {
  return name == "weight" && file.kind(join(place.group, "charge")) == hdf5::Kind::none;
}

bool is_offset_of_other(const std::string& name, const std::vector<std::string>& all) {
  constexpr std::string_view kEnding = "Offset";
  return name.ends_with(kEnding) &&
         std::find(all.begin(), all.end(), name.substr(0, name.size() - kEnding.size())) != all.end();
}

std::vector<std::string> component_axes(const hdf5::InputFile& file, const std::string& object) {
  std::vector<std::string> axes;
  for (const std::string& child : file.children(object)) {
    if (child == word(child) && is_component(file, join(object, child))) axes.push_back(child);
    if (axes.size() > 32) return {};
  }
  return axes;
}

/// Opens each component once; false if it holds no plain numbers.
bool check_lengths(const hdf5::InputFile& file, const ExtraRecord& record, std::uint64_t rows) {
  std::vector<std::string> objects;
  for (const std::string& axis : record.axes) objects.push_back(join(record.object, axis));
  if (record.axes.empty()) objects.push_back(record.object);
  for (const std::string& object : objects) {
    try {
      const Component component(file, record.object, object, Quantity{dimension::kNone, false, 1.0});
      const bool other = component.size() && *component.size() != rows && !(component.is_constant() && *component.size() == 1);
      if (!other) continue;
      throw Error(ErrorCode::item_wrong_size, fmt::format("has {} rows, the positions have {}", *component.size(), rows),
                  file.path(), object, {});
    } catch (const Error& error) {
      if (error.code() == ErrorCode::item_wrong_type) return false;
      throw;
    }
  }
  return true;
}

}  // namespace

std::vector<ExtraRecord> find_extra_records(const hdf5::InputFile& file, const SpeciesPlace& place, std::uint64_t rows,
                                            std::vector<std::string>* notes) {
  const std::vector<std::string> children = file.children(place.group);
  std::vector<ExtraRecord> records;
  for (const std::string& name : children) {
    if (is_excluded(name) || is_charge_in_disguise(file, place, name) || is_offset_of_other(name, children)) continue;
    ExtraRecord record{name, {}, join(place.group, name), {}};
    const bool scalar = is_component(file, record.object);
    if (!scalar && file.is_group(record.object)) record.axes = component_axes(file, record.object);
    if (!scalar && record.axes.empty()) continue;
    if (name != word(name) || !check_lengths(file, record, rows)) {
      if (notes)
        notes->push_back(fmt::format("{}: holds no plain numbers or has an unusual name; it is not copied.", record.object));
      continue;
    }
    const std::string offset = name + "Offset";
    if (std::find(children.begin(), children.end(), offset) != children.end()) record.offset = join(place.group, offset);
    records.push_back(std::move(record));
  }
  return records;
}

void check_extra_records(const hdf5::InputFile& file, const SpeciesPlace& place, std::uint64_t rows,
                         std::vector<std::string>& notes) {
  find_extra_records(file, place, rows, &notes);
}

}  // namespace farsum::io::openpmd
