#include "fmm/error.hpp"

namespace farsum {
namespace {

struct Entry {
  ErrorCode code;
  std::string_view name, meaning;
};

constexpr Entry kEntries[] = {
    {ErrorCode::invalid_argument, "invalid_argument", "An argument or option makes no sense."},
    {ErrorCode::not_finite, "not_finite", "A coordinate or charge is NaN or infinite."},
    {ErrorCode::coincident_charges, "coincident_charges", "Two charges are at exactly the same place."},
    {ErrorCode::target_on_charge, "target_on_charge", "An evaluation point lies exactly on a charge."},
    {ErrorCode::range_exceeded, "range_exceeded", "Separations or results span more than double precision can hold."},
    {ErrorCode::tolerance_unreachable, "tolerance_unreachable", "The data cannot carry the tolerance in double precision."},
    {ErrorCode::accuracy_not_reached, "accuracy_not_reached", "The measured error exceeds the tolerance."},
    {ErrorCode::memory_refused, "memory_refused", "The predicted memory exceeds the ceiling."},
    {ErrorCode::cancelled, "cancelled", "The caller asked to stop."},
    {ErrorCode::out_of_memory, "out_of_memory", "Memory could not be allocated."},
    {ErrorCode::internal, "internal", "An internal invariant is broken."},
    {ErrorCode::file_not_found, "file_not_found", "The file does not exist."},
    {ErrorCode::file_not_readable, "file_not_readable", "The file cannot be read."},
    {ErrorCode::file_not_writable, "file_not_writable", "The file cannot be written."},
    {ErrorCode::file_exists, "file_exists", "The output file exists already."},
    {ErrorCode::file_damaged, "file_damaged", "The file is damaged."},
    {ErrorCode::file_unsafe, "file_unsafe", "The file refers to data outside itself."},
    {ErrorCode::format_unsupported, "format_unsupported", "The file has a format or layout that is not read."},
    {ErrorCode::item_missing, "item_missing", "A required item is missing in the file."},
    {ErrorCode::item_wrong_type, "item_wrong_type", "An item in the file has the wrong type."},
    {ErrorCode::item_wrong_size, "item_wrong_size", "An item in the file has the wrong size or shape."},
    {ErrorCode::item_bad_value, "item_bad_value", "An item in the file has a value that cannot be used."},
    {ErrorCode::unit_unknown, "unit_unknown", "A unit is missing or unknown."},
    {ErrorCode::unit_wrong_dimension, "unit_wrong_dimension", "A unit has the wrong physical dimension."},
    {ErrorCode::choice_needed, "choice_needed", "Several readings are possible and one must be chosen."},
    {ErrorCode::not_a_snapshot, "not_a_snapshot", "The particles were recorded at different times."},
    {ErrorCode::moving_frame, "moving_frame", "The charges move too fast for a static sum."},
    {ErrorCode::disk_full, "disk_full", "There is no space left where the output goes."},
};

const Entry* find_entry(ErrorCode code) noexcept {
  for (const Entry& entry : kEntries)
    if (entry.code == code) return &entry;
  return nullptr;
}

}  // namespace

std::string_view error_name(ErrorCode code) noexcept {
  const Entry* entry = find_entry(code);
  return entry ? entry->name : "unknown";
}

std::string_view error_meaning(ErrorCode code) noexcept {
  const Entry* entry = find_entry(code);
  return entry ? entry->meaning : "Unknown error code.";
}

std::string Error::compose(const std::string& message, const std::string& file, const std::string& item,
                           const std::string& remedy) {
  std::string text;
  if (!file.empty()) text += file + ": ";
  if (!item.empty()) text += item + ": ";
  text += message;
  if (!remedy.empty()) text += "; " + remedy;
  return text;
}

}  // namespace farsum
