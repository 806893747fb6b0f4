#include "io/units.hpp"

#include <fmt/format.h>

#include <charconv>
#include <cmath>
#include <cstdlib>

#include "fmm/error.hpp"

namespace farsum::io {
namespace {

struct Symbol {
  std::string_view name;
  double factor;
  Dimension dimension;
  bool prefixes;
};

constexpr Symbol kSymbols[] = {
    {"m", 1, dimension::kLength, true},
    {"g", 1e-3, dimension::kMass, true},
    {"s", 1, dimension::kTime, true},
    {"A", 1, {0, 0, 0, 1, 0, 0, 0}, true},
    {"C", 1, dimension::kCharge, true},
    {"V", 1, dimension::kPotential, true},
    {"N", 1, dimension::kForce, true},
    {"J", 1, dimension::kEnergy, true},
    {"eV", kElementaryCharge, dimension::kEnergy, true},
    {"e", kElementaryCharge, dimension::kCharge, false},
    {"c", kSpeedOfLight, dimension::kVelocity, false},
    {"u", kAtomicMass, dimension::kMass, false},
    {"amu", kAtomicMass, dimension::kMass, false},
    {"Da", kAtomicMass, dimension::kMass, false},
    {"Angstrom", 1e-10, dimension::kLength, false},
    {"angstrom", 1e-10, dimension::kLength, false},
    {"Ang", 1e-10, dimension::kLength, false},
    {"\xC3\x85", 1e-10, dimension::kLength, false},      // U+00C5
    {"\xE2\x84\xAB", 1e-10, dimension::kLength, false},  // U+212B
    {"bohr", kBohrRadius, dimension::kLength, false},
    {"a0", kBohrRadius, dimension::kLength, false},
    {"1", 1, dimension::kNone, false},
};

struct Prefix {
  std::string_view name;
  double factor;
};
constexpr Prefix kPrefixes[] = {{"f", 1e-15},       {"p", 1e-12}, {"n", 1e-9}, {"u", 1e-6}, {"\xC2\xB5", 1e-6},
                                {"\xCE\xBC", 1e-6}, {"m", 1e-3},  {"c", 1e-2}, {"d", 1e-1}, {"k", 1e3},
                                {"M", 1e6},         {"G", 1e9},   {"T", 1e12}};

[[noreturn]] void refuse(std::string_view symbol, std::string_view text) {
  throw Error(ErrorCode::unit_unknown, fmt::format("the unit '{}' in '{}' is not known", symbol, text),
              "use for example m, mm, um, nm, Angstrom, bohr; C, nC, pC, e; kg, u; kg m/s, MeV/c");
}

Unit find_symbol(std::string_view name, std::string_view text) {
  for (const Symbol& symbol : kSymbols)
    if (symbol.name == name) return {std::string(name), symbol.factor, symbol.dimension};
  for (const Prefix& prefix : kPrefixes) {
    if (!name.starts_with(prefix.name)) continue;
    const std::string_view rest = name.substr(prefix.name.size());
    for (const Symbol& symbol : kSymbols)
      if (symbol.prefixes && symbol.name == rest) return {std::string(name), prefix.factor * symbol.factor, symbol.dimension};
  }
  refuse(name, text);
}

bool is_separator(char letter) {
  return letter == ' ' || letter == '*' || letter == '/';
}

/// Splits "s^-2" or "s-2" into symbol and power.
int take_power(std::string_view& piece, std::string_view text) {
  if (piece == "1" || piece == "a0") return 1;
  const std::size_t end = piece.find_first_of("^-0123456789");
  if (end == std::string_view::npos || end == 0) return 1;
  std::string_view digits = piece.substr(end + (piece[end] == '^'));
  int power = 0;
  const auto [rest, problem] = std::from_chars(digits.data(), digits.data() + digits.size(), power);
  if (problem != std::errc() || rest != digits.data() + digits.size() || std::abs(power) > 9) refuse(piece, text);
  piece = piece.substr(0, end);
  return power;
}

}  // namespace

Unit parse_unit(std::string_view text) {
  Unit unit{std::string(text), 1.0, {}};
  bool divide = false, any = false;
  for (std::size_t begin = 0; begin < text.size();) {
    if (is_separator(text[begin])) {
      if (text[begin] == '/') {
        if (divide || !any) refuse("/", text);
        divide = true;
      }
      ++begin;
      continue;
    }
    std::size_t end = begin;
    while (end < text.size() && !is_separator(text[end])) ++end;
    std::string_view piece = text.substr(begin, end - begin);
    const int power = take_power(piece, text) * (divide ? -1 : 1);
    const Unit symbol = find_symbol(piece, text);
    unit.factor *= std::pow(symbol.factor, power);
    for (std::size_t i = 0; i < unit.dimension.size(); ++i) unit.dimension[i] += power * symbol.dimension[i];
    divide = false;
    any = true;
    begin = end;
  }
  if (!any || divide) refuse(text, text);
  return unit;
}

double unit_factor(std::string_view text, const Dimension& expected, std::string_view what) {
  const Unit unit = parse_unit(text);
  if (same_dimension(unit.dimension, expected)) return unit.factor;
  throw Error(ErrorCode::unit_wrong_dimension, fmt::format("the unit '{}' of {} has the dimension {}, expected is {}", text,
                                                           what, describe(unit.dimension), describe(expected)));
}

std::string describe(const Dimension& dimension) {
  constexpr const char* kNames[7] = {"length", "mass", "time", "current", "temperature", "amount", "luminous intensity"};
  if (same_dimension(dimension, dimension::kNone)) return "of a pure number";
  if (same_dimension(dimension, dimension::kCharge)) return "of a charge";
  std::string text;
  for (std::size_t i = 0; i < dimension.size(); ++i) {
    if (dimension[i] == 0) continue;
    if (!text.empty()) text += " ";
    text += kNames[i];
    if (dimension[i] != 1) text += fmt::format("^{:g}", dimension[i]);
  }
  return "'" + text + "'";
}

bool same_dimension(const Dimension& a, const Dimension& b) noexcept {
  for (std::size_t i = 0; i < a.size(); ++i)
    if (!(std::abs(a[i] - b[i]) < 1e-6)) return false;
  return true;
}

}  // namespace farsum::io
