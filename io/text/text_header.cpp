#include "io/text/text_header.hpp"

#include <fmt/format.h>

#include "fmm/error.hpp"

namespace farsum::io::text {
namespace {

struct NamedRole {
  std::string_view name;
  Role role;
};
constexpr NamedRole kRoles[] = {{"x", Role::x},
                                {"y", Role::y},
                                {"z", Role::z},
                                {"charge", Role::charge},
                                {"q", Role::charge},
                                {"mass", Role::mass},
                                {"weight", Role::weighting},
                                {"weighting", Role::weighting},
                                {"px", Role::momentum_x},
                                {"py", Role::momentum_y},
                                {"pz", Role::momentum_z},
                                {"id", Role::id}};

bool is_blank(char letter) {
  return letter == ' ' || letter == '\t' || letter == '\r';
}

std::string_view without_blanks(std::string_view text) {
  while (!text.empty() && is_blank(text.front())) text.remove_prefix(1);
  while (!text.empty() && is_blank(text.back())) text.remove_suffix(1);
  return text;
}

std::string lower(std::string_view text) {
  std::string result(text);
  for (char& letter : result)
    if (letter >= 'A' && letter <= 'Z') letter = static_cast<char>(letter - 'A' + 'a');
  return result;
}

Role role_of(std::string_view name) {
  const std::string small = lower(name);
  for (const NamedRole& entry : kRoles)
    if (entry.name == small) return entry.role;
  return Role::skipped;
}

/// Takes one column from the front of the line.
TextColumn take_column(std::string_view& line) {
  const std::size_t end = std::min(line.find_first_of(" \t\r,;[("), line.size());
  TextColumn column;
  column.name = std::string(line.substr(0, end));
  column.role = role_of(column.name);
  line = without_blanks(line.substr(end));
  if (line.empty() || (line.front() != '[' && line.front() != '(')) return column;
  const std::size_t close = line.find(line.front() == '[' ? ']' : ')');
  if (close == std::string_view::npos) {
    throw Error(ErrorCode::item_bad_value, fmt::format("the bracket after '{}' is not closed", column.name), {}, "header line",
                {});
  }
  column.unit = std::string(without_blanks(line.substr(1, close - 1)));
  line = without_blanks(line.substr(close + 1));
  return column;
}

Dimension dimension_of(Role role) {
  switch (role) {
    case Role::x:
    case Role::y:
    case Role::z:
      return dimension::kLength;
    case Role::charge:
      return dimension::kCharge;
    case Role::mass:
      return dimension::kMass;
    case Role::momentum_x:
    case Role::momentum_y:
    case Role::momentum_z:
      return dimension::kMomentum;
    default:
      return dimension::kNone;
  }
}

/// The unit that serves for a column without one, and the option that would set it.
struct Fallback {
  std::string_view unit, option;
};

Fallback fallback_for(Role role, std::string_view length_unit, std::string_view charge_unit) {
  switch (role) {
    case Role::x:
    case Role::y:
    case Role::z:
      return {length_unit, "--length-unit"};
    case Role::charge:
      return {charge_unit, "--charge-unit"};
    default:
      return {};
  }
}

}  // namespace

std::optional<std::size_t> TextHeader::find(Role role) const noexcept {
  for (std::size_t i = 0; i < columns.size(); ++i)
    if (columns[i].role == role) return i;
  return std::nullopt;
}

std::optional<TextHeader> parse_header(std::string_view line) {
  line = without_blanks(line);
  while (!line.empty() && line.front() == '#') line = without_blanks(line.substr(1));
  TextHeader header;
  while (!line.empty()) {
    if (line.front() == ',' || line.front() == ';') {
      if (header.separator == ' ') header.separator = line.front();
      line = without_blanks(line.substr(1));
      continue;
    }
    const std::size_t before = line.size();
    if (line.front() == '[' || line.front() == '(') return std::nullopt;
    header.columns.push_back(take_column(line));
    if (line.size() == before || header.columns.size() > 1000) return std::nullopt;
  }
  if (!header.find(Role::x) || !header.find(Role::y) || !header.find(Role::z)) return std::nullopt;
  for (std::size_t i = 0; i < header.columns.size(); ++i) {
    const TextColumn& column = header.columns[i];
    if (column.role == Role::skipped || *header.find(column.role) == i) continue;
    throw Error(
        ErrorCode::item_bad_value,
        fmt::format("two columns mean the same: '{}' and '{}'", header.columns[*header.find(column.role)].name, column.name),
        {}, "header line", {});
  }
  return header;
}

void resolve_units(TextHeader& header, std::string_view length_unit, std::string_view charge_unit) {
  for (TextColumn& column : header.columns) {
    if (column.role == Role::skipped) continue;
    const Dimension expected = dimension_of(column.role);
    const Fallback fallback = fallback_for(column.role, length_unit, charge_unit);
    const std::string_view unit = column.unit.empty() ? fallback.unit : std::string_view(column.unit);
    if (unit.empty()) {
      if (same_dimension(expected, dimension::kNone)) continue;
      throw Error(ErrorCode::unit_unknown, fmt::format("column '{}' has no unit", column.name), {}, "header line",
                  fallback.option.empty()
                      ? fmt::format("write it in brackets after the name, as in {}[kg m/s]", column.name)
                      : fmt::format("write it in brackets after the name, or state it with {}", fallback.option));
    }
    column.factor = unit_factor(unit, expected, fmt::format("column '{}'", column.name));
  }
}

}  // namespace farsum::io::text
