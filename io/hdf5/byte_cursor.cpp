#include "io/hdf5/byte_cursor.hpp"

#include <fmt/format.h>

#include <cstring>
#include <limits>

#include "fmm/error.hpp"

namespace farsum::io::hdf5 {

void ByteCursor::fail(const std::string& message) const {
  throw Error(ErrorCode::file_damaged, "the HDF5 structure is damaged: " + message, *file_, fmt::format("byte {}", offset_),
              "restore the file from a copy, or wait until its writer has closed it");
}

void ByteCursor::skip(std::uint64_t bytes) {
  if (bytes > size_) fail(fmt::format("the {} ends {} bytes too early", name_, bytes - size_));
  data_ += bytes;
  size_ -= bytes;
  offset_ += bytes;
}

std::uint64_t ByteCursor::number(std::size_t bytes) {
  const unsigned char* const begin = data_;
  skip(bytes);
  std::uint64_t value = 0;
  for (std::size_t i = bytes; i-- > 0;) {
    if (value >> 56) return std::numeric_limits<std::uint64_t>::max();
    value = value << 8 | begin[i];
  }
  return value;
}

ByteCursor ByteCursor::take(std::uint64_t bytes, const char* name) {
  if (bytes > size_) fail(fmt::format("the {} of {} bytes does not fit into the {}, {} are left", name, bytes, name_, size_));
  const ByteCursor piece(*file_, name, offset_, data_, bytes);
  skip(bytes);
  return piece;
}

std::size_t ByteCursor::text() {
  const void* const end = size_ == 0 ? nullptr : std::memchr(data_, 0, size_);
  if (end == nullptr) fail(fmt::format("a text in the {} has no end", name_));
  const std::size_t length = static_cast<std::size_t>(static_cast<const unsigned char*>(end) - data_) + 1;
  skip(length);
  return length;
}

bool ByteCursor::begins_with(std::string_view signature) const noexcept {
  return size_ >= signature.size() && std::memcmp(data_, signature.data(), signature.size()) == 0;
}

void ByteCursor::expect(std::string_view signature) {
  if (!begins_with(signature)) fail(fmt::format("the {} does not begin with {}", name_, signature));
  skip(signature.size());
}

}  // namespace farsum::io::hdf5
