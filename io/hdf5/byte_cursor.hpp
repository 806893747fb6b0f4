#pragma once
// A bounded view of a piece of a file that is not trusted: whatever does not fit is an Error that names the file and the byte.
#include <cstddef>
#include <cstdint>
#include <string>
#include <string_view>

namespace farsum::io::hdf5 {

class ByteCursor {
 public:
  /// `size` bytes at `data`, which lie at byte `offset` of `file`; `name` says in messages what the piece is. All three are
  /// borrowed.
  ByteCursor(const std::string& file, const char* name, std::uint64_t offset, const unsigned char* data, std::size_t size)
      : file_(&file), name_(name), offset_(offset), data_(data), size_(size) {}

  std::size_t left() const noexcept { return size_; }
  std::uint64_t offset() const noexcept { return offset_; }  ///< of the next byte, counted from the start of the file

  /// The next `bytes` bytes as an unsigned little-endian number; 2^64 - 1 when it does not fit into 64 bits.
  std::uint64_t number(std::size_t bytes);
  void skip(std::uint64_t bytes);
  /// Skips as many bytes as bring `used` to a multiple of 8.
  void pad(std::uint64_t used) { skip((8 - used % 8) % 8); }
  /// The next `bytes` bytes as a piece of their own.
  ByteCursor take(std::uint64_t bytes, const char* name);
  /// Skips a text with its NUL and returns its length with the NUL.
  std::size_t text();
  bool begins_with(std::string_view signature) const noexcept;
  /// Skips the signature, which must be there.
  void expect(std::string_view signature);

  /// Throws file_damaged with the message and the position.
  [[noreturn]] void fail(const std::string& message) const;

 private:
  const std::string* file_;
  const char* name_;
  std::uint64_t offset_;
  const unsigned char* data_;
  std::size_t size_;
};

}  // namespace farsum::io::hdf5
