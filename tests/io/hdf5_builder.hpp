#pragma once
// Writes HDF5 files for the tests straight through the C interface, independently of io/, so that every quirk can be made.
#include <hdf5.h>

#include <cstdint>
#include <filesystem>
#include <stdexcept>
#include <string>
#include <vector>

namespace farsum::io_test {

/// A folder of its own for one test, removed at the end.
class Folder {
 public:
  Folder();
  ~Folder();
  Folder(const Folder&) = delete;
  Folder& operator=(const Folder&) = delete;
  std::string file(const std::string& name) const { return (path_ / name).string(); }
  std::string path() const { return path_.string(); }
  /// Names in the folder, sorted.
  std::vector<std::string> names() const;

 private:
  std::filesystem::path path_;
};

class Hdf5Builder {
 public:
  enum class Open { create, modify };
  Hdf5Builder(const std::string& path, Open open);
  ~Hdf5Builder();
  Hdf5Builder(const Hdf5Builder&) = delete;
  Hdf5Builder& operator=(const Hdf5Builder&) = delete;

  hid_t id() const { return file_; }
  void group(const std::string& path);  ///< with all groups above
  void remove(const std::string& path);
  void remove_attribute(const std::string& path, const std::string& name);

  void text(const std::string& path, const std::string& name, const std::string& value);
  void variable_text(const std::string& path, const std::string& name, const std::string& value);
  void number(const std::string& path, const std::string& name, double value);
  void integer(const std::string& path, const std::string& name, std::int64_t value);
  void numbers(const std::string& path, const std::string& name, const std::vector<double>& values);
  void integers(const std::string& path, const std::string& name, const std::vector<std::int64_t>& values);

  void column(const std::string& path, const std::vector<double>& values, hid_t stored = H5T_IEEE_F64LE,
              hid_t properties = H5P_DEFAULT);
  void integer_column(const std::string& path, const std::vector<std::int64_t>& values, hid_t stored = H5T_STD_U64LE);
  /// A data set of `rows` declared elements, nothing written.
  void declared(const std::string& path, hsize_t rows, hid_t properties = H5P_DEFAULT);
  void constant(const std::string& path, double value, std::uint64_t rows);  ///< value, shape and unitSI 1

  /// unitDimension, timeOffset, macroWeighted, weightingPower.
  void record(const std::string& path, const std::vector<double>& dimension, int macro_weighted, double weighting_power);

 private:
  void attribute(const std::string& path, const std::string& name, hid_t stored, hid_t memory, hsize_t count, bool scalar,
                 const void* value);
  hid_t file_;
};

inline const std::vector<double> kLength{1, 0, 0, 0, 0, 0, 0}, kCharge{0, 0, 1, 1, 0, 0, 0}, kMass{0, 1, 0, 0, 0, 0, 0},
    kMomentum{1, 1, -1, 0, 0, 0, 0}, kTime{0, 0, 1, 0, 0, 0, 0}, kNone{0, 0, 0, 0, 0, 0, 0};

/// Root and iteration attributes of version 1.1.0.
void write_frame(Hdf5Builder& file, const std::string& iteration = "0");
/// A species that follows all rules: x = row, y = row / 2, z = -row (m), charge 2e constant, weighting row + 1, id 100 + row,
/// mass constant 1e-26 kg, momentum 1e-22 kg m/s along z.
void write_species(Hdf5Builder& file, const std::string& group, std::size_t rows);
/// A whole file with one species "ions" in iteration 0.
void write_bunch(const std::string& path, std::size_t rows);
inline const std::string kIons = "/data/0/particles/ions";

/// Species in the style of bunch files: weight as positive charge (1e-15 C), speciesType electron, totalCharge,
/// particleStatus 1.
void write_bunch_style(Hdf5Builder& file, const std::string& group, std::size_t rows);

template <class Change>
void modify(const std::string& path, Change&& change) {
  Hdf5Builder file(path, Hdf5Builder::Open::modify);
  change(file);
}

}  // namespace farsum::io_test
