#include "tests/io/hdf5_builder.hpp"

#include <unistd.h>

#include <algorithm>
#include <cstdlib>

namespace farsum::io_test {
namespace {

void must(bool good, const std::string& what) {
  if (!good) throw std::runtime_error("test file cannot be built: " + what);
}

}  // namespace

Folder::Folder() {
  std::string name = (std::filesystem::temp_directory_path() / ("farsum_io_" + std::string(6, 'X'))).string();
  must(mkdtemp(name.data()) != nullptr, name);
  path_ = name;
}

Folder::~Folder() {
  std::error_code ignored;
  std::filesystem::permissions(path_, std::filesystem::perms::owner_all, ignored);
  std::filesystem::remove_all(path_, ignored);
}

std::vector<std::string> Folder::names() const {
  std::vector<std::string> names;
  for (const auto& entry : std::filesystem::directory_iterator(path_)) names.push_back(entry.path().filename().string());
  std::sort(names.begin(), names.end());
  return names;
}

Hdf5Builder::Hdf5Builder(const std::string& path, Open open)
    : file_(open == Open::create ? H5Fcreate(path.c_str(), H5F_ACC_TRUNC, H5P_DEFAULT, H5P_DEFAULT)
                                 : H5Fopen(path.c_str(), H5F_ACC_RDWR, H5P_DEFAULT)) {
  must(file_ >= 0, path);
}

Hdf5Builder::~Hdf5Builder() {
  H5Fclose(file_);
}

void Hdf5Builder::group(const std::string& path) {
  for (std::size_t end = path.find('/', 1);; end = path.find('/', end + 1)) {
    const std::string part = path.substr(0, end);
    if (part.size() > 1 && H5Lexists(file_, part.c_str(), H5P_DEFAULT) <= 0) {
      const hid_t made = H5Gcreate2(file_, part.c_str(), H5P_DEFAULT, H5P_DEFAULT, H5P_DEFAULT);
      must(made >= 0, part);
      H5Gclose(made);
    }
    if (end == std::string::npos) return;
  }
}

void Hdf5Builder::remove(const std::string& path) {
  must(H5Ldelete(file_, path.c_str(), H5P_DEFAULT) >= 0, path);
}

void Hdf5Builder::remove_attribute(const std::string& path, const std::string& name) {
  must(H5Adelete_by_name(file_, path.c_str(), name.c_str(), H5P_DEFAULT) >= 0, path + "@" + name);
}

void Hdf5Builder::attribute(const std::string& path, const std::string& name, hid_t stored, hid_t memory, hsize_t count,
                            bool scalar, const void* value) {
  if (H5Aexists_by_name(file_, path.c_str(), name.c_str(), H5P_DEFAULT) > 0) remove_attribute(path, name);
  const hid_t space = scalar ? H5Screate(H5S_SCALAR) : H5Screate_simple(1, &count, nullptr);
  const hid_t made = H5Acreate_by_name(file_, path.c_str(), name.c_str(), stored, space, H5P_DEFAULT, H5P_DEFAULT, H5P_DEFAULT);
  must(made >= 0 && H5Awrite(made, memory, value) >= 0, path + "@" + name);
  H5Aclose(made);
  H5Sclose(space);
}

void Hdf5Builder::text(const std::string& path, const std::string& name, const std::string& value) {
  const hid_t type = H5Tcopy(H5T_C_S1);
  H5Tset_size(type, std::max<std::size_t>(1, value.size()));
  H5Tset_strpad(type, H5T_STR_NULLPAD);
  attribute(path, name, type, type, 1, true, value.c_str());
  H5Tclose(type);
}

void Hdf5Builder::variable_text(const std::string& path, const std::string& name, const std::string& value) {
  const hid_t type = H5Tcopy(H5T_C_S1);
  H5Tset_size(type, H5T_VARIABLE);
  H5Tset_cset(type, H5T_CSET_UTF8);
  const char* pointer = value.c_str();
  attribute(path, name, type, type, 1, true, &pointer);
  H5Tclose(type);
}

void Hdf5Builder::number(const std::string& path, const std::string& name, double value) {
  attribute(path, name, H5T_IEEE_F64LE, H5T_NATIVE_DOUBLE, 1, true, &value);
}
void Hdf5Builder::integer(const std::string& path, const std::string& name, std::int64_t value) {
  attribute(path, name, H5T_STD_I64LE, H5T_NATIVE_INT64, 1, true, &value);
}
void Hdf5Builder::numbers(const std::string& path, const std::string& name, const std::vector<double>& values) {
  attribute(path, name, H5T_IEEE_F64LE, H5T_NATIVE_DOUBLE, values.size(), false, values.data());
}
void Hdf5Builder::integers(const std::string& path, const std::string& name, const std::vector<std::int64_t>& values) {
  attribute(path, name, H5T_STD_I64LE, H5T_NATIVE_INT64, values.size(), false, values.data());
}

void Hdf5Builder::column(const std::string& path, const std::vector<double>& values, hid_t stored, hid_t properties) {
  const hsize_t count = values.size();
  const hid_t space = H5Screate_simple(1, &count, nullptr);
  const hid_t made = H5Dcreate2(file_, path.c_str(), stored, space, H5P_DEFAULT, properties, H5P_DEFAULT);
  must(made >= 0, path);
  must(count == 0 || H5Dwrite(made, H5T_NATIVE_DOUBLE, H5S_ALL, H5S_ALL, H5P_DEFAULT, values.data()) >= 0, path);
  H5Dclose(made);
  H5Sclose(space);
}

void Hdf5Builder::integer_column(const std::string& path, const std::vector<std::int64_t>& values, hid_t stored) {
  const hsize_t count = values.size();
  const hid_t space = H5Screate_simple(1, &count, nullptr);
  const hid_t made = H5Dcreate2(file_, path.c_str(), stored, space, H5P_DEFAULT, H5P_DEFAULT, H5P_DEFAULT);
  must(made >= 0 && (count == 0 || H5Dwrite(made, H5T_NATIVE_INT64, H5S_ALL, H5S_ALL, H5P_DEFAULT, values.data()) >= 0), path);
  H5Dclose(made);
  H5Sclose(space);
}

void Hdf5Builder::declared(const std::string& path, hsize_t rows, hid_t properties) {
  const hid_t space = H5Screate_simple(1, &rows, nullptr);
  const hid_t made = H5Dcreate2(file_, path.c_str(), H5T_IEEE_F64LE, space, H5P_DEFAULT, properties, H5P_DEFAULT);
  must(made >= 0, path);
  H5Dclose(made);
  H5Sclose(space);
}

void Hdf5Builder::constant(const std::string& path, double value, std::uint64_t rows) {
  group(path);
  number(path, "value", value);
  attribute(path, "shape", H5T_STD_U64LE, H5T_NATIVE_UINT64, 1, false, &rows);
  number(path, "unitSI", 1);
}

void Hdf5Builder::record(const std::string& path, const std::vector<double>& dimension, int macro_weighted,
                         double weighting_power) {
  numbers(path, "unitDimension", dimension);
  number(path, "timeOffset", 0);
  const std::uint32_t flag = static_cast<std::uint32_t>(macro_weighted);
  attribute(path, "macroWeighted", H5T_STD_U32LE, H5T_NATIVE_UINT32, 1, true, &flag);
  number(path, "weightingPower", weighting_power);
}

void write_frame(Hdf5Builder& file, const std::string& iteration) {
  file.text("/", "openPMD", "1.1.0");
  file.integer("/", "openPMDextension", 0);
  file.text("/", "basePath", "/data/%T/");
  file.text("/", "iterationEncoding", "groupBased");
  file.text("/", "iterationFormat", "/data/%T/");
  file.text("/", "particlesPath", "particles/");
  for (const char* name : {"author", "software", "softwareVersion", "date"}) file.text("/", name, "test");
  const std::string group = "/data/" + iteration;
  file.group(group + "/particles");
  file.number(group, "time", 0);
  file.number(group, "dt", 0);
  file.number(group, "timeUnitSI", 1);
}

void write_species(Hdf5Builder& file, const std::string& group, std::size_t rows) {
  std::vector<double> x(rows), y(rows), z(rows), weight(rows), pz(rows, 1e-22);
  std::vector<std::int64_t> id(rows);
  for (std::size_t i = 0; i < rows; ++i) {
    x[i] = static_cast<double>(i);
    y[i] = 0.5 * x[i];
    z[i] = -x[i];
    weight[i] = x[i] + 1;
    id[i] = 100 + static_cast<std::int64_t>(i);
  }
  for (const char* record : {"position", "positionOffset", "momentum"}) file.group(group + "/" + record);
  file.record(group + "/position", kLength, 0, 0);
  file.record(group + "/positionOffset", kLength, 0, 0);
  file.record(group + "/momentum", kMomentum, 0, 1);
  const std::vector<double>* places[3] = {&x, &y, &z};
  for (int axis = 0; axis < 3; ++axis) {
    const std::string name(1, "xyz"[axis]);
    file.column(group + "/position/" + name, *places[axis]);
    file.number(group + "/position/" + name, "unitSI", 1);
    file.constant(group + "/positionOffset/" + name, 0, rows);
    if (axis < 2) file.constant(group + "/momentum/" + name, 0, rows);
  }
  file.column(group + "/momentum/z", pz);
  file.number(group + "/momentum/z", "unitSI", 1);
  file.constant(group + "/charge", 2 * 1.602176634e-19, rows);
  file.record(group + "/charge", kCharge, 0, 1);
  file.constant(group + "/mass", 1e-26, rows);
  file.record(group + "/mass", kMass, 0, 1);
  file.column(group + "/weighting", weight);
  file.number(group + "/weighting", "unitSI", 1);
  file.record(group + "/weighting", kNone, 1, 1);
  file.integer_column(group + "/id", id);
  file.number(group + "/id", "unitSI", 1);
  file.record(group + "/id", kNone, 0, 0);
}

void write_bunch(const std::string& path, std::size_t rows) {
  Hdf5Builder file(path, Hdf5Builder::Open::create);
  write_frame(file);
  write_species(file, kIons, rows);
}

void write_bunch_style(Hdf5Builder& file, const std::string& group, std::size_t rows) {
  std::vector<double> places(rows), momentum(rows, 1e6);
  for (std::size_t i = 0; i < rows; ++i) places[i] = 1e-3 * static_cast<double>(i);
  file.group(group == "/" ? "/position" : group + "/position");
  file.group(group == "/" ? "/momentum" : group + "/momentum");
  const std::string base = group == "/" ? "" : group;
  for (const char* axis : {"x", "y", "z"}) {
    for (const char* record : {"/position/", "/momentum/"}) {
      const std::string path = base + record + axis;
      const bool place = record[1] == 'p';
      file.column(path, place ? places : momentum);
      if (place)
        file.integer(path, "unitSI", 1);
      else
        file.number(path, "unitSI", 5.344285992678308e-28);
      file.integers(path, "unitDimension",
                    place ? std::vector<std::int64_t>{1, 0, 0, 0, 0, 0, 0} : std::vector<std::int64_t>{1, 1, -1, 0, 0, 0, 0});
      file.variable_text(path, "unitSymbol", "m");
    }
  }
  file.constant(base + "/weight", 1e-15, rows);
  file.integers(base + "/weight", "unitDimension", {0, 0, 1, 1, 0, 0, 0});
  file.constant(base + "/particleStatus", 1, rows);
  file.text(group, "speciesType", "electron");
  file.numbers(group, "totalCharge", {1e-15 * static_cast<double>(rows)});
  file.numbers(group, "chargeUnitSI", {1});
}

}  // namespace farsum::io_test
