// Datatype and dataspace messages. They are also parts of attribute messages, and datatypes are parts of datatypes.
#include <fmt/format.h>

#include "io/hdf5/message_check.hpp"

namespace farsum::io::hdf5 {
namespace {

constexpr int kDeepestType = 256;
constexpr unsigned kMostDimensions = 32;
constexpr std::uint64_t kMany = ~std::uint64_t{0};

using Size = std::optional<std::uint64_t>;

enum Class : unsigned { kFixed, kFloat, kTime, kString, kBits, kOpaque, kCompound, kReference, kEnum, kVariable, kArray };

std::uint64_t saturated_product(std::uint64_t a, std::uint64_t b) {
  return b != 0 && a > kMany / b ? kMany : a * b;
}

/// The part of a datatype that all classes share.
struct TypeHead {
  unsigned version, type_class, bits;
  std::uint64_t size;
};

TypeHead read_head(ByteCursor& body) {
  const auto first = static_cast<unsigned>(body.number(1));
  TypeHead head{first >> 4, first & 15u, static_cast<unsigned>(body.number(3)), 0};
  head.size = body.number(4);
  return head;
}

Size check_type(ByteCursor& body, int depth);

/// Every bit field of a number lies inside the number.
void check_number(ByteCursor& body, const TypeHead& head) {
  const ByteCursor start = body;
  const std::uint64_t bits = 8 * head.size;
  const std::uint64_t first = body.number(2), precision = body.number(2);
  bool fits = precision > 0 && first + precision <= bits;
  if (head.type_class == kFloat) {
    const std::uint64_t sign = (head.bits >> 8) & 255u;
    const std::uint64_t exponent = body.number(1), exponent_bits = body.number(1);
    const std::uint64_t mantissa = body.number(1), mantissa_bits = body.number(1);
    body.skip(4);  // bias of the exponent
    fits = fits && sign < bits && exponent + exponent_bits <= bits && mantissa + mantissa_bits <= bits;
  }
  if (!fits) start.fail(fmt::format("the bit fields of a number do not fit into its {} bytes", head.size));
}

/// One member; false when its type is not known here, so that the end of the member is not known either.
bool check_member(ByteCursor& body, const TypeHead& head, int depth) {
  const ByteCursor start = body;
  const std::size_t name = body.text();
  if (head.version < 3) body.pad(name);
  std::size_t offset_bytes = 4;
  if (head.version >= 3)
    for (offset_bytes = 1; offset_bytes < 4 && head.size >> (8 * offset_bytes); ++offset_bytes) continue;
  const std::uint64_t offset = body.number(offset_bytes);
  std::uint64_t elements = 1;
  if (head.version == 1) {
    const auto rank = body.number(1);
    if (rank > 4) start.fail(fmt::format("a member has {} dimensions, at most 4 are possible", rank));
    body.skip(3 + 4 + 4);  // reserved, permutation, reserved
    for (unsigned i = 0; i < 4; ++i) {
      const std::uint64_t extent = body.number(4);
      if (i < rank) elements = saturated_product(elements, extent);
    }
  }
  const Size size = check_type(body, depth + 1);
  if (!size) return false;
  const std::uint64_t all = saturated_product(elements, *size);
  if (all > head.size || offset > head.size - all)
    start.fail(fmt::format("a member of {} bytes at {} does not fit into the compound of {} bytes", all, offset, head.size));
  return true;
}

bool check_enumeration(ByteCursor& body, const TypeHead& head, int depth) {
  const Size base = check_type(body, depth + 1);
  if (!base) return false;
  if (*base != head.size) body.fail(fmt::format("an enumeration of {} bytes has values of {} bytes", head.size, *base));
  const unsigned members = head.bits & 0xFFFFu;
  for (unsigned i = 0; i < members; ++i) {
    const std::size_t name = body.text();
    if (head.version < 3) body.pad(name);
  }
  body.skip(saturated_product(members, *base));
  return true;
}

bool check_array(ByteCursor& body, const TypeHead& head, int depth) {
  const ByteCursor start = body;
  const std::uint64_t rank = body.number(1);
  if (rank > kMostDimensions) start.fail(fmt::format("an array type has {} dimensions, at most 32 are possible", rank));
  if (head.version < 3) body.skip(3);
  std::uint64_t elements = 1;
  for (std::uint64_t i = 0; i < rank; ++i) elements = saturated_product(elements, body.number(4));
  if (head.version < 3) body.skip(4 * rank);  // permutation
  const Size base = check_type(body, depth + 1);
  if (!base) return false;
  if (saturated_product(elements, *base) > head.size)
    start.fail(fmt::format("an array type of {} bytes has {} elements of {} bytes", head.size, elements, *base));
  return true;
}

/// False when the end of the properties is not known here.
bool check_properties(ByteCursor& body, const TypeHead& head, int depth) {
  switch (head.type_class) {
    case kFixed:
    case kFloat:
    case kBits:
      check_number(body, head);
      return true;
    case kTime:
      body.skip(2);
      return true;
    case kString:
    case kReference:
      return true;
    case kOpaque:
      body.skip(head.bits & 255u);
      return true;
    case kCompound:
      for (unsigned members = head.bits & 0xFFFFu; members > 0; --members)
        if (!check_member(body, head, depth)) return false;
      return true;
    case kEnum:
      return check_enumeration(body, head, depth);
    case kVariable:
      return check_type(body, depth + 1).has_value();
    case kArray:
      return check_array(body, head, depth);
    default:
      return false;
  }
}

Size check_type(ByteCursor& body, int depth) {
  if (depth > kDeepestType) body.fail("datatypes are nested more than 256 deep");
  const TypeHead head = read_head(body);
  const bool known = head.version >= 1 && head.version <= 3;
  if (!known || !check_properties(body, head, depth)) return std::nullopt;
  return head.size;
}

}  // namespace

std::optional<std::uint64_t> check_datatype(ByteCursor& body) {
  return check_type(body, 0);
}

std::optional<std::uint64_t> check_dataspace(ByteCursor& body, FieldSizes sizes) {
  const ByteCursor start = body;
  const std::uint64_t version = body.number(1), rank = body.number(1), flags = body.number(1);
  if (version != 1 && version != 2) return std::nullopt;
  if (rank > kMostDimensions) start.fail(fmt::format("a dataspace has {} dimensions, at most 32 are possible", rank));
  const std::uint64_t kind = body.number(1);
  if (version == 1) body.skip(4);
  std::uint64_t elements = 1;
  for (std::uint64_t i = 0; i < rank; ++i) elements = saturated_product(elements, body.number(sizes.length));
  if (flags & 1u) body.skip(rank * sizes.length);                  // largest extents
  if (version == 1 && flags & 2u) body.skip(rank * sizes.length);  // permutation
  const bool null = version == 2 && kind == 2;
  return null ? 0 : elements;
}

}  // namespace farsum::io::hdf5
