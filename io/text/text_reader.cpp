#include "io/text/text_reader.hpp"

#include <fmt/format.h>

#include <array>
#include <charconv>
#include <cmath>

#include "fmm/error.hpp"
#include "io/summary/contents_sums.hpp"
#include "io/text/line_reader.hpp"
#include "io/text/text_header.hpp"

namespace farsum::io::text {
namespace {

constexpr const char* kSpecies = "particles";
constexpr std::uint64_t kRowsBetweenHooks = 1u << 16;
constexpr std::size_t kRoles = 10;

bool is_blank(char letter) {
  return letter == ' ' || letter == '\t';
}

/// One data row, SI; roles without a column keep their default.
struct Row {
  std::array<double, kRoles> value{};
  std::uint64_t id = 0;
  double operator[](Role role) const { return value[static_cast<std::size_t>(role)]; }
};

class Table {
 public:
  Table(const std::string& path, const ReadOptions& options) : path_(path), options_(options), lines_(path) {
    find_header();
    try {
      resolve_units(header_, options.length_unit, options.charge_unit);
    } catch (const Error& error) {
      throw Error(error.code(), error.message(), path_, fmt::format("line {}", lines_.line_number()), error.remedy());
    }
    if (options.species.empty() || (options.species.size() == 1 && options.species.front() == kSpecies)) return;
    throw Error(ErrorCode::choice_needed, "a text file holds one species, named 'particles'", path_, {}, "leave out --species");
  }

  const TextHeader& header() const { return header_; }
  bool has(Role role) const { return header_.find(role).has_value(); }
  bool has_charge() const { return has(Role::charge) || options_.charge_each.has_value(); }
  bool has_momentum() const { return has(Role::momentum_x) && has(Role::momentum_y) && has(Role::momentum_z); }

  /// Calls visit(row) for each data row.
  template <class Visit>
  void for_each_row(Visit&& visit) {
    std::string_view line;
    while (lines_.next(line)) {
      while (!line.empty() && is_blank(line.front())) line.remove_prefix(1);
      if (line.empty() || line.front() == '#') continue;
      parse_row(line);
      visit(row_);
      if (++rows_ % kRowsBetweenHooks == 0) report();
    }
    report();
  }

 private:
  void find_header() {
    std::string_view line;
    while (lines_.next(line)) {
      if (lines_.line_number() == 1 && line.starts_with("\xEF\xBB\xBF")) line.remove_prefix(3);
      while (!line.empty() && is_blank(line.front())) line.remove_prefix(1);
      if (line.empty()) continue;
      if (auto header = parse_header_here(line)) {
        header_ = std::move(*header);
        return;
      }
      if (line.front() != '#') break;
    }
    throw Error(ErrorCode::item_missing,
                fmt::format("no header line names the columns x, y and z before line {}", lines_.line_number()), path_, {},
                "begin the file with a line such as: x[mm], y[mm], z[mm], charge[e]");
  }

  std::optional<TextHeader> parse_header_here(std::string_view line) const {
    try {
      return parse_header(line);
    } catch (const Error& error) {
      if (line.front() == '#') return std::nullopt;  // a comment may say anything
      throw Error(error.code(), error.message(), path_, fmt::format("line {}", lines_.line_number()), error.remedy());
    }
  }

  void report() const {
    const Hooks& hooks = options_.hooks;
    if (hooks.should_stop && hooks.should_stop()) throw Error(ErrorCode::cancelled, "stopped by the caller");
    if (hooks.on_progress && lines_.bytes_total() > 0) {
      hooks.on_progress(std::min(1.0, static_cast<double>(lines_.bytes_read()) / static_cast<double>(lines_.bytes_total())));
    }
  }

  [[noreturn]] void refuse(ErrorCode code, const std::string& message, const TextColumn* column) const {
    std::string item = fmt::format("line {} (row {})", lines_.line_number(), rows_);
    if (column) item += fmt::format(", column '{}'", column->name);
    throw Error(code, message, path_, item, {});
  }

  /// Takes the next field off the line; false when there is none.
  bool take_field(std::string_view& line, std::string_view& field, bool first) const {
    if (header_.separator == ' ') {
      while (!line.empty() && is_blank(line.front())) line.remove_prefix(1);
      if (line.empty()) return false;
      const std::size_t end = std::min(line.find_first_of(" \t"), line.size());
      field = line.substr(0, end);
      line.remove_prefix(end);
      return true;
    }
    if (!first) {
      if (line.empty()) return false;
      line.remove_prefix(1);
    }
    const std::size_t end = std::min(line.find(header_.separator), line.size());
    field = line.substr(0, end);
    line.remove_prefix(end);
    while (!field.empty() && is_blank(field.front())) field.remove_prefix(1);
    while (!field.empty() && is_blank(field.back())) field.remove_suffix(1);
    return true;
  }

  void parse_row(std::string_view line) {
    std::size_t count = 0;
    std::string_view field;
    while (take_field(line, field, count == 0)) {
      if (count < header_.columns.size()) parse_field(field, header_.columns[count]);
      ++count;
    }
    if (count == header_.columns.size()) return;
    refuse(ErrorCode::item_wrong_size, fmt::format("has {} values, the header names {} columns", count, header_.columns.size()),
           nullptr);
  }

  void parse_field(std::string_view field, const TextColumn& column) {
    if (column.role == Role::skipped) return;
    if (!field.empty() && field.front() == '+') field.remove_prefix(1);
    const char* end = field.data() + field.size();
    if (column.role == Role::id) {
      const auto [rest, problem] = std::from_chars(field.data(), end, row_.id);
      if (problem != std::errc() || rest != end)
        refuse(ErrorCode::item_bad_value, fmt::format("'{}' is no whole number from 0 on", field.substr(0, 40)), &column);
      return;
    }
    double value = 0;
    const auto [rest, problem] = std::from_chars(field.data(), end, value);
    if (problem == std::errc::result_out_of_range)
      refuse(ErrorCode::item_bad_value, fmt::format("'{}' is outside the double range", field.substr(0, 40)), &column);
    if (problem != std::errc() || rest != end)
      refuse(ErrorCode::item_bad_value, fmt::format("'{}' is no number", field.substr(0, 40)), &column);
    if (!std::isfinite(value)) refuse(ErrorCode::not_finite, fmt::format("is {}", value), &column);
    if (value < 0 && (column.role == Role::weighting || column.role == Role::mass))
      refuse(ErrorCode::item_bad_value, fmt::format("is {}, but is never negative", value), &column);
    row_.value[static_cast<std::size_t>(column.role)] = value * column.factor;
  }

  std::string path_;
  const ReadOptions& options_;
  LineReader lines_;
  TextHeader header_;
  Row row_;
  std::uint64_t rows_ = 0;
};

double charge_of(const Table& table, const Row& row, const ReadOptions& options) {
  const double weight = table.has(Role::weighting) ? row[Role::weighting] : 1.0;
  return weight * (table.has(Role::charge) ? row[Role::charge] : options.charge_each.value_or(0.0));
}

void check_memory(const std::string& path, std::uint64_t lines, std::uint64_t row_bytes, const ReadOptions& options) {
  const double bytes = static_cast<double>(lines) * static_cast<double>(row_bytes);
  if (options.memory_limit == 0 || bytes <= static_cast<double>(options.memory_limit)) return;
  throw Error(ErrorCode::memory_refused,
              fmt::format("its {} lines need up to {:.0f} MiB, the limit is {:.0f} MiB", lines, bytes / 1048576.0,
                          static_cast<double>(options.memory_limit) / 1048576.0),
              path, {}, "raise --memory-limit or split the file");
}

/// Columns of the file and where their values go.
struct Targets {
  std::vector<std::pair<Role, std::vector<double>*>> numbers;

  Targets(const Table& table, ParticleSet& set) {
    numbers = {{Role::x, &set.x}, {Role::y, &set.y}, {Role::z, &set.z}};
    if (table.has(Role::weighting)) numbers.emplace_back(Role::weighting, &set.weighting);
    if (table.has(Role::mass)) numbers.emplace_back(Role::mass, &set.motion.mass);
    if (!table.has_momentum()) return;
    numbers.emplace_back(Role::momentum_x, &set.motion.momentum_x);
    numbers.emplace_back(Role::momentum_y, &set.motion.momentum_y);
    numbers.emplace_back(Role::momentum_z, &set.motion.momentum_z);
  }
};

void forget_plain_ids(ParticleSet& set) {
  for (std::size_t i = 0; i < set.id.size(); ++i)
    if (set.id[i] != i) return;
  set.id.clear();
}

}  // namespace

ParticleSet load(const std::string& path, const ReadOptions& options) {
  Table table(path, options);
  if (!table.has_charge()) {
    throw Error(ErrorCode::item_missing, "no column tells the charge", path, "header line",
                "add a column charge[e], or state the charge of one particle with --particle-charge");
  }
  ParticleSet set;
  set.file = path;
  set.format = "delimited text";
  const Targets targets(table, set);
  const std::uint64_t lines = count_lines(path);
  check_memory(path, lines, 8 * (targets.numbers.size() + 1 + (table.has(Role::id) ? 1 : 0)), options);
  for (const auto& [role, values] : targets.numbers) values->reserve(lines);
  set.charge.reserve(lines);
  if (table.has(Role::id)) set.id.reserve(lines);
  table.for_each_row([&](const Row& row) {
    for (const auto& [role, values] : targets.numbers) values->push_back(row[role]);
    set.charge.push_back(charge_of(table, row, options));
    if (table.has(Role::id)) set.id.push_back(row.id);
  });
  forget_plain_ids(set);
  set.species.push_back({kSpecies, 0, set.size(), set.size(), {}});
  for (const TextColumn& column : table.header().columns)
    if (column.role == Role::skipped) set.notes.push_back(fmt::format("Column '{}' is not used.", column.name));
  return set;
}

FileSummary summarise(const std::string& path, const ReadOptions& options, bool with_contents) {
  Table table(path, options);
  FileSummary summary;
  summary.file = path;
  summary.format = "delimited text";
  summary.iterations = {""};
  const TextColumn& x = table.header().columns[*table.header().find(Role::x)];
  summary.length_unit = x.unit.empty() ? options.length_unit : x.unit;
  if (const auto q = table.header().find(Role::charge)) {
    const TextColumn& column = table.header().columns[*q];
    summary.charge_unit = column.unit.empty() ? options.charge_unit : column.unit;
  }
  SpeciesSummary species;
  species.name = kSpecies;
  if (table.has(Role::charge))
    species.charge_source = table.has(Role::weighting) ? "charge x weight" : "charge";
  else if (table.has_charge())
    species.charge_source = "charge given by the user";
  else
    species.missing.push_back("charge: no column tells it");
  species.has_id = table.has(Role::id);
  species.has_mass = table.has(Role::mass);
  species.has_momentum = table.has_momentum();
  species.has_weighting = table.has(Role::weighting);
  if (!species.has_momentum) species.missing.push_back("momentum: whether the charges move is not known");
  if (species.has_momentum && !species.has_mass) species.missing.push_back("mass: how fast the charges move is not known");
  for (const TextColumn& column : table.header().columns) species.records.push_back(column.name);
  ContentsSums sums;
  table.for_each_row([&](const Row& row) {
    ++species.stored;
    const double charge = charge_of(table, row, options);
    sums.add_place(row[Role::x], row[Role::y], row[Role::z]);
    sums.add_charge(charge);
    if (!species.has_momentum || !(row[Role::mass] > 0)) return;
    const double scale = 1 / (row[Role::mass] * kSpeedOfLight);
    sums.add_motion(row[Role::momentum_x] * scale, row[Role::momentum_y] * scale, row[Role::momentum_z] * scale, charge);
  });
  if (with_contents) summary.contents = species.contents = sums.result();
  summary.species.push_back(std::move(species));
  return summary;
}

}  // namespace farsum::io::text
