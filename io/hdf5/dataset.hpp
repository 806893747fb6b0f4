#pragma once
// Numeric one-dimensional data sets read by slabs. Opening one checks type, rank, storage and layout, so that a size that the
// file only declares is never believed.
#include <cstddef>
#include <cstdint>
#include <string>

#include "io/hdf5/input_file.hpp"

namespace farsum::io::hdf5 {

enum class NumberKind { floating, signed_integer, unsigned_integer };

class Dataset {
 public:
  /// Throws item_wrong_type (no numbers), item_wrong_size (rank), file_unsafe (data in other files, foreign filter),
  /// file_damaged (less stored than declared).
  Dataset(const InputFile& file, const std::string& object);

  const std::string& object() const noexcept { return object_; }
  std::uint64_t size() const noexcept { return size_; }
  NumberKind number_kind() const noexcept { return kind_; }
  /// A whole number of chunks near `wanted` elements: slabs that start at multiples of it never read a chunk twice.
  std::size_t slab_size(std::size_t wanted) const noexcept;

  /// Elements [start, start + count) converted to the type asked for. Integers must be read with the signedness of the file.
  void read(std::uint64_t start, std::size_t count, double* values) const;
  void read(std::uint64_t start, std::size_t count, std::int64_t* values) const;
  void read(std::uint64_t start, std::size_t count, std::uint64_t* values) const;

 private:
  void check_type();
  void check_shape();
  void check_layout(const InputFile& file);
  void check_virtual(const InputFile& file, hid_t creation) const;
  void check_filters(hid_t creation) const;
  void check_storage() const;
  void read_as(hid_t type, std::uint64_t start, std::size_t count, void* values) const;
  [[noreturn]] void refuse(ErrorCode code, const std::string& message, const std::string& remedy = {}) const;

  std::string file_, object_;
  bool allow_external_;
  Handle dataset_, space_;
  NumberKind kind_ = NumberKind::floating;
  std::size_t type_bytes_ = 0, chunk_ = 0;
  std::uint64_t size_ = 0;
};

}  // namespace farsum::io::hdf5
