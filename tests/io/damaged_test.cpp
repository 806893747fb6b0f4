// Damaged and hostile files: one thing is broken in each, and the error names it.
#include <gtest/gtest.h>
#include <sys/stat.h>
#include <unistd.h>

#include <cmath>
#include <filesystem>
#include <fstream>
#include <limits>

#include "io/particle_reader.hpp"
#include "tests/io/expect_error.hpp"
#include "tests/io/hdf5_builder.hpp"

namespace farsum::io {
namespace {

using io_test::expect_error;
using io_test::Folder;
using io_test::Hdf5Builder;
using io_test::kIons;
using io_test::modify;

class Damaged : public ::testing::Test {
 protected:
  template <class Change>
  void expect(ErrorCode code, const std::string& named, Change&& change) {
    io_test::write_bunch(path_, 5);
    modify(path_, change);
    expect_error(code, named, [&] { read_particles(path_); });
    expect_error(code, path_, [&] { read_particles(path_); });
  }
  void replace(Hdf5Builder& file, const std::string& name, const std::vector<double>& values) {
    file.remove(kIons + name);
    file.column(kIons + name, values);
    file.number(kIons + name, "unitSI", 1);
  }
  Folder folder_;
  std::string path_ = folder_.file("in.h5");
};

TEST_F(Damaged, MissingThingsAreNamed) {
  expect(ErrorCode::item_missing, "position/y", [](Hdf5Builder& file) { file.remove(kIons + "/position/y"); });
  expect(ErrorCode::item_missing, "no particle species", [](Hdf5Builder& file) { file.remove(kIons + "/position"); });
  expect(ErrorCode::item_missing, "particles", [](Hdf5Builder& file) { file.remove("/data/0/particles"); });
  expect(ErrorCode::item_missing, "no iteration", [](Hdf5Builder& file) { file.remove("/data"); });
  expect(ErrorCode::item_missing, "'value'", [](Hdf5Builder& file) { file.remove_attribute(kIons + "/charge", "value"); });
  expect(ErrorCode::format_unsupported, "attribute openPMD", [](Hdf5Builder& file) { file.remove_attribute("/", "openPMD"); });
  expect(ErrorCode::format_unsupported, "'3.0.0'", [](Hdf5Builder& file) { file.text("/", "openPMD", "3.0.0"); });
}

TEST_F(Damaged, LengthsMustAgree) {
  expect(ErrorCode::item_wrong_size, "position/y: has 4 rows", [&](Hdf5Builder& file) {
    replace(file, "/position/y", {1, 2, 3, 4});
  });
  expect(ErrorCode::item_wrong_size, "weighting: has 6 rows", [&](Hdf5Builder& file) {
    replace(file, "/weighting", {1, 2, 3, 4, 5, 6});
  });
  expect(ErrorCode::item_wrong_size, "mass", [](Hdf5Builder& file) { file.integers(kIons + "/mass", "shape", {7}); });
  expect(ErrorCode::item_wrong_size, "extra: has 2 rows", [](Hdf5Builder& file) { file.column(kIons + "/extra", {1, 2}); });
}

TEST_F(Damaged, TypesAndShapesMustFit) {
  expect(ErrorCode::item_wrong_type, "text", [](Hdf5Builder& file) {
    file.remove(kIons + "/position/x");
    const hsize_t rows = 5;
    const hid_t space = H5Screate_simple(1, &rows, nullptr), type = H5Tcopy(H5T_C_S1);
    H5Tset_size(type, 8);
    H5Dclose(H5Dcreate2(file.id(), (kIons + "/position/x").c_str(), type, space, H5P_DEFAULT, H5P_DEFAULT, H5P_DEFAULT));
    H5Tclose(type);
    H5Sclose(space);
  });
  expect(ErrorCode::item_wrong_size, "2 dimensions", [](Hdf5Builder& file) {
    file.remove(kIons + "/position/x");
    const hsize_t shape[2] = {5, 1};
    const hid_t space = H5Screate_simple(2, shape, nullptr);
    H5Dclose(
        H5Dcreate2(file.id(), (kIons + "/position/x").c_str(), H5T_IEEE_F64LE, space, H5P_DEFAULT, H5P_DEFAULT, H5P_DEFAULT));
    H5Sclose(space);
  });
  expect(ErrorCode::item_wrong_type, "position/x", [](Hdf5Builder& file) {
    file.remove(kIons + "/position/x");
    const hid_t made = H5Tcopy(H5T_NATIVE_INT);
    H5Tcommit2(file.id(), (kIons + "/position/x").c_str(), made, H5P_DEFAULT, H5P_DEFAULT, H5P_DEFAULT);
    H5Tclose(made);
  });
}

TEST_F(Damaged, DimensionsMustFit) {
  expect(ErrorCode::unit_wrong_dimension, "of a charge",
         [](Hdf5Builder& file) { file.numbers(kIons + "/charge", "unitDimension", io_test::kMass); });
  expect(ErrorCode::item_wrong_size, "7 are expected", [](Hdf5Builder& file) {
    file.numbers(kIons + "/position", "unitDimension", {1, 0, 0});
  });
  expect(ErrorCode::item_bad_value, "unitSI", [](Hdf5Builder& file) { file.number(kIons + "/charge", "unitSI", -1); });
  expect(ErrorCode::item_bad_value, "not finite", [](Hdf5Builder& file) { file.number(kIons + "/charge", "unitSI", NAN); });
}

TEST_F(Damaged, ValuesMustBeFinite) {
  const double infinity = std::numeric_limits<double>::infinity();
  expect(ErrorCode::not_finite, "position y: row 2 is nan", [&](Hdf5Builder& file) {
    replace(file, "/position/y", {1, 2, NAN, 4, NAN});
  });
  expect(ErrorCode::not_finite, "row 4 is -inf", [&](Hdf5Builder& file) {
    replace(file, "/position/z", {1, 2, 3, 4, -infinity});
  });
  expect(ErrorCode::not_finite, "charge: row 0", [&](Hdf5Builder& file) { replace(file, "/weighting", {NAN, 2, 3, 4, 5}); });
  expect(ErrorCode::item_bad_value, "never negative", [&](Hdf5Builder& file) {
    replace(file, "/weighting", {1, 2, -3, 4, 5});
  });
}

TEST_F(Damaged, IdsMustBeWholeAndNotNegative) {
  expect(ErrorCode::item_bad_value, "row 1 is -5", [](Hdf5Builder& file) {
    file.remove(kIons + "/id");
    file.integer_column(kIons + "/id", {1, -5, 2, 3, 4}, H5T_STD_I64LE);
  });
  expect(ErrorCode::item_wrong_type, "floating-point", [](Hdf5Builder& file) {
    file.remove(kIons + "/id");
    file.column(kIons + "/id", {1, 2, 3, 4, 5});
  });
}

TEST_F(Damaged, DeclaredSizesAreNotBelieved) {
  const hid_t chunked = H5Pcreate(H5P_DATASET_CREATE);
  const hsize_t chunk = 5;
  H5Pset_chunk(chunked, 1, &chunk);
  const auto all_axes = [&](Hdf5Builder& file, hsize_t rows, hid_t properties) {
    for (const char* axis : {"x", "y", "z"}) {
      file.remove(kIons + "/position/" + axis);
      file.declared(kIons + "/position/" + axis, rows, properties);
      file.number(kIons + "/position/" + axis, "unitSI", 1);
    }
  };
  expect(ErrorCode::item_wrong_size, "no file can hold", [&](Hdf5Builder& file) { all_axes(file, hsize_t{1} << 50, chunked); });
  expect(ErrorCode::file_damaged, "0 bytes are stored",
         [&](Hdf5Builder& file) { all_axes(file, hsize_t{1} << 40, H5P_DEFAULT); });
  expect(ErrorCode::file_damaged, "0 of 1 chunks", [&](Hdf5Builder& file) { all_axes(file, 5, chunked); });
  H5Pclose(chunked);
}

TEST_F(Damaged, HugeConstantsMeetTheMemoryLimit) {
  Hdf5Builder(path_, Hdf5Builder::Open::create);
  io_test::write_bunch(path_, 5);
  modify(path_, [](Hdf5Builder& file) {
    for (const char* name : {"/position/x", "/position/y", "/position/z"}) {
      file.remove(kIons + name);
      file.constant(kIons + name, 1, std::uint64_t{1} << 50);
    }
    for (const char* name : {"/positionOffset", "/momentum", "/weighting", "/mass", "/id"}) file.remove(kIons + name);
    file.constant(kIons + "/charge", 1, std::uint64_t{1} << 50);
  });
  ReadOptions options;
  options.memory_limit = 1u << 30;
  expect_error(ErrorCode::memory_refused, "--memory-limit", [&] { read_particles(path_, options); });
  expect_error(ErrorCode::out_of_memory, path_, [&] { read_particles(path_); });
}

TEST_F(Damaged, ExternalStorageIsRefused) {
  std::ofstream(folder_.file("raw.bin")) << std::string(40, '\0');
  const hid_t outside = H5Pcreate(H5P_DATASET_CREATE);
  H5Pset_external(outside, folder_.file("raw.bin").c_str(), 0, 40);
  const auto change = [&](Hdf5Builder& file) {
    file.remove(kIons + "/position/x");
    file.declared(kIons + "/position/x", 5, outside);
    file.number(kIons + "/position/x", "unitSI", 1);
  };
  expect(ErrorCode::file_unsafe, "--allow-external", change);
  ReadOptions options;
  options.allow_external = true;
  EXPECT_EQ(read_particles(path_, options).x[4], 0.0);
  H5Pclose(outside);
}

TEST_F(Damaged, LinksToOtherFilesAreRefused) {
  io_test::write_bunch(folder_.file("other.h5"), 5);
  const auto external = [&](Hdf5Builder& file) {
    file.remove(kIons + "/position/x");
    H5Lcreate_external("other.h5", (kIons + "/position/x").c_str(), file.id(), (kIons + "/position/x").c_str(), H5P_DEFAULT,
                       H5P_DEFAULT);
  };
  expect(ErrorCode::file_unsafe, "link to another file", external);
  // A soft link that leads through such a link is caught as well.
  expect(ErrorCode::file_damaged, "position/x", [&](Hdf5Builder& file) {
    H5Lcreate_external("other.h5", "/", file.id(), "/elsewhere", H5P_DEFAULT, H5P_DEFAULT);
    file.remove(kIons + "/position/x");
    H5Lcreate_soft(("/elsewhere" + kIons + "/position/x").c_str(), file.id(), (kIons + "/position/x").c_str(), H5P_DEFAULT,
                   H5P_DEFAULT);
  });
}

TEST_F(Damaged, VirtualDataOfOtherFilesAreRefused) {
  io_test::write_bunch(folder_.file("other.h5"), 5);
  const hsize_t rows = 5;
  const hid_t list = H5Pcreate(H5P_DATASET_CREATE), space = H5Screate_simple(1, &rows, nullptr);
  H5Pset_virtual(list, space, "other.h5", (kIons + "/position/x").c_str(), space);
  expect(ErrorCode::file_unsafe, "virtual", [&](Hdf5Builder& file) {
    file.remove(kIons + "/position/x");
    file.declared(kIons + "/position/x", 5, list);
    file.number(kIons + "/position/x", "unitSI", 1);
  });
  H5Sclose(space);
  H5Pclose(list);
}

TEST_F(Damaged, LinksInCirclesEnd) {
  expect(ErrorCode::file_damaged, "in a circle", [](Hdf5Builder& file) {
    file.remove(kIons + "/position/x");
    H5Lcreate_soft((kIons + "/position/y2").c_str(), file.id(), (kIons + "/position/x").c_str(), H5P_DEFAULT, H5P_DEFAULT);
    H5Lcreate_soft((kIons + "/position/x").c_str(), file.id(), (kIons + "/position/y2").c_str(), H5P_DEFAULT, H5P_DEFAULT);
  });
  io_test::write_bunch(path_, 5);
  modify(path_, [](Hdf5Builder& file) {  // a group that contains itself is legal
    H5Lcreate_hard(file.id(), kIons.c_str(), file.id(), (kIons + "/again").c_str(), H5P_DEFAULT, H5P_DEFAULT);
  });
  EXPECT_EQ(read_particles(path_).size(), 5u);
}

TEST_F(Damaged, TruncatedFilesAreRefused) {
  io_test::write_bunch(path_, 5);
  const auto size = std::filesystem::file_size(path_);
  for (const double part : {0.9, 0.5, 0.1}) {
    std::filesystem::resize_file(path_, static_cast<std::uintmax_t>(part * static_cast<double>(size)));
    expect_error(ErrorCode::file_damaged, "truncated", [&] { read_particles(path_); });
  }
  std::filesystem::resize_file(path_, 0);
  expect_error(ErrorCode::file_damaged, "is empty", [&] { read_particles(path_); });
}

TEST_F(Damaged, WhatIsNoFileIsRefused) {
  expect_error(ErrorCode::file_not_found, "no such file", [&] { read_particles(folder_.file("none.h5")); });
  expect_error(ErrorCode::file_not_readable, "is a folder", [&] { read_particles(folder_.path()); });
  ASSERT_EQ(mkfifo(folder_.file("pipe").c_str(), 0600), 0);
  expect_error(ErrorCode::file_not_readable, "no regular file", [&] { read_particles(folder_.file("pipe")); });
}

TEST_F(Damaged, UnreadableFileIsRefused) {
  if (geteuid() == 0) GTEST_SKIP() << "root may read everything";
  io_test::write_bunch(path_, 5);
  chmod(path_.c_str(), 0000);
  expect_error(ErrorCode::file_not_readable, "cannot be read", [&] { read_particles(path_); });
}

TEST_F(Damaged, NothingIsPrintedAndTheErrorSettingStays) {
  H5E_auto2_t before = nullptr, after = nullptr;
  void* data = nullptr;
  H5Eget_auto2(H5E_DEFAULT, &before, &data);
  std::ofstream(path_) << "\x89HDF\r\n\x1a\n and then nothing";
  testing::internal::CaptureStderr();
  expect_error(ErrorCode::file_damaged, path_, [&] { read_particles(path_); });
  EXPECT_EQ(testing::internal::GetCapturedStderr(), "");
  H5Eget_auto2(H5E_DEFAULT, &after, &data);
  EXPECT_EQ(before, after);
}

TEST_F(Damaged, StoppingIsHonoured) {
  io_test::write_bunch(path_, 5);
  ReadOptions options;
  options.hooks.should_stop = [] { return true; };
  expect_error(ErrorCode::cancelled, "stopped", [&] { read_particles(path_, options); });
}

}  // namespace
}  // namespace farsum::io
