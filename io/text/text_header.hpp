#pragma once
// The header line of a delimited text file names the columns and their units:
//
//   # a comment
//   x[mm], y[mm], z[mm], charge[e], weight
//   0.1, -0.2, 0.0, -1, 5e4
//
// Grammar: header = ['#'] column { separator column };  column = name [ '[' unit ']' | '(' unit ')' ];
// separator = ',' or ';' or blanks and tabs, the same in all lines. Names (capitals do not matter): x y z; charge or q; mass;
// weight or weighting; px py pz; id. Other columns are skipped. Units: io/units.hpp. Lines that begin with '#' and empty lines
// are comments; the first line that names x, y and z is the header, with or without '#'.
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "io/units.hpp"

namespace farsum::io::text {

enum class Role { x, y, z, charge, mass, weighting, momentum_x, momentum_y, momentum_z, id, skipped };

struct TextColumn {
  std::string name, unit;  ///< as written
  Role role = Role::skipped;
  double factor = 1;  ///< to SI
};

struct TextHeader {
  std::vector<TextColumn> columns;
  char separator = ' ';  ///< ',' ';' or ' ' (blanks and tabs)
  /// Index of the column with that role, if any.
  std::optional<std::size_t> find(Role role) const noexcept;
};

/// The header in a line, or nothing if the line does not name x, y and z.
/// Throws item_bad_value for a role that two columns have or brackets that do not match. Units are not looked at.
std::optional<TextHeader> parse_header(std::string_view line);

/// Sets the factors. `length_unit` and `charge_unit` serve where the header has none.
/// Throws unit_unknown (naming column and option), unit_wrong_dimension.
void resolve_units(TextHeader& header, std::string_view length_unit, std::string_view charge_unit);

}  // namespace farsum::io::text
