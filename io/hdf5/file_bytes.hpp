#pragma once
// Pieces of a file, each kept inside the file; the sum of all pieces is bounded.
#include <cstdint>
#include <fstream>
#include <string>
#include <vector>

#include "io/hdf5/byte_cursor.hpp"

namespace farsum::io::hdf5 {

/// A piece of the file in memory.
struct FilePiece {
  std::uint64_t offset;
  std::vector<unsigned char> bytes;
  const char* name;
};

class FileBytes {
 public:
  explicit FileBytes(const std::string& path);

  bool readable() const { return stream_.good(); }
  const std::string& path() const noexcept { return path_; }
  std::uint64_t size() const noexcept { return size_; }
  /// Bytes of the file before the superblock; addresses count from there.
  std::uint64_t base() const noexcept { return base_; }
  void set_base(std::uint64_t base) noexcept { base_ = base; }

  /// Throws file_damaged when the piece reaches beyond the end of the file, or when more has been read than structures that do
  /// not overlap can have.
  FilePiece read(std::uint64_t address, std::uint64_t bytes, const char* name);
  /// As read(), but as much of it as there is.
  FilePiece read_up_to(std::uint64_t address, std::uint64_t bytes, const char* name);
  ByteCursor cursor(const FilePiece& piece) const {
    return {path_, piece.name, piece.offset, piece.bytes.data(), piece.bytes.size()};
  }

 private:
  std::string path_;
  std::ifstream stream_;
  std::uint64_t size_ = 0, base_ = 0, allowance_ = 0;
};

}  // namespace farsum::io::hdf5
