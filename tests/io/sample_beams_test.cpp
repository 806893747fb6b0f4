// Three beams of other origin, in the folder named by FARSUM_SAMPLE_BEAMS; skipped when it is not set.
#include <gtest/gtest.h>

#include <cstdlib>
#include <filesystem>

#include "io/particle_reader.hpp"
#include "tests/io/expect_error.hpp"

namespace farsum::io {
namespace {

struct Beam {
  const char* file;
  const char* iteration;  ///< empty: the only one
  std::uint64_t stored, live;
  double live_charge;
};
constexpr Beam kBeams[] = {{"beam_a_two_screens_998.h5", "0", 998, 992, -9.92992e-11},
                           {"beam_b_fixed_z_10000.h5", "1", 10000, 10000, -7.7e-11},
                           {"beam_c_root_group_10000.h5", "", 10000, 10000, -1e-11}};

class SampleBeams : public ::testing::Test {
 protected:
  void SetUp() override {
    const char* folder = std::getenv("FARSUM_SAMPLE_BEAMS");
    if (!folder) GTEST_SKIP() << "FARSUM_SAMPLE_BEAMS is not set";
    folder_ = folder;
  }
  std::string path(const Beam& beam) const { return (std::filesystem::path(folder_) / beam.file).string(); }
  static ReadOptions options(const Beam& beam) {
    ReadOptions options;
    if (*beam.iteration) options.iteration = beam.iteration;
    return options;
  }
  std::string folder_;
};

TEST_F(SampleBeams, CountsChargeAndSign) {
  for (const Beam& beam : kBeams) {
    const FileSummary summary = inspect(path(beam), options(beam));
    EXPECT_EQ(summary.stored(), beam.stored) << beam.file;
    EXPECT_EQ(summary.live(), beam.live) << beam.file;
    EXPECT_NEAR(summary.contents.total_charge / beam.live_charge, 1, 1e-6) << beam.file;
    EXPECT_FALSE(summary.snapshot()) << beam.file;
  }
}

TEST_F(SampleBeams, AreRefusedAsSnapshotsUnlessToldOtherwise) {
  for (const Beam& beam : kBeams) {
    ReadOptions choice = options(beam);
    io_test::expect_error(ErrorCode::not_a_snapshot, "--as-snapshot", [&] { read_particles(path(beam), choice); });
    choice.non_snapshot = NonSnapshot::as_recorded;
    EXPECT_EQ(read_particles(path(beam), choice).size(), beam.live) << beam.file;
    choice.non_snapshot = NonSnapshot::advance;
    EXPECT_EQ(read_particles(path(beam), choice).size(), beam.live) << beam.file;
  }
}

TEST_F(SampleBeams, TwoScreensNeedAChoice) {
  io_test::expect_error(ErrorCode::choice_needed, "0, 1", [&] { read_particles(path(kBeams[0])); });
}

}  // namespace
}  // namespace farsum::io
