#include "io/hdf5/message_check.hpp"

#include <fmt/format.h>

namespace farsum::io::hdf5 {
namespace {

/// Where the contents of a shared message are: in another object header, or in the heap of shared messages.
void check_shared(ByteCursor body, FieldSizes sizes) {
  const std::uint64_t version = body.number(1), type = body.number(1);
  if (version == 1) body.skip(6 + sizes.length + sizes.offset);
  if (version == 2) body.skip(sizes.offset);
  if (version == 3) body.skip(type == 1 ? 8 : sizes.offset);
}

void check_attribute(ByteCursor body, FieldSizes sizes) {
  const std::uint64_t version = body.number(1);
  if (version < 1 || version > 3) return;
  const std::uint64_t flags = body.number(1), name_size = body.number(2), type_size = body.number(2),
                      space_size = body.number(2);
  if (version == 3) body.skip(1);  // character set of the name
  const auto part = [&](std::uint64_t size, const char* name) {
    const ByteCursor piece = body.take(size, name);
    if (version == 1) body.pad(size);
    return piece;
  };
  ByteCursor name = part(name_size, "attribute name");
  ByteCursor type = part(type_size, "attribute datatype");
  ByteCursor space = part(space_size, "attribute dataspace");
  name.text();
  std::optional<std::uint64_t> element, count;
  if (version > 1 && flags & 1u)
    check_shared(type, sizes);
  else
    element = check_datatype(type);
  if (version > 1 && flags & 2u)
    check_shared(space, sizes);
  else
    count = check_dataspace(space, sizes);
  if (!element || !count || *element == 0) return;
  if (*count > body.left() / *element)
    body.fail(
        fmt::format("an attribute has {} elements of {} bytes, but only {} bytes of data", *count, *element, body.left()));
}

void check_fill(ByteCursor body) {
  const std::uint64_t version = body.number(1);
  if (version < 1 || version > 3) return;
  const std::uint64_t flags = body.number(1);
  bool has_size = flags & 0x20u;
  if (version < 3) {
    body.skip(1);
    const std::uint64_t defined = body.number(1);
    has_size = version == 1 || defined != 0;
  }
  if (!has_size) return;
  const std::uint64_t size = body.number(4);
  if (size < 0x80000000u) body.take(size, "fill value");  // a signed field: negative sizes mean that there is no value
}

void check_layout(ByteCursor body, FieldSizes sizes) {
  const std::uint64_t version = body.number(1);
  if (version == 1 || version == 2) {
    const std::uint64_t rank = body.number(1), layout = body.number(1);
    body.skip(5 + (layout == 0 ? 0 : sizes.offset) + 4 * rank);
    if (layout == 0) body.take(body.number(4), "compact data");
  } else if (version == 3 || version == 4) {
    const std::uint64_t layout = body.number(1);
    if (layout == 0) body.take(body.number(2), "compact data");
    if (layout == 1) body.skip(sizes.offset + sizes.length);
    if (layout == 2 && version == 3) body.skip(sizes.offset + 4 * body.number(1));
  }
}

void check_filters(ByteCursor body) {
  const std::uint64_t version = body.number(1), filters = body.number(1);
  if (version != 1 && version != 2) return;
  if (version == 1) body.skip(6);
  for (std::uint64_t i = 0; i < filters; ++i) {
    const std::uint64_t filter = body.number(2);
    const std::uint64_t name_size = version == 1 || filter >= 256 ? body.number(2) : 0;
    body.skip(2);  // flags
    const std::uint64_t values = body.number(2);
    ByteCursor name = body.take(name_size, "filter name");
    if (name_size > 0) name.text();
    if (version == 1) body.pad(name_size);
    body.skip(4 * values);
    if (version == 1 && values % 2) body.skip(4);
  }
}

void check_link_info(ByteCursor body, FieldSizes sizes) {
  if (body.number(1) != 0) return;
  const std::uint64_t flags = body.number(1);
  body.skip((flags & 1u ? 8 : 0) + 2 * sizes.offset + (flags & 2u ? sizes.offset : 0));
}

void check_attribute_info(ByteCursor body, FieldSizes sizes) {
  if (body.number(1) != 0) return;
  const std::uint64_t flags = body.number(1);
  body.skip((flags & 1u ? 2 : 0) + 2 * sizes.offset + (flags & 2u ? sizes.offset : 0));
}

void check_group_info(ByteCursor body) {
  if (body.number(1) != 0) return;
  const std::uint64_t flags = body.number(1);
  body.skip((flags & 1u ? 4 : 0) + (flags & 2u ? 4 : 0));
}

void check_external_files(ByteCursor body, FieldSizes sizes) {
  if (body.number(1) != 1) return;
  body.skip(3 + 2);
  const std::uint64_t used = body.number(2);
  body.skip(sizes.offset + used * 3 * sizes.length);
}

}  // namespace

std::uint64_t read_address(ByteCursor& at, FieldSizes sizes) {
  const std::uint64_t value = at.number(sizes.offset);
  const bool nothing = sizes.offset < 8 && value == (std::uint64_t{1} << (8 * sizes.offset)) - 1;
  return nothing ? kNoAddress : value;
}

std::optional<std::uint64_t> check_link(ByteCursor body, FieldSizes sizes) {
  constexpr std::uint64_t kHard = 0, kSoft = 1, kFirstOwn = 64;
  if (body.number(1) != 1) return std::nullopt;
  const std::uint64_t flags = body.number(1);
  const std::uint64_t type = flags & 8u ? body.number(1) : kHard;
  body.skip((flags & 4u ? 8 : 0) + (flags & 16u ? 1 : 0));  // order of creation, character set
  const std::uint64_t name_size = body.number(std::size_t{1} << (flags & 3u));
  if (name_size == 0) body.fail("a link has no name");
  body.take(name_size, "link name");
  if (type == kHard) return read_address(body, sizes);
  if (type == kSoft || type >= kFirstOwn) body.take(body.number(2), "link value");
  return std::nullopt;
}

void check_message(unsigned type, unsigned flags, ByteCursor body, FieldSizes sizes) {
  if (flags & kSharedFlag) return check_shared(body, sizes);
  switch (type) {
    case kDataspaceMessage:
      check_dataspace(body, sizes);
      return;
    case kLinkInfoMessage:
      return check_link_info(body, sizes);
    case kDatatypeMessage:
      check_datatype(body);
      return;
    case kOldFillMessage:
      body.take(body.number(4), "fill value");
      return;
    case kFillMessage:
      return check_fill(body);
    case kLinkMessage:
      check_link(body, sizes);
      return;
    case kExternalFilesMessage:
      return check_external_files(body, sizes);
    case kLayoutMessage:
      return check_layout(body, sizes);
    case kGroupInfoMessage:
      return check_group_info(body);
    case kFiltersMessage:
      return check_filters(body);
    case kAttributeMessage:
      return check_attribute(body, sizes);
    case kOldTimeMessage:
      return body.skip(16);
    case kContinuationMessage:
      return body.skip(sizes.offset + sizes.length);
    case kSymbolTableMessage:
      return body.skip(2 * sizes.offset);
    case kTimeMessage:
      return body.skip(8);
    case kTreeSizesMessage:
      return body.skip(7);
    case kAttributeInfoMessage:
      return check_attribute_info(body, sizes);
    case kReferencesMessage:
      return body.skip(5);
    default:
      return;
  }
}

}  // namespace farsum::io::hdf5
