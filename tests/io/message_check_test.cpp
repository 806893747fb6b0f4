// Contents of single messages, as bytes written down from the HDF5 File Format Specification.
#include "io/hdf5/message_check.hpp"

#include <gtest/gtest.h>

#include <string>

#include "tests/io/expect_error.hpp"

namespace farsum::io::hdf5 {
namespace {

using io_test::expect_error;

using Bytes = std::string;
const std::string kFile = "file.h5";

Bytes number(std::uint64_t value, int size) {
  Bytes bytes;
  for (int i = 0; i < size; ++i) bytes += static_cast<char>(i < 8 ? value >> (8 * i) : 0);
  return bytes;
}

ByteCursor cursor(const Bytes& bytes) {
  return {kFile, "message", 100, reinterpret_cast<const unsigned char*>(bytes.data()), bytes.size()};
}

void check(unsigned type, const Bytes& bytes, unsigned flags = 0) {
  check_message(type, flags, cursor(bytes), FieldSizes{});
}

void expect_damage(unsigned type, const Bytes& bytes, const std::string& named) {
  expect_error(ErrorCode::file_damaged, named, [&] { check(type, bytes); });
}

Bytes type_head(unsigned version, unsigned type_class, std::uint64_t bits, std::uint64_t size) {
  return number(version << 4 | type_class, 1) + number(bits, 3) + number(size, 4);
}
const Bytes kInt32 = type_head(1, 0, 8, 4) + number(0, 2) + number(32, 2);

TEST(MessageCheck, NumbersSaturate) {
  const Bytes wide(16, '\x01');
  EXPECT_EQ(cursor(wide).number(16), ~std::uint64_t{0});
  const Bytes small = number(7, 16);
  EXPECT_EQ(cursor(small).number(16), 7u);
}

TEST(MessageCheck, CompoundMembersLieInTheCompound) {
  const auto compound = [](std::uint64_t offset) {
    return type_head(3, 6, 1, 8) + Bytes("a\0", 2) + number(offset, 1) + kInt32;
  };
  EXPECT_NO_THROW(check(kDatatypeMessage, compound(4)));
  expect_damage(kDatatypeMessage, compound(5), "a member of 4 bytes at 5 does not fit into the compound of 8 bytes");
  expect_damage(kDatatypeMessage, compound(4).substr(0, 15), "the message ends");
  expect_damage(kDatatypeMessage, type_head(3, 6, 2, 8) + compound(4).substr(8), "a text in the message has no end");
}

TEST(MessageCheck, ArraysHoldTheirElements) {
  const auto array = [](std::uint64_t elements) {
    return type_head(3, 10, 0, 12) + number(1, 1) + number(elements, 4) + kInt32;
  };
  EXPECT_NO_THROW(check(kDatatypeMessage, array(3)));
  expect_damage(kDatatypeMessage, array(4), "an array type of 12 bytes has 4 elements of 4 bytes");
}

TEST(MessageCheck, EnumerationsHoldTheirValues) {
  const auto enumeration = [](std::uint64_t size, std::uint64_t count) {
    return type_head(3, 8, count, size) + kInt32 + Bytes("RED\0", 4) + number(1, 4);
  };
  EXPECT_NO_THROW(check(kDatatypeMessage, enumeration(4, 1)));
  expect_damage(kDatatypeMessage, enumeration(8, 1), "an enumeration of 8 bytes has values of 4 bytes");
  expect_damage(kDatatypeMessage, enumeration(4, 1).substr(0, 26), "the message ends");
}

TEST(MessageCheck, NestingEnds) {
  Bytes nested;
  for (int i = 0; i < 300; ++i) nested += type_head(1, 9, 0, 16);
  expect_damage(kDatatypeMessage, nested, "nested more than 256 deep");
}

TEST(MessageCheck, UnknownTypesPass) {
  EXPECT_NO_THROW(check(kDatatypeMessage, type_head(5, 6, 3, 8)));
  EXPECT_NO_THROW(check(kDatatypeMessage, type_head(3, 13, 3, 8)));
  EXPECT_NO_THROW(check(0xEE, Bytes("abc")));
}

TEST(MessageCheck, FillValuesFit) {
  EXPECT_NO_THROW(check(kFillMessage, number(3, 1) + number(0x20, 1) + number(4, 4) + number(9, 4)));
  expect_damage(kFillMessage, number(3, 1) + number(0x20, 1) + number(5, 4) + number(9, 4), "the fill value of 5 bytes");
  EXPECT_NO_THROW(check(kFillMessage, number(2, 1) + number(0, 3)));
}

TEST(MessageCheck, CompactDataFit) {
  EXPECT_NO_THROW(check(kLayoutMessage, number(3, 1) + number(0, 1) + number(4, 2) + number(9, 4)));
  expect_damage(kLayoutMessage, number(3, 1) + number(0, 1) + number(5, 2) + number(9, 4), "the compact data of 5 bytes");
}

TEST(MessageCheck, FiltersFit) {
  const auto filter = [](std::uint64_t values) {
    return number(2, 1) + number(1, 1) + number(1, 2) + number(0, 2) + number(values, 2) + number(4, 4);
  };
  EXPECT_NO_THROW(check(kFiltersMessage, filter(1)));
  expect_damage(kFiltersMessage, filter(2), "the message ends 4 bytes too early");
}

TEST(MessageCheck, SharedMessagesSayWhere) {
  EXPECT_NO_THROW(check(kDatatypeMessage, number(3, 1) + number(2, 1) + number(800, 8), kSharedFlag));
  expect_error(ErrorCode::file_damaged, "the message ends",
               [] { check(kDatatypeMessage, number(3, 1) + number(2, 1) + number(800, 4), kSharedFlag); });
}

TEST(MessageCheck, LinksGiveTheirTarget) {
  const Bytes hard = number(1, 1) + number(0, 1) + number(1, 1) + "x" + number(800, 8);
  EXPECT_EQ(check_link(cursor(hard), FieldSizes{}), 800u);
  const Bytes soft = number(1, 1) + number(8, 1) + number(1, 1) + number(1, 1) + "x" + number(2, 2) + "/y";
  EXPECT_EQ(check_link(cursor(soft), FieldSizes{}), std::nullopt);
  expect_damage(kLinkMessage, soft.substr(0, soft.size() - 1), "the link value of 2 bytes");
}

}  // namespace
}  // namespace farsum::io::hdf5
