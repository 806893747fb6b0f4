#include "io/openpmd/particle_output.hpp"

#include <algorithm>
#include <cmath>
#include <cstdlib>
#include <ctime>
#include <limits>

namespace farsum::io::openpmd {
namespace {

constexpr const char* kAxes[3] = {"x", "y", "z"};

/// Now, or the time in the environment variable SOURCE_DATE_EPOCH, which makes equal runs give equal bytes.
std::string date_text() {
  std::time_t now = std::time(nullptr);
  if (const char* fixed = std::getenv("SOURCE_DATE_EPOCH")) now = static_cast<std::time_t>(std::strtoll(fixed, nullptr, 10));
  std::tm parts{};
  gmtime_r(&now, &parts);
  char text[64];
  const std::size_t length = std::strftime(text, sizeof(text), "%Y-%m-%d %H:%M:%S +0000", &parts);
  return std::string(text, length);
}

void set_record(const hdf5::Node& node, const RecordStyle& style) {
  node.set_numbers("unitDimension", style.dimension.data(), style.dimension.size());
  node.set_number("timeOffset", 0.0);
  node.set_u32("macroWeighted", style.macro_weighted ? 1 : 0);
  node.set_number("weightingPower", style.weighting_power);
  if (style.comment) node.set_text("comment", style.comment);
}

void set_constant(const hdf5::Node& node, double value, std::uint64_t rows) {
  node.set_number("value", value);
  node.set_u64s("shape", {rows});
  node.set_number("unitSI", 1.0);
}

/// Smallest extent with offset + extent > highest in double arithmetic: the upper bound of a patch is exclusive.
double exclusive_extent(double lowest, double highest) {
  double extent = highest - lowest;
  for (double step = std::numeric_limits<double>::denorm_min(); !(lowest + extent > highest); step *= 2) {
    extent = std::max(std::nextafter(extent, std::numeric_limits<double>::infinity()), extent + step);
  }
  return extent;
}

}  // namespace

std::string particles_group(const std::string& iteration) {
  return "/data/" + iteration + "/particles";
}

void write_frame(const hdf5::Output& output, const std::string& iteration, const IterationTime& time,
                 const WriteOptions& options) {
  hdf5::Node root = output.root();
  root.set_text("openPMD", "1.1.0");
  root.set_u32("openPMDextension", 0);
  root.set_text("basePath", "/data/%T/");
  root.set_text("iterationEncoding", "groupBased");
  root.set_text("iterationFormat", "/data/%T/");
  root.set_text("particlesPath", "particles/");
  root.set_text("software", options.software);
  root.set_text("softwareVersion", options.software_version);
  root.set_text("date", date_text());
  root.set_text("author", options.author.empty() ? "not stated" : options.author);
  if (!options.comment.empty()) root.set_text("comment", options.comment);
  root.close();
  output.create_group("/data").close();
  hdf5::Node group = output.create_group("/data/" + iteration);
  group.set_number("time", time.time);
  group.set_number("dt", time.dt);
  group.set_number("timeUnitSI", time.unit);
  group.close();
  output.create_group(particles_group(iteration)).close();
}

void write_run(const hdf5::Output& output, const RunAttributes& run) {
  if (run.empty()) return;
  hdf5::Node group = output.create_group("/run");
  for (const NamedValue& entry : run) {
    if (const double* number = std::get_if<double>(&entry.value)) group.set_number(entry.name.c_str(), *number);
    if (const std::int64_t* whole = std::get_if<std::int64_t>(&entry.value)) group.set_integer(entry.name.c_str(), *whole);
    if (const std::string* text = std::get_if<std::string>(&entry.value)) group.set_text(entry.name.c_str(), *text);
  }
  group.close();
}

SpeciesOutput::SpeciesOutput(const hdf5::Output& output, std::string group, std::size_t rows, const Hooks& hooks)
    : output_(output), group_(std::move(group)), rows_(rows), hooks_(hooks), buffer_(std::min(rows, hdf5::kSlab)) {
  output_.create_group(group_).close();
}

void SpeciesOutput::between_slabs() const {
  if (hooks_.should_stop && hooks_.should_stop()) throw Error(ErrorCode::cancelled, "stopped by the caller");
}

void SpeciesOutput::write_column(hdf5::ColumnOutput& column, const ColumnFill& fill) {
  for (std::size_t start = 0; start < rows_; start += hdf5::kSlab) {
    const std::size_t count = std::min(hdf5::kSlab, rows_ - start);
    column.append(fill(start, count, buffer_.data()), count);
    between_slabs();
  }
  column.finish();
}

void SpeciesOutput::vector_group(const std::string& record, const RecordStyle& style) {
  hdf5::Node group = output_.create_group(path(record));
  set_record(group, style);
  group.close();
}

void SpeciesOutput::scalar(const std::string& record, const RecordStyle& style, const ColumnFill& fill) {
  hdf5::ColumnOutput column = output_.create_column(path(record), hdf5::Stored::float64, rows_);
  set_record(column, style);
  column.set_number("unitSI", 1.0);
  write_column(column, fill);
}

void SpeciesOutput::component(const std::string& name, const ColumnFill& fill) {
  hdf5::ColumnOutput column = output_.create_column(path(name), hdf5::Stored::float64, rows_);
  column.set_number("unitSI", 1.0);
  write_column(column, fill);
}

void SpeciesOutput::scalar_constant(const std::string& record, const RecordStyle& style, double value) {
  hdf5::Node group = output_.create_group(path(record));
  set_record(group, style);
  set_constant(group, value, rows_);
  group.close();
}

void SpeciesOutput::component_constant(const std::string& name, double value) {
  hdf5::Node group = output_.create_group(path(name));
  set_constant(group, value, rows_);
  group.close();
}

template <class Integer>
void SpeciesOutput::integers(const std::string& name, const RecordStyle* style,
                             const std::function<void(std::size_t, std::size_t, Integer*)>& fill) {
  constexpr hdf5::Stored kStored = std::is_signed_v<Integer> ? hdf5::Stored::int64 : hdf5::Stored::uint64;
  hdf5::ColumnOutput column = output_.create_column(path(name), kStored, rows_);
  if (style) set_record(column, *style);
  column.set_number("unitSI", 1.0);
  std::vector<Integer> values(std::min(rows_, hdf5::kSlab));
  for (std::size_t start = 0; start < rows_; start += hdf5::kSlab) {
    const std::size_t count = std::min(hdf5::kSlab, rows_ - start);
    fill(start, count, values.data());
    column.append(values.data(), count);
    between_slabs();
  }
  column.finish();
}
template void SpeciesOutput::integers<std::int64_t>(const std::string&, const RecordStyle*,
                                                    const std::function<void(std::size_t, std::size_t, std::int64_t*)>&);
template void SpeciesOutput::integers<std::uint64_t>(const std::string&, const RecordStyle*,
                                                     const std::function<void(std::size_t, std::size_t, std::uint64_t*)>&);

void SpeciesOutput::patches(const double* x, const double* y, const double* z) {
  const double* places[3] = {x, y, z};
  output_.create_group(path("particlePatches")).close();
  const std::uint64_t rows = rows_, zero = 0;
  for (const auto& [name, value] : {std::pair{"numParticles", &rows}, std::pair{"numParticlesOffset", &zero}}) {
    hdf5::ColumnOutput column = output_.create_column(path(std::string("particlePatches/") + name), hdf5::Stored::uint64, 1);
    column.set_number("unitSI", 1.0);
    column.append(value, 1);
    column.finish();
  }
  for (const char* record : {"offset", "extent"}) {
    const std::string name = std::string("particlePatches/") + record;
    hdf5::Node group = output_.create_group(path(name));
    group.set_numbers("unitDimension", dimension::kLength.data(), 7);
    group.close();
    for (int axis = 0; axis < 3; ++axis) {
      const auto [low, high] = std::minmax_element(places[axis], places[axis] + rows_);
      const double offset = rows_ ? *low : 0.0, extent = rows_ ? exclusive_extent(*low, *high) : 0.0;
      hdf5::ColumnOutput column = output_.create_column(path(name + "/" + kAxes[axis]), hdf5::Stored::float64, 1);
      column.set_number("unitSI", 1.0);
      column.append(record[0] == 'o' ? &offset : &extent, 1);
      column.finish();
    }
  }
}

}  // namespace farsum::io::openpmd
