#include "io/run_attributes.hpp"

namespace farsum::io {

const NamedValue* find_value(const RunAttributes& attributes, std::string_view name) noexcept {
  for (const NamedValue& entry : attributes)
    if (entry.name == name) return &entry;
  return nullptr;
}

double number_or(const RunAttributes& attributes, std::string_view name, double fallback) noexcept {
  const NamedValue* entry = find_value(attributes, name);
  if (!entry) return fallback;
  if (const double* number = std::get_if<double>(&entry->value)) return *number;
  if (const std::int64_t* whole = std::get_if<std::int64_t>(&entry->value)) return static_cast<double>(*whole);
  return fallback;
}

std::string text_or(const RunAttributes& attributes, std::string_view name, std::string fallback) {
  const NamedValue* entry = find_value(attributes, name);
  const std::string* text = entry ? std::get_if<std::string>(&entry->value) : nullptr;
  return text ? *text : std::move(fallback);
}

}  // namespace farsum::io
