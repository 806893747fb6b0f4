#pragma once
// Creates HDF5 files, groups, attributes and one-dimensional data sets; every call is checked, also those that close.
#include <cstdint>
#include <string>
#include <string_view>
#include <vector>

#include "io/hdf5/handle.hpp"

namespace farsum::io::hdf5 {

/// A group or data set under construction, for its attributes.
class Node {
 public:
  Node(Handle handle, std::string file, std::string object)
      : handle_(std::move(handle)), file_(std::move(file)), object_(std::move(object)) {}

  hid_t id() const noexcept { return handle_.get(); }
  const std::string& object() const noexcept { return object_; }

  // Types are those that strict readers of openPMD ask for: fixed-length text, scalar dataspaces, IEEE 64-bit floats.
  void set_text(const char* name, std::string_view value) const;
  void set_number(const char* name, double value) const;
  void set_integer(const char* name, std::int64_t value) const;
  void set_u32(const char* name, std::uint32_t value) const;
  void set_numbers(const char* name, const double* values, std::size_t count) const;  ///< one-dimensional
  void set_u64s(const char* name, const std::vector<std::uint64_t>& values) const;    ///< one-dimensional
  void close();

 protected:
  void write_attribute(const char* name, hid_t type, hid_t memory_type, hid_t space, const void* value) const;
  void write_scalar(const char* name, hid_t type, hid_t memory_type, const void* value) const;
  void write_list(const char* name, hid_t type, hid_t memory_type, const void* values, std::size_t count) const;

  Handle handle_;
  std::string file_, object_;
};

enum class Stored { float64, int64, uint64 };

/// A data set written front to back by slabs. Floats lie contiguous; integers are shuffled and deflated in chunks.
class ColumnOutput : public Node {
 public:
  ColumnOutput(hid_t parent, const std::string& file, const std::string& object, const std::string& name, Stored stored,
               std::uint64_t size);
  void append(const double* values, std::size_t count);
  void append(const std::int64_t* values, std::size_t count);
  void append(const std::uint64_t* values, std::size_t count);
  /// Throws when fewer elements were written than promised.
  void finish();

 private:
  void append_as(hid_t type, const void* values, std::size_t count);
  std::uint64_t size_ = 0, written_ = 0;
};

/// Elements of one slab when writing: one chunk, 1 MiB of double.
inline constexpr std::size_t kSlab = 131072;

class Output {
 public:
  /// Creates `path`, which must not exist.
  explicit Output(const std::string& path);
  Node root() const;
  /// Creates a group at an absolute path; its parents must exist.
  Node create_group(const std::string& object) const;
  ColumnOutput create_column(const std::string& object, Stored stored, std::uint64_t size) const;
  /// Flushes and closes; throws where any byte may be missing.
  void close();

 private:
  std::string path_;
  Handle file_;
};

}  // namespace farsum::io::hdf5
