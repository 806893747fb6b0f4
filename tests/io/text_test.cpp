// Delimited text: grammar of the header, units, and errors that name line, row and column.
#include <gtest/gtest.h>

#include <fstream>

#include "io/particle_reader.hpp"
#include "io/units.hpp"
#include "tests/io/expect_error.hpp"
#include "tests/io/hdf5_builder.hpp"

namespace farsum::io {
namespace {

using io_test::expect_error;
using io_test::Folder;

class Text : public ::testing::Test {
 protected:
  std::string write(const std::string& text) {
    const std::string path = folder_.file("points.txt");
    std::ofstream(path, std::ios::binary) << text;
    return path;
  }
  ParticleSet read(const std::string& text, const ReadOptions& options = {}) { return read_particles(write(text), options); }
  void expect(ErrorCode code, const std::string& named, const std::string& text, const ReadOptions& options = {}) {
    expect_error(code, named, [&] { read(text, options); });
  }
  Folder folder_;
};

TEST_F(Text, ReadsUnitsFromTheHeader) {
  const ParticleSet set = read("x[mm], y[um], z[m], charge[e]\n1, 2, 3, -1\n+4,5e0 , 6 ,2\n");
  ASSERT_EQ(set.size(), 2u);
  EXPECT_DOUBLE_EQ(set.x[0], 1e-3);
  EXPECT_DOUBLE_EQ(set.y[0], 2e-6);
  EXPECT_EQ(set.z[1], 6.0);
  EXPECT_DOUBLE_EQ(set.charge[0], -kElementaryCharge);
  EXPECT_DOUBLE_EQ(set.charge[1], 2 * kElementaryCharge);
  EXPECT_EQ(set.format, "delimited text");
}

TEST_F(Text, AcceptsEverySeparatorCommentsAndLineEnds) {
  for (const std::string separator : {",", ";", "\t", "  ", " ; "}) {
    std::string text =
        "# made by hand, (see below\n\n# x[m]" + separator + "y[m]" + separator + "z[m]" + separator + "q (C)\r\n";
    text += "1" + separator + "2" + separator + "3" + separator + "4\r\n# note\n5" + separator + "6" + separator + "7" +
            separator + "8";
    const ParticleSet set = read(text);
    ASSERT_EQ(set.size(), 2u) << separator;
    EXPECT_EQ(set.charge[1], 8.0) << separator;
  }
}

TEST_F(Text, TakesUnitsWithBlanksMomentumMassWeightAndId) {
  const ParticleSet set = read(
      "z[m] x[m] y[m] px[kg m/s] py [MeV/c] pz[kg m/s] mass[u] weight q[e] id extra\n"
      "3 1 2 1 1 1 4 10 1 77 word\n");
  EXPECT_EQ(set.x[0], 1.0);
  EXPECT_DOUBLE_EQ(set.charge[0], 10 * kElementaryCharge);
  EXPECT_DOUBLE_EQ(set.motion.momentum_y[0], 5.344285992678308e-22);
  EXPECT_DOUBLE_EQ(set.motion.mass[0], 4 * kAtomicMass);
  EXPECT_EQ(set.weighting[0], 10.0);
  EXPECT_EQ(set.id_of(0), 77u);
  ASSERT_EQ(set.notes.size(), 1u);
  EXPECT_NE(set.notes[0].find("extra"), std::string::npos);
}

TEST_F(Text, UnitsComeFromTheOptionsWhereTheHeaderHasNone) {
  ReadOptions options;
  options.length_unit = "nm";
  expect(ErrorCode::unit_unknown, "--length-unit", "x y z q\n1 2 3 4\n");
  expect(ErrorCode::unit_unknown, "--charge-unit", "x y z q\n1 2 3 4\n", options);
  options.charge_unit = "e";
  EXPECT_DOUBLE_EQ(read("x y z q\n1 2 3 4\n", options).x[0], 1e-9);
}

TEST_F(Text, WrongUnitsAreRefused) {
  expect(ErrorCode::unit_wrong_dimension, "column 'q'", "x[m] y[m] z[m] q[kg]\n1 2 3 4\n");
  expect(ErrorCode::unit_unknown, "parsec", "x[parsec] y[m] z[m] q[C]\n1 2 3 4\n");
}

TEST_F(Text, ErrorsNameLineRowAndColumn) {
  const std::string head = "# title\nx[m] y[m] z[m] q[C]\n1 2 3 4\n";
  expect(ErrorCode::not_finite, "line 4 (row 1), column 'y'", head + "1 nan 3 4\n");
  expect(ErrorCode::not_finite, "column 'q'", head + "1 2 3 -inf\n");
  expect(ErrorCode::item_bad_value, "'1,5' is no number", head + "1,5 2 3 4\n");
  expect(ErrorCode::item_bad_value, "outside the double range", head + "1e999 2 3 4\n");
  expect(ErrorCode::item_wrong_size, "has 3 values, the header names 4", head + "1 2 3\n");
  expect(ErrorCode::item_wrong_size, "has 5 values", head + "1 2 3 4 5\n");
}

TEST_F(Text, RefusesWhatIsNoTable) {
  expect(ErrorCode::item_missing, "x[mm], y[mm], z[mm], charge[e]", "1 2 3 4\n5 6 7 8\n");
  expect(ErrorCode::item_missing, "no column tells the charge", "x[m] y[m] z[m]\n1 2 3\n");
  expect(ErrorCode::item_bad_value, "two columns mean the same", "x[m] y[m] z[m] q[C] charge[C]\n1 2 3 4 5\n");
  expect(ErrorCode::item_bad_value, "not closed", "x[m y z q\n1 2 3 4\n");
  expect(ErrorCode::format_unsupported, "neither an HDF5 file nor text", std::string("x[m]\0\0 y", 8));
  expect(ErrorCode::file_damaged, "longer than", "x[m] y[m] z[m] q[C]\n" + std::string(100000, '1'));
  expect(ErrorCode::file_damaged, "is empty", "");
}

TEST_F(Text, ParticleChargeServesWhereNoColumnDoes) {
  ReadOptions options;
  options.charge_each = -kElementaryCharge;
  EXPECT_EQ(read("x[m] y[m] z[m]\n1 2 3\n", options).charge[0], -kElementaryCharge);
}

TEST_F(Text, HeaderWithoutRowsIsAnEmptySet) {
  EXPECT_EQ(read("x[m] y[m] z[m] q[C]\n").size(), 0u);
}

TEST_F(Text, SummaryHasCountsAndContents) {
  const FileSummary summary = inspect(write("x[m] y[m] z[m] q[C]\n1 2 3 4\n-1 0 3 -5\n"));
  EXPECT_EQ(summary.live(), 2u);
  EXPECT_DOUBLE_EQ(summary.contents.total_charge, -1.0);
  EXPECT_DOUBLE_EQ(summary.contents.extent(), 2.0);
  EXPECT_TRUE(summary.snapshot());
}

TEST_F(Text, MemoryLimitIsKept) {
  ReadOptions options;
  options.memory_limit = 64;
  expect(ErrorCode::memory_refused, "--memory-limit", "x[m] y[m] z[m] q[C]\n1 2 3 4\n1 2 3 4\n1 2 3 4\n", options);
}

}  // namespace
}  // namespace farsum::io
