// Results: what is written reads back bit for bit, input records are repeated, nothing is lost when writing fails.
#include <gtest/gtest.h>
#include <sys/resource.h>
#include <sys/wait.h>
#include <unistd.h>

#include <chrono>
#include <cmath>
#include <csignal>
#include <filesystem>
#include <fstream>
#include <thread>

#include "io/conformity.hpp"
#include "io/particle_reader.hpp"
#include "io/result_reader.hpp"
#include "io/result_writer.hpp"
#include "io/units.hpp"
#include "tests/io/expect_error.hpp"
#include "tests/io/hdf5_builder.hpp"

namespace farsum::io {
namespace {

using io_test::expect_error;
using io_test::Folder;
using io_test::Hdf5Builder;
using io_test::kIons;
using io_test::modify;

/// Engine results with recognisable values.
struct Sums {
  std::vector<double> potential, x, y, z;
  explicit Sums(std::size_t rows) : potential(rows), x(rows), y(rows), z(rows) {
    for (std::size_t i = 0; i < rows; ++i) {
      potential[i] = std::sqrt(static_cast<double>(i) + 2);
      x[i] = 1.0 / (static_cast<double>(i) + 3);
      y[i] = -x[i];
      z[i] = 3 * x[i];
    }
  }
  ResultColumns columns() const {
    ResultColumns columns;
    columns.potential = potential.data();
    columns.field_x = x.data();
    columns.field_y = y.data();
    columns.field_z = z.data();
    columns.coulomb_constant = kCoulombConstant;
    return columns;
  }
};

class Result : public ::testing::Test {
 protected:
  ParticleSet input(std::size_t rows = 7) {
    io_test::write_bunch(in_, rows);
    return read_particles(in_);
  }
  Folder folder_;
  std::string in_ = folder_.file("in.h5"), out_ = folder_.file("out.h5");
};

TEST_F(Result, ReadsBackBitForBit) {
  const ParticleSet set = input();
  const Sums sums(set.size());
  write_result(out_, set, sums.columns(), {{"tolerance", 1e-6}, {"samples", std::int64_t{200}}, {"input_file", in_}}, {});
  const ResultTable table = read_result(out_);
  EXPECT_EQ(table.particles.x, set.x);
  EXPECT_EQ(table.particles.y, set.y);
  EXPECT_EQ(table.particles.z, set.z);
  EXPECT_EQ(table.particles.charge, set.charge);
  EXPECT_EQ(table.particles.id, set.id);
  for (std::size_t i = 0; i < set.size(); ++i) {
    EXPECT_EQ(table.potential[i], kCoulombConstant * sums.potential[i]);
    EXPECT_EQ(table.field_y[i], kCoulombConstant * sums.y[i]);
  }
  EXPECT_EQ(number_or(table.run, "tolerance", 0), 1e-6);
  EXPECT_EQ(number_or(table.run, "samples", 0), 200);
  EXPECT_EQ(text_or(table.run, "input_file", ""), in_);
}

TEST_F(Result, ForceAndEnergyAreThoseOfTheMacroparticle) {
  const ParticleSet set = input();
  const Sums sums(set.size());
  write_result(out_, set, sums.columns(), {}, {});
  const hid_t file = H5Fopen(out_.c_str(), H5F_ACC_RDONLY, H5P_DEFAULT);
  const auto read = [&](const char* name) {
    std::vector<double> values(set.size());
    const hid_t data = H5Dopen2(file, (kIons + name).c_str(), H5P_DEFAULT);
    EXPECT_GE(H5Dread(data, H5T_NATIVE_DOUBLE, H5S_ALL, H5S_ALL, H5P_DEFAULT, values.data()), 0);
    H5Dclose(data);
    return values;
  };
  const std::vector<double> force = read("/force/z"), energy = read("/potentialEnergy");
  H5Fclose(file);
  for (std::size_t i = 0; i < set.size(); ++i) {
    EXPECT_DOUBLE_EQ(force[i], set.charge[i] * kCoulombConstant * sums.z[i]);
    EXPECT_DOUBLE_EQ(energy[i], 0.5 * set.charge[i] * kCoulombConstant * sums.potential[i]);
  }
}

TEST_F(Result, RepeatsRecordsOfTheLiveRowsInInputOrder) {
  io_test::write_bunch(in_, 6);
  modify(in_, [](Hdf5Builder& file) {
    file.integer_column(kIons + "/particleStatus", {1, 3, 1, 1, 2, 1}, H5T_STD_I64LE);
    file.integer_column(kIons + "/cell", {1, 2, (std::int64_t{1} << 60) + 1, 4, 5, 6}, H5T_STD_I64LE);
    file.number(kIons + "/momentum/z", "unitSI", 2);
    file.column(kIons + "/time", std::vector<double>(6, 1.0));
  });
  const ParticleSet set = read_particles(in_);
  const Sums sums(set.size());
  write_result(out_, set, sums.columns(), {}, {});
  ReadOptions options;
  options.load_motion = true;
  const ParticleSet back = read_particles(out_, options);
  EXPECT_EQ(back.x, (std::vector<double>{0, 2, 3, 5}));
  EXPECT_EQ(back.id, (std::vector<std::uint64_t>{100, 102, 103, 105}));
  EXPECT_EQ(back.charge, set.charge);
  EXPECT_DOUBLE_EQ(back.motion.momentum_z[3], 2e-22);
  EXPECT_EQ(back.motion.mass[0], 1e-26);
  const hid_t file = H5Fopen(out_.c_str(), H5F_ACC_RDONLY, H5P_DEFAULT),
              data = H5Dopen2(file, (kIons + "/cell").c_str(), H5P_DEFAULT);
  std::vector<std::int64_t> cells(4);
  H5Dread(data, H5T_NATIVE_INT64, H5S_ALL, H5S_ALL, H5P_DEFAULT, cells.data());
  EXPECT_EQ(H5Lexists(file, (kIons + "/time").c_str(), H5P_DEFAULT), 0);
  H5Dclose(data);
  H5Fclose(file);
  EXPECT_EQ(cells, (std::vector<std::int64_t>{1, (std::int64_t{1} << 60) + 1, 4, 6}));
}

TEST_F(Result, FollowsOurRules) {
  const ParticleSet set = input();
  write_result(out_, set, Sums(set.size()).columns(), {{"tolerance", 1e-6}}, {});
  for (const Finding& finding : check_conformity(out_))
    ADD_FAILURE() << finding.rule << " " << finding.item << " " << finding.message;
}

TEST_F(Result, WritesOnlyTheChosenSpecies) {
  io_test::write_bunch(in_, 3);
  modify(in_, [](Hdf5Builder& file) { io_test::write_species(file, "/data/0/particles/electrons", 2); });
  const ParticleSet set = read_particles(in_);
  const Sums sums(set.size());
  write_result(out_, set, sums.columns(), {}, {}, {"ions"});
  const ResultTable table = read_result(out_);
  ASSERT_EQ(table.size(), 3u);
  EXPECT_EQ(table.potential[0], kCoulombConstant * sums.potential[2]);
  EXPECT_EQ(match_rows(set, table), (std::vector<std::size_t>{2, 3, 4}));
}

TEST_F(Result, LeavesOutWhatIsNotAskedFor) {
  const ParticleSet set = input();
  const Sums sums(set.size());
  ResultColumns columns = sums.columns();
  columns.field_x = columns.field_y = columns.field_z = nullptr;
  columns.write_energy = false;
  write_result(out_, set, columns, {}, {});
  EXPECT_FALSE(read_result(out_).has_field());
  columns.write_potential = false;
  WriteOptions options;
  options.overwrite = true;
  write_result(out_, set, columns, {}, options);
  expect_error(ErrorCode::item_missing, "is no result", [&] { read_result(out_); });
}

TEST_F(Result, TextInputKeepsItsColumns) {
  std::ofstream(folder_.file("in.txt")) << "x[m] y[m] z[m] q[e] weight px[kg m/s] py[kg m/s] pz[kg m/s] mass[kg] id\n"
                                           "1 2 3 1 10 4 5 6 7 9\n2 3 4 -1 20 4 5 8 7 3\n";
  const ParticleSet set = read_particles(folder_.file("in.txt"));
  write_result(out_, set, Sums(2).columns(), {}, {});
  ReadOptions options;
  options.load_motion = true;
  const ParticleSet back = read_particles(out_, options);
  EXPECT_EQ(back.charge, set.charge);
  EXPECT_EQ(back.id, (std::vector<std::uint64_t>{9, 3}));
  EXPECT_EQ(back.motion.momentum_z[1], 8.0);
  EXPECT_TRUE(check_conformity(out_).empty());
}

TEST_F(Result, RowsAreMatchedById) {
  const ParticleSet set = input(5);
  write_result(out_, set, Sums(5).columns(), {}, {});
  ResultTable table = read_result(out_);
  std::swap(table.particles.id[0], table.particles.id[3]);
  EXPECT_EQ(match_rows(set, table), (std::vector<std::size_t>{3, 1, 2, 0, 4}));
  table.particles.id[0] = 999;
  expect_error(ErrorCode::item_missing, "id 999", [&] { match_rows(set, table); });
  table.particles.id[0] = table.particles.id[1];
  expect_error(ErrorCode::item_bad_value, "occurs twice", [&] { match_rows(set, table); });
}

TEST_F(Result, OverflowIsAnErrorAndLeavesNothing) {
  const ParticleSet set = input();
  Sums sums(set.size());
  sums.potential[2] = 1e300;
  expect_error(ErrorCode::range_exceeded, "row 2", [&] { write_result(out_, set, sums.columns(), {}, {}); });
  EXPECT_EQ(folder_.names(), std::vector<std::string>{"in.h5"});
}

TEST_F(Result, NeverReplacesItsInput) {
  const ParticleSet set = input();
  WriteOptions options;
  options.overwrite = true;
  expect_error(ErrorCode::file_not_writable, "is the input itself",
               [&] { write_result(in_, set, Sums(set.size()).columns(), {}, options); });
  EXPECT_EQ(read_particles(in_).size(), set.size());
}

TEST_F(Result, CancelledWritingKeepsTheOldFile) {
  const ParticleSet set = input();
  std::ofstream(out_) << "old";
  WriteOptions options;
  options.overwrite = true;
  options.hooks.should_stop = [] { return true; };
  expect_error(ErrorCode::cancelled, "stopped", [&] { write_result(out_, set, Sums(set.size()).columns(), {}, options); });
  EXPECT_EQ(std::filesystem::file_size(out_), 3u);
  EXPECT_EQ(folder_.names().size(), 2u);
}

/// Runs `work` in a child; 0 = it returned true.
template <class Work>
int in_child(Work&& work) {
  const pid_t child = fork();
  if (child == 0) _exit(work() ? 0 : 1);
  int status = 0;
  waitpid(child, &status, 0);
  return WIFEXITED(status) ? WEXITSTATUS(status) : 128 + WTERMSIG(status);
}

TEST_F(Result, AFullDiskIsSaidAndLeavesNothing) {
  const ParticleSet set = input(20000);
  const Sums sums(set.size());
  std::ofstream(out_) << "old";
  // A limit on the size of files makes writes fail in the middle, as a full disk does.
  const int status = in_child([&] {
    signal(SIGXFSZ, SIG_IGN);
    const rlimit limit{400000, 400000};
    setrlimit(RLIMIT_FSIZE, &limit);
    WriteOptions options;
    options.overwrite = true;
    try {
      write_result(out_, set, sums.columns(), {}, options);
    } catch (const Error& error) {
      return error.code() == ErrorCode::disk_full;
    }
    return false;
  });
  EXPECT_EQ(status, 0);
  EXPECT_EQ(folder_.names(), (std::vector<std::string>{"in.h5", "out.h5"}));
  EXPECT_EQ(std::filesystem::file_size(out_), 3u);
}

TEST_F(Result, AKillLeavesTheOldFile) {
  const ParticleSet set = input(20000);
  const Sums sums(set.size());
  std::ofstream(out_) << "old";
  for (int slab = 1; slab < 12; slab += 5) {
    const int status = in_child([&] {
      WriteOptions options;
      options.overwrite = true;
      int seen = 0;
      options.hooks.should_stop = [&] { return ++seen == slab ? raise(SIGKILL) != 0 : false; };
      write_result(out_, set, sums.columns(), {}, options);
      return true;
    });
    EXPECT_EQ(status, 128 + SIGKILL);
    EXPECT_EQ(std::filesystem::file_size(out_), 3u);
  }
}

TEST_F(Result, EqualRunsGiveEqualBytes) {
  const ParticleSet set = input(300000);
  const Sums sums(set.size());
  setenv("SOURCE_DATE_EPOCH", "1700000000", 1);
  const std::string second = folder_.file("second.h5");
  write_result(out_, set, sums.columns(), {}, {});
  std::this_thread::sleep_for(std::chrono::milliseconds(1100));  // the next second of any clock that a file might keep
  write_result(second, set, sums.columns(), {}, {});
  unsetenv("SOURCE_DATE_EPOCH");
  const auto bytes = [](const std::string& path) {
    std::ifstream stream(path, std::ios::binary);
    return std::string(std::istreambuf_iterator<char>(stream), {});
  };
  EXPECT_TRUE(bytes(out_) == bytes(second));
}

TEST_F(Result, SceneFilesReadBack) {
  const std::vector<double> x{1, 2, 3}, p{1e-23, 2e-23, 3e-23};
  SpeciesColumns species;
  species.name = "calcium 40";
  species.count = 3;
  species.x = species.y = species.z = x.data();
  species.momentum_x = species.momentum_y = species.momentum_z = p.data();
  species.charge = kElementaryCharge;
  species.mass = 40 * kAtomicMass;
  species.weighting = 5;
  species.first_id = 1000;
  write_particles(out_, {species}, {}, {});
  ReadOptions options;
  options.load_motion = true;
  const ParticleSet set = read_particles(out_, options);
  EXPECT_EQ(set.species[0].name, "calcium_40");
  EXPECT_EQ(set.z, x);
  EXPECT_DOUBLE_EQ(set.charge[1], 5 * kElementaryCharge);
  EXPECT_EQ(set.motion.momentum_y, p);
  EXPECT_EQ(set.id_of(2), 1002u);
  EXPECT_TRUE(check_conformity(out_).empty());
}

TEST_F(Result, EmptySetsAreWritten) {
  const ParticleSet set = input(0);
  write_result(out_, set, Sums(1).columns(), {}, {});
  EXPECT_EQ(read_result(out_).size(), 0u);
  EXPECT_TRUE(check_conformity(out_).empty());
}

}  // namespace
}  // namespace farsum::io
