#pragma once
// Words and numbers for people: digits in groups, powers of ten where they help, sizes and times with their unit, and text from
// files made safe for a terminal.
#include <cstdint>
#include <string>
#include <string_view>
#include <vector>

namespace farsum::command {

/// 1234567 -> "1 234 567".
std::string grouped(std::uint64_t value);
/// A value with `digits` significant digits and its unit, in engineering notation with SI prefixes between 1e-15 and 1e15
/// ("-200 pC", "3.2 mm"); "0 C" for zero.
std::string with_unit(double value, std::string_view unit, int digits = 4);
/// Plain short number: "6.1e-07", "158".
std::string short_number(double value, int digits = 2);
/// As short_number, but with the exponent as people write it: "6.1e-7".
std::string error_number(double value);
/// "1.5 GiB", "830 MiB", "12 B".
std::string byte_size(std::uint64_t bytes);
/// "0.93 s", "12 ms", "3 min 20 s".
std::string duration(double seconds);
/// "1 charge", "12 000 charges".
std::string counted(std::uint64_t count, std::string_view noun);
/// Names joined by ", ".
std::string joined(const std::vector<std::string>& names);
/// The parts of a list separated by commas, blanks around them removed, empty ones left out.
std::vector<std::string> split_list(std::string_view text);
/// Text from outside made safe for one line of a terminal: control bytes, escape sequences and invalid UTF-8 as \xNN, and at
/// most `limit` bytes.
std::string printable(std::string_view text, std::size_t limit = 400);
/// Valid UTF-8 for JSON: bytes that are not part of a valid sequence become U+FFFD.
std::string valid_utf8(std::string_view text);

}  // namespace farsum::command
