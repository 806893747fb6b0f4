#include "apps/farsum/display.hpp"

#include <fmt/format.h>

#include <array>
#include <cmath>

namespace farsum::command {
namespace {

/// Length of the valid UTF-8 sequence at the start of `text`, 0 when there is none (overlong forms and surrogates are invalid).
std::size_t utf8_length(std::string_view text) {
  const auto byte = [&](std::size_t i) { return static_cast<unsigned char>(text[i]); };
  const unsigned char lead = byte(0);
  if (lead < 0x80) return 1;
  const std::size_t length = lead >= 0xC2 && lead <= 0xDF   ? 2
                             : (lead & 0xF0) == 0xE0        ? 3
                             : lead >= 0xF0 && lead <= 0xF4 ? 4
                                                            : 0;
  if (length == 0 || text.size() < length) return 0;
  for (std::size_t i = 1; i < length; ++i)
    if ((byte(i) & 0xC0) != 0x80) return 0;
  const unsigned char second = byte(1);
  if ((lead == 0xE0 && second < 0xA0) || (lead == 0xED && second > 0x9F) || (lead == 0xF0 && second < 0x90) ||
      (lead == 0xF4 && second > 0x8F))
    return 0;
  return length;
}

/// Control characters and those that reorder or hide text on a terminal (C1, bidirectional marks, line separators, byte order
/// mark).
bool is_control(std::string_view sequence) {
  const auto byte = [&](std::size_t i) { return static_cast<unsigned char>(sequence[i]); };
  if (sequence.size() == 1) return byte(0) < 0x20 || byte(0) == 0x7F;
  if (sequence.size() == 2) return byte(0) == 0xC2 && byte(1) < 0xA0;
  if (sequence.size() != 3) return false;
  if (byte(0) == 0xE2 && byte(1) == 0x80) return (byte(2) >= 0x8B && byte(2) <= 0x8F) || (byte(2) >= 0xA8 && byte(2) <= 0xAE);
  if (byte(0) == 0xE2 && byte(1) == 0x81) return byte(2) >= 0xA6 && byte(2) <= 0xA9;
  return byte(0) == 0xEF && byte(1) == 0xBB && byte(2) == 0xBF;
}

}  // namespace

std::string grouped(std::uint64_t value) {
  std::string digits = fmt::format("{}", value);
  for (std::ptrdiff_t at = std::ptrdiff_t(digits.size()) - 3; at > 0; at -= 3) digits.insert(std::size_t(at), 1, ' ');
  return digits;
}

std::string with_unit(double value, std::string_view unit, int digits) {
  if (value == 0 || !std::isfinite(value)) return fmt::format("{} {}", value == 0 ? 0.0 : value, unit);
  constexpr std::array<std::string_view, 11> kPrefixes = {"f", "p", "n", "u", "m", "", "k", "M", "G", "T", "P"};
  // Rounded first, so that 999.96 becomes 1 k and not 1000.
  const double rounded = std::stod(fmt::format("{:.{}e}", value, digits - 1));
  const int step = int(std::floor(std::floor(std::log10(std::abs(rounded)) + 1e-9) / 3));
  if (step < -5 || step > 5) return fmt::format("{:.{}g} {}", value, digits, unit);
  return fmt::format("{:.{}g} {}{}", rounded / std::pow(10.0, 3 * step), digits, kPrefixes[std::size_t(step + 5)], unit);
}

std::string short_number(double value, int digits) {
  return fmt::format("{:.{}g}", value, digits);
}

std::string error_number(double value) {
  std::string text = short_number(value);
  const std::size_t exponent = text.find("e-0");
  if (exponent != std::string::npos) text.erase(exponent + 2, 1);
  return text;
}

std::string counted(std::uint64_t count, std::string_view noun) {
  return fmt::format("{} {}{}", grouped(count), noun, count == 1 ? "" : "s");
}

std::string joined(const std::vector<std::string>& names) {
  return fmt::format("{}", fmt::join(names, ", "));
}

std::vector<std::string> split_list(std::string_view text) {
  std::vector<std::string> parts;
  while (!text.empty()) {
    const std::size_t comma = text.find(',');
    std::string_view part = text.substr(0, comma);
    text.remove_prefix(comma == std::string_view::npos ? text.size() : comma + 1);
    while (!part.empty() && part.front() == ' ') part.remove_prefix(1);
    while (!part.empty() && part.back() == ' ') part.remove_suffix(1);
    if (!part.empty()) parts.emplace_back(part);
  }
  return parts;
}

std::string byte_size(std::uint64_t bytes) {
  constexpr std::array<std::string_view, 5> kUnits = {"B", "KiB", "MiB", "GiB", "TiB"};
  double value = double(bytes);
  std::size_t unit = 0;
  while (value >= 1023.5 && unit + 1 < kUnits.size()) {
    value /= 1024;
    ++unit;
  }
  return fmt::format("{:.{}f} {}", value, unit == 0 || value >= 99.95 ? 0 : 1, kUnits[unit]);
}

std::string duration(double seconds) {
  if (seconds < 0.0995) return fmt::format("{:.2g} ms", seconds * 1e3);
  if (seconds < 99.5) return fmt::format("{:.2g} s", seconds);
  const auto whole = std::uint64_t(seconds + 0.5);
  return fmt::format("{} min {} s", whole / 60, whole % 60);
}

std::string printable(std::string_view text, std::size_t limit) {
  std::string out;
  while (!text.empty()) {
    if (out.size() >= limit) return out + "...";
    const std::size_t length = utf8_length(text);
    if (length > 0 && !is_control(text.substr(0, length))) {
      out += text.substr(0, length);
      text.remove_prefix(length);
      continue;
    }
    const std::size_t escaped = length > 0 ? length : 1;
    for (std::size_t i = 0; i < escaped; ++i) out += fmt::format("\\x{:02x}", static_cast<unsigned char>(text[i]));
    text.remove_prefix(escaped);
  }
  return out;
}

std::string valid_utf8(std::string_view text) {
  std::string out;
  while (!text.empty()) {
    const std::size_t length = utf8_length(text);
    out += length > 0 ? text.substr(0, length) : std::string_view("\xEF\xBF\xBD");
    text.remove_prefix(length > 0 ? length : 1);
  }
  return out;
}

}  // namespace farsum::command
