#pragma once
// Named values of the root group `run` of a result file: settings, measured errors, seconds, constants.
#include <cstdint>
#include <string>
#include <string_view>
#include <variant>
#include <vector>

namespace farsum::io {

struct NamedValue {
  std::string name;  ///< letters, digits and underscore
  std::variant<double, std::int64_t, std::string> value;
};
using RunAttributes = std::vector<NamedValue>;

/// The value of that name, or nullptr.
const NamedValue* find_value(const RunAttributes& attributes, std::string_view name) noexcept;
/// The number of that name (integers converted), or `fallback` where it is missing or a text.
double number_or(const RunAttributes& attributes, std::string_view name, double fallback) noexcept;
/// The text of that name, or `fallback`.
std::string text_or(const RunAttributes& attributes, std::string_view name, std::string fallback);

}  // namespace farsum::io
