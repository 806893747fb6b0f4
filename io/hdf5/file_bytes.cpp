#include "io/hdf5/file_bytes.hpp"

#include <fmt/format.h>

#include <algorithm>

#include "fmm/error.hpp"

namespace farsum::io::hdf5 {
namespace {

/// Sound structures do not overlap, and a piece is read at most twice: first its beginning, for its size, then all of it.
constexpr std::uint64_t kReadingsPerByte = 4;
/// The search for the signature and the beginnings of pieces in small files.
constexpr std::uint64_t kExtraBytes = 1u << 16;

}  // namespace

FileBytes::FileBytes(const std::string& path) : path_(path), stream_(path, std::ios::binary | std::ios::ate) {
  if (!stream_) return;
  size_ = static_cast<std::uint64_t>(stream_.tellg());
  allowance_ = kReadingsPerByte * size_ + kExtraBytes;
}

FilePiece FileBytes::read(std::uint64_t address, std::uint64_t bytes, const char* name) {
  const std::uint64_t behind_base = size_ - base_;
  const bool inside = address <= behind_base && bytes <= behind_base - address;
  const ByteCursor place(path_, name, base_ + std::min(address, behind_base), nullptr, 0);
  if (!inside)
    place.fail(fmt::format("the {} of {} bytes at address {} reaches beyond the end of the file", name, bytes, address));
  if (bytes > allowance_) place.fail(fmt::format("the {} overlaps other structures", name));
  allowance_ -= bytes;
  FilePiece piece{base_ + address, std::vector<unsigned char>(bytes), name};
  stream_.clear();
  stream_.seekg(static_cast<std::streamoff>(piece.offset));
  stream_.read(reinterpret_cast<char*>(piece.bytes.data()), static_cast<std::streamsize>(bytes));
  if (static_cast<std::uint64_t>(stream_.gcount()) != bytes) place.fail(fmt::format("the {} cannot be read", name));
  return piece;
}

FilePiece FileBytes::read_up_to(std::uint64_t address, std::uint64_t bytes, const char* name) {
  const std::uint64_t behind_base = size_ - base_;
  return read(address, std::min(bytes, behind_base - std::min(address, behind_base)), name);
}

}  // namespace farsum::io::hdf5
