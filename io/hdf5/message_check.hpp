#pragma once
// Do the contents of one object header message fit into the message? Section and message numbers are those of the HDF5 File
// Format Specification, version 3.0, chapter IV.A.2. What the message does not fill, and encodings that are not known here,
// pass; contents that need more bytes than the message has are file_damaged.
#include <cstdint>
#include <optional>

#include "io/hdf5/byte_cursor.hpp"

namespace farsum::io::hdf5 {

/// Bytes of an address and of a length in the file, from the superblock.
struct FieldSizes {
  std::size_t offset = 8, length = 8;
};

/// The address field when there is nothing.
constexpr std::uint64_t kNoAddress = ~std::uint64_t{0};

/// The address at the cursor; kNoAddress when all its bits are set.
std::uint64_t read_address(ByteCursor& at, FieldSizes sizes);

enum MessageType : unsigned {
  kDataspaceMessage = 0x01,
  kLinkInfoMessage = 0x02,
  kDatatypeMessage = 0x03,
  kOldFillMessage = 0x04,
  kFillMessage = 0x05,
  kLinkMessage = 0x06,
  kExternalFilesMessage = 0x07,
  kLayoutMessage = 0x08,
  kGroupInfoMessage = 0x0A,
  kFiltersMessage = 0x0B,
  kAttributeMessage = 0x0C,
  kOldTimeMessage = 0x0E,
  kContinuationMessage = 0x10,
  kSymbolTableMessage = 0x11,
  kTimeMessage = 0x12,
  kTreeSizesMessage = 0x13,
  kAttributeInfoMessage = 0x15,
  kReferencesMessage = 0x16,
  kCacheImageMessage = 0x18,
};

/// Bit of the message flags: the body only says where the contents are.
constexpr unsigned kSharedFlag = 0x02;

/// Walks the datatype at the cursor; bytes of one element, or empty for an encoding that is not known here.
std::optional<std::uint64_t> check_datatype(ByteCursor& body);

/// Walks the dataspace at the cursor; number of elements (saturated), or empty for a version that is not known here.
std::optional<std::uint64_t> check_dataspace(ByteCursor& body, FieldSizes sizes);

/// The address a hard link leads to; empty for links of other kinds and unknown versions.
std::optional<std::uint64_t> check_link(ByteCursor body, FieldSizes sizes);

/// Checks a message of any type; types that are not listed above pass.
void check_message(unsigned type, unsigned flags, ByteCursor body, FieldSizes sizes);

}  // namespace farsum::io::hdf5
