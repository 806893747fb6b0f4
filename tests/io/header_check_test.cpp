// The structure check: sound files of all kinds pass, each kind of damage is named with the byte where it is.
#include "io/hdf5/header_check.hpp"

#include <fmt/format.h>
#include <gtest/gtest.h>
#include <hdf5.h>

#include <filesystem>
#include <fstream>
#include <iterator>

#include "io/particle_reader.hpp"
#include "tests/io/expect_error.hpp"
#include "tests/io/hdf5_builder.hpp"

namespace farsum::io {
namespace {

using hdf5::check_structure;
using io_test::expect_error;
using io_test::Folder;
using io_test::Hdf5Builder;
using io_test::modify;

/// A file with groups "group0" ... and, on the first of them, attributes "marker" (three doubles) and "filler0" ..., so many
/// that the object header needs a continuation block.
void write_file(const std::string& path, H5F_libver_t version, hsize_t user_block = 0, int groups = 3) {
  const hid_t creation = H5Pcreate(H5P_FILE_CREATE), access = H5Pcreate(H5P_FILE_ACCESS);
  H5Pset_userblock(creation, user_block);
  H5Pset_libver_bounds(access, version, H5F_LIBVER_LATEST);
  const hid_t file = H5Fcreate(path.c_str(), H5F_ACC_TRUNC, creation, access);
  H5Pclose(creation);
  H5Pclose(access);
  for (int i = 0; i < groups; ++i) {
    H5Gclose(H5Gcreate2(file, fmt::format("group{}", i).c_str(), H5P_DEFAULT, H5P_DEFAULT, H5P_DEFAULT));
  }
  const hid_t group = H5Gopen2(file, "group0", H5P_DEFAULT);
  const hsize_t extent = 3;
  const hid_t space = H5Screate_simple(1, &extent, nullptr);
  const double values[3] = {1, 2, 3};
  for (const char* name : {"marker", "filler0", "filler1", "filler2", "filler3", "filler4"}) {
    const hid_t attribute = H5Acreate2(group, name, H5T_IEEE_F64LE, space, H5P_DEFAULT, H5P_DEFAULT);
    H5Awrite(attribute, H5T_NATIVE_DOUBLE, values);
    H5Aclose(attribute);
  }
  H5Sclose(space);
  H5Gclose(group);
  H5Fclose(file);
}

class HeaderCheck : public testing::Test {
 protected:
  void write(H5F_libver_t version) {
    write_file(path_, version);
    std::ifstream stream(path_, std::ios::binary);
    bytes_.assign(std::istreambuf_iterator<char>(stream), {});
  }
  std::size_t find(const std::string& pattern) const {
    const std::size_t at = bytes_.find(pattern);
    EXPECT_NE(at, std::string::npos) << "the file has no " << pattern;
    return at == std::string::npos ? 0 : at;
  }
  std::uint64_t number(std::size_t at) const {
    std::uint64_t value = 0;
    for (std::size_t i = 8; i-- > 0;) value = value << 8 | static_cast<unsigned char>(bytes_[at + i]);
    return value;
  }
  /// Puts the number there, expects that the check says so, and takes it back.
  void expect_damage(std::size_t at, std::size_t size, std::uint64_t value, const std::string& named) {
    std::string damaged = bytes_;
    for (std::size_t i = 0; i < size; ++i) damaged[at + i] = static_cast<char>(value >> (8 * i));
    std::ofstream(path_, std::ios::binary) << damaged;
    expect_error(ErrorCode::file_damaged, named, [&] { check_structure(path_); });
  }

  Folder folder_;
  std::string path_ = folder_.file("file.h5"), bytes_;
};

// In version 1 of an attribute, its name follows eight bytes: version, reserved, sizes of name, datatype and dataspace. The
// name takes eight bytes here, the datatype 24, the dataspace 16.
constexpr std::size_t kTypeAt = 8, kSpaceAt = 32;

TEST_F(HeaderCheck, SoundFilesPass) {
  for (const H5F_libver_t version : {H5F_LIBVER_EARLIEST, H5F_LIBVER_V18, H5F_LIBVER_LATEST}) {
    for (const hsize_t user_block : {0, 512, 1024, 4096}) {
      write_file(path_, version, user_block, 300);
      EXPECT_NO_THROW(check_structure(path_)) << "version " << version << ", user block " << user_block;
    }
  }
  io_test::write_bunch(path_, 20);
  EXPECT_NO_THROW(check_structure(path_));
}

TEST_F(HeaderCheck, WhatIsNotHdf5Passes) {
  std::ofstream(path_) << std::string(5000, 'x');
  EXPECT_NO_THROW(check_structure(path_));
  std::ofstream{path_, std::ios::trunc};
  EXPECT_NO_THROW(check_structure(path_));
  EXPECT_NO_THROW(check_structure(folder_.file("none.h5")));
}

TEST_F(HeaderCheck, TruncationIsNamed) {
  for (const H5F_libver_t version : {H5F_LIBVER_EARLIEST, H5F_LIBVER_LATEST}) {
    write(version);
    std::filesystem::resize_file(path_, bytes_.size() - 1);
    const std::string named = fmt::format("truncated, {} of {} bytes", bytes_.size() - 1, bytes_.size());
    expect_error(ErrorCode::file_damaged, named, [&] { check_structure(path_); });
  }
}

TEST_F(HeaderCheck, ErrorsNameFileAndByte) {
  write(H5F_LIBVER_EARLIEST);
  const std::size_t name = find("marker");
  expect_damage(name - 6, 2, 0xFFFF, path_);
  expect_damage(name - 6, 2, 0xFFFF, fmt::format("byte {}", name));
}

TEST_F(HeaderCheck, PartsOfAttributesFitIntoTheMessage) {
  write(H5F_LIBVER_EARLIEST);
  const std::size_t name = find("marker");
  expect_damage(name - 6, 2, 0xFFFF, "the attribute name of 65535 bytes does not fit");
  expect_damage(name - 4, 2, 0xFFFF, "the attribute datatype of 65535 bytes does not fit");
  expect_damage(name - 2, 2, 0xFFFF, "the attribute dataspace of 65535 bytes does not fit");
  expect_damage(name + kSpaceAt + 8, 8, 1000, "1000 elements of 8 bytes, but only 24 bytes");
  expect_damage(name + kSpaceAt + 8, 8, ~std::uint64_t{0} / 8 + 2, "but only 24 bytes");
  expect_damage(name + 6, 1, 'x', "a text in the attribute name has no end");
}

TEST_F(HeaderCheck, PartsOfNewAttributesFitIntoTheMessage) {
  write(H5F_LIBVER_LATEST);
  const std::size_t name = find("marker");  // one byte, the character set, is between sizes and name
  expect_damage(name - 7, 2, 0xFFFF, "the attribute name of 65535 bytes does not fit");
  expect_damage(name - 5, 2, 0xFFFF, "the attribute datatype of 65535 bytes does not fit");
  expect_damage(name - 3, 2, 0xFFFF, "the attribute dataspace of 65535 bytes does not fit");
  expect_damage(name + 7 + 20 + 4, 8, 1000, "1000 elements of 8 bytes, but only 24 bytes");
}

TEST_F(HeaderCheck, TypesAndSpacesArePlausible) {
  write(H5F_LIBVER_EARLIEST);
  const std::size_t name = find("marker");
  expect_damage(name + kTypeAt + 10, 2, 0xFFFF, "the bit fields of a number do not fit into its 8 bytes");
  expect_damage(name + kTypeAt + 4, 4, 4, "the bit fields of a number do not fit into its 4 bytes");
  expect_damage(name + kSpaceAt + 1, 1, 200, "200 dimensions, at most 32");
  expect_damage(name + kSpaceAt + 1, 1, 20, "the attribute dataspace ends");
}

TEST_F(HeaderCheck, MessagesFitIntoTheirBlock) {
  write(H5F_LIBVER_EARLIEST);
  const std::size_t head = find("marker") - 16;
  expect_damage(head + 2, 2, 0xFFF8, "the message of 65528 bytes does not fit into the");
  expect_damage(head + 2, 2, 81, "a message has 81 bytes, no multiple of 8");
}

TEST_F(HeaderCheck, ContinuationsLieInTheFile) {
  write(H5F_LIBVER_EARLIEST);
  const std::size_t head = find(std::string("\x10\0\x10\0\0\0\0\0", 8));
  expect_damage(head + 8, 8, 1u << 30, "the continuation block of");
  expect_damage(head + 16, 8, 1u << 30, "reaches beyond the end of the file");
  write(H5F_LIBVER_LATEST);
  expect_damage(find("OCHK"), 1, 'X', "the continuation block does not begin with OCHK");
}

TEST_F(HeaderCheck, ContinuationsInCirclesEnd) {
  write(H5F_LIBVER_EARLIEST);
  const std::size_t head = find(std::string("\x10\0\x10\0\0\0\0\0", 8));
  for (std::size_t i = 0; i < 8; ++i) {  // a block that holds nothing but the message that leads to it
    bytes_[head + 8 + i] = static_cast<char>(head >> (8 * i));
    bytes_[head + 16 + i] = static_cast<char>(i == 0 ? 24 : 0);
  }
  expect_damage(head, 1, 0x10, "is reached twice");
}

TEST_F(HeaderCheck, LinksFitIntoTheMessage) {
  write(H5F_LIBVER_LATEST);
  const std::size_t name = find("group1");
  expect_damage(name - 1, 1, 255, "the link name of 255 bytes does not fit");
  expect_damage(name - 1, 1, 0, "a link has no name");
  expect_damage(name + 6, 8, 1u << 30, "the object header of 0 bytes at address 1073741824 reaches beyond the end");
  expect_damage(name + 6, 8, 8, "an object header has version");
}

TEST_F(HeaderCheck, SymbolNodesAreSound) {
  write(H5F_LIBVER_EARLIEST);
  const std::size_t node = find("SNOD");
  expect_damage(node, 1, 'X', "the symbol node does not begin with SNOD");
  expect_damage(node + 6, 2, 0xFFFF, "a symbol node has 65535 members, at most 8 fit");
  expect_damage(node + 8, 8, 1u << 20, "a name at 1048576 lies outside its heap");
  expect_damage(node + 16, 8, 0, "an object header has version 137, 1 or 2 expected");
}

TEST_F(HeaderCheck, TreesOfGroupsDescend) {
  write(H5F_LIBVER_EARLIEST);
  const std::size_t node = find("TREE");
  expect_damage(node + 4, 1, 1, "the tree of a group has type 1, 0 expected");
  expect_damage(node + 6, 2, 0xFFFF, "the tree node of a group of");
  bytes_[node + 5] = 1;
  expect_damage(node + 32, 8, node, "a tree node of a group has level 1, 0 expected");
}

TEST_F(HeaderCheck, FreeBlocksOfHeapsStayInside) {
  write(H5F_LIBVER_EARLIEST);
  const std::size_t heap = find("HEAP");
  const std::uint64_t first = number(heap + 16), data = number(heap + 24);
  ASSERT_LT(data + first, bytes_.size());
  expect_damage(heap + 16, 8, 1u << 20, "the data of a local heap ends");
  expect_damage(data + first, 8, first, "the list of free blocks of a local heap is a circle");
  expect_damage(data + first + 8, 8, 1u << 20, "a free block of 1048576 bytes does not fit into its local heap");
}

TEST_F(HeaderCheck, ReadersMeetItFirst) {
  io_test::write_bunch(path_, 5);
  std::ifstream stream(path_, std::ios::binary);
  bytes_.assign(std::istreambuf_iterator<char>(stream), {});
  bytes_[find("SNOD") + 7] = '\x7f';
  std::ofstream(path_, std::ios::binary) << bytes_;
  expect_error(ErrorCode::file_damaged, "a symbol node has", [&] { read_particles(path_); });
}

}  // namespace
}  // namespace farsum::io
