// Variants of openPMD as met in real files, each in a file that the test writes.
#include <gtest/gtest.h>

#include <cmath>

#include "io/particle_reader.hpp"
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

class OpenPmd : public ::testing::Test {
 protected:
  /// A bunch of 5 after a change.
  template <class Change>
  std::string bunch(Change&& change, std::size_t rows = 5) {
    io_test::write_bunch(path_, rows);
    modify(path_, change);
    return path_;
  }
  /// A file in the style of bunch files, version 2, built by the caller.
  template <class Build>
  std::string bunch_file(const std::string& base, const std::string& particles, Build&& build) {
    Hdf5Builder file(path_, Hdf5Builder::Open::create);
    file.text("/", "openPMD", "2.0.0");
    file.text("/", "openPMDextension", "BeamPhysics;SpeciesType");
    file.text("/", "basePath", base);
    file.text("/", "particlesPath", particles);
    build(file);
    return path_;
  }
  Folder folder_;
  std::string path_ = folder_.file("in.h5");
};

TEST_F(OpenPmd, ReadsAStrictFile) {
  const ParticleSet set = read_particles(bunch([](Hdf5Builder&) {}));
  ASSERT_EQ(set.size(), 5u);
  EXPECT_EQ(set.format, "openPMD 1.1.0");
  EXPECT_EQ(set.iteration, "0");
  EXPECT_EQ(set.x[3], 3.0);
  EXPECT_EQ(set.y[3], 1.5);
  EXPECT_EQ(set.z[3], -3.0);
  EXPECT_DOUBLE_EQ(set.charge[3], 4 * 2 * kElementaryCharge);  // weighting is row + 1
  EXPECT_EQ(set.id_of(3), 103u);
  ASSERT_EQ(set.species.size(), 1u);
  EXPECT_EQ(set.species[0].name, "ions");
}

TEST_F(OpenPmd, SeveralIterationsNeedAChoice) {
  bunch([](Hdf5Builder& file) {
    for (const char* name : {"10", "2"}) {
      io_test::write_frame(file, name);
      io_test::write_species(file, std::string("/data/") + name + "/particles/ions", name[0] == '2' ? 2 : 3);
    }
  });
  expect_error(ErrorCode::choice_needed, "0, 2, 10", [&] { read_particles(path_); });  // in numeric order
  ReadOptions options;
  options.iteration = "002";
  EXPECT_EQ(read_particles(path_, options).size(), 2u);
  options.iteration = "7";
  expect_error(ErrorCode::choice_needed, "no iteration '7'", [&] { read_particles(path_, options); });
  EXPECT_EQ(inspect(path_).iterations, (std::vector<std::string>{"0", "2", "10"}));
}

TEST_F(OpenPmd, SpeciesAreConcatenatedOrSelected) {
  bunch([](Hdf5Builder& file) { io_test::write_species(file, "/data/0/particles/electrons", 2); });
  const ParticleSet set = read_particles(path_);
  ASSERT_EQ(set.size(), 7u);
  EXPECT_EQ(set.species[0].name, "electrons");
  EXPECT_EQ(set.species[1].begin, 2u);
  EXPECT_EQ(set.x[4], 2.0);
  ReadOptions options;
  options.species = {"ions"};
  EXPECT_EQ(read_particles(path_, options).size(), 5u);
  options.species = {"muons"};
  expect_error(ErrorCode::choice_needed, "electrons, ions", [&] { read_particles(path_, options); });
}

TEST_F(OpenPmd, OffsetsAddWithTheirOwnUnit) {
  const ParticleSet set = read_particles(bunch([](Hdf5Builder& file) {
    file.number(kIons + "/position/x", "unitSI", 1e-3);
    file.number(kIons + "/positionOffset/x", "value", 7);
    file.number(kIons + "/positionOffset/x", "unitSI", 1e-2);
    file.remove(kIons + "/positionOffset/y");
  }));
  EXPECT_DOUBLE_EQ(set.x[2], 2e-3 + 7e-2);
  EXPECT_EQ(set.y[2], 1.0);
}

TEST_F(OpenPmd, MissingOffsetIsZero) {
  EXPECT_EQ(read_particles(bunch([](Hdf5Builder& file) { file.remove(kIons + "/positionOffset"); })).x[2], 2.0);
}

TEST_F(OpenPmd, ConvertsStoredTypes) {
  const ParticleSet set = read_particles(bunch([](Hdf5Builder& file) {
    const std::vector<double> values{0, 1, 2, 3, 4};
    for (const auto& [axis, type] :
         {std::pair<const char*, hid_t>{"x", H5T_IEEE_F32BE}, {"y", H5T_STD_I16LE}, {"z", H5T_IEEE_F64BE}}) {
      const std::string path = kIons + "/position/" + axis;
      file.remove(path);
      file.column(path, values, type);
      file.number(path, "unitSI", 2);
    }
  }));
  for (const auto* axis : {&set.x, &set.y, &set.z}) EXPECT_EQ((*axis)[3], 6.0);
}

TEST_F(OpenPmd, ReadsPackedChunks) {
  const ParticleSet set = read_particles(bunch(
      [](Hdf5Builder& file) {
        const hid_t packed = H5Pcreate(H5P_DATASET_CREATE);
        const hsize_t chunk = 300;
        H5Pset_chunk(packed, 1, &chunk);
        H5Pset_shuffle(packed);
        H5Pset_deflate(packed, 4);
        H5Pset_fletcher32(packed);
        std::vector<double> values(1000);
        for (std::size_t i = 0; i < values.size(); ++i) values[i] = std::sqrt(static_cast<double>(i));
        file.remove(kIons + "/position/x");
        file.column(kIons + "/position/x", values, H5T_IEEE_F64LE, packed);
        file.number(kIons + "/position/x", "unitSI", 1);
        H5Pclose(packed);
      },
      1000));
  EXPECT_EQ(set.x[999], std::sqrt(999.0));
}

TEST_F(OpenPmd, ConstantComponentsAndQuirksOfShape) {
  const ParticleSet set = read_particles(bunch([](Hdf5Builder& file) {
    file.remove(kIons + "/position/z");
    file.constant(kIons + "/position/z", 3, 5);
    file.integer(kIons + "/position/z", "shape", 5);      // scalar and signed
    file.numbers(kIons + "/position/z", "value", {3.5});  // one-element array
    file.constant(kIons + "/charge", 1e-19, 1);           // shape 1 instead of N
  }));
  EXPECT_EQ(set.z[4], 3.5);
  EXPECT_DOUBLE_EQ(set.charge[1], 2e-19);
  ASSERT_FALSE(set.notes.empty());
  EXPECT_NE(set.notes[0].find("shape 1"), std::string::npos);
}

TEST_F(OpenPmd, MacroWeightedChargeIsNotWeightedAgain) {
  const ParticleSet set = read_particles(bunch([](Hdf5Builder& file) { file.integer(kIons + "/charge", "macroWeighted", 1); }));
  EXPECT_DOUBLE_EQ(set.charge[3], 2 * kElementaryCharge);
}

TEST_F(OpenPmd, EmptySpeciesIsLegal) {
  EXPECT_EQ(read_particles(bunch([](Hdf5Builder&) {}, 0)).size(), 0u);
}

TEST_F(OpenPmd, ChargeStateTimesWeight) {
  const ParticleSet set = read_particles(bunch([](Hdf5Builder& file) {
    file.remove(kIons + "/charge");
    file.constant(kIons + "/chargeState", -3, 5);
  }));
  EXPECT_DOUBLE_EQ(set.charge[1], 2 * -3 * kElementaryCharge);
}

TEST_F(OpenPmd, WeightingTimesChargeOfTheSpeciesType) {
  const ParticleSet set = read_particles(bunch([](Hdf5Builder& file) {
    file.remove(kIons + "/charge");
    file.text(kIons, "speciesType", "proton");
  }));
  EXPECT_DOUBLE_EQ(set.charge[4], 5 * kElementaryCharge);
}

TEST_F(OpenPmd, ChargeIsNeverAssumed) {
  bunch([](Hdf5Builder& file) { file.remove(kIons + "/charge"); });
  expect_error(ErrorCode::item_missing, "--particle-charge", [&] { read_particles(path_); });
  EXPECT_FALSE(inspect(path_).species[0].missing.empty());
  ReadOptions options;
  options.charge_each = 1e-18;
  EXPECT_DOUBLE_EQ(read_particles(path_, options).charge[2], 3e-18);
}

TEST_F(OpenPmd, IterationGroupIsTheSpecies) {
  bunch_file("/screen/%T/", "./", [](Hdf5Builder& file) {
    io_test::write_bunch_style(file, "/screen/0", 4);
    file.group("/screen/0/positionOffset");
    file.constant("/screen/0/positionOffset/z", 0.5, 4);
    file.integer("/screen/0/positionOffset/z", "shape", 4);
  });
  const ParticleSet set = read_particles(path_);
  ASSERT_EQ(set.size(), 4u);
  EXPECT_EQ(set.species[0].name, "electron");
  EXPECT_DOUBLE_EQ(set.z[1], 0.501);
  EXPECT_DOUBLE_EQ(set.charge[1], -1e-15);  // positive weights of electrons
}

TEST_F(OpenPmd, PaddedIterationWithDimensionlessWeight) {
  bunch_file("/data/%T/", "particles/", [](Hdf5Builder& file) {
    io_test::write_bunch_style(file, "/data/00001/particles", 4);
    file.numbers("/data/00001/particles/weight", "unitDimension", io_test::kNone);  // though it is a charge
  });
  ReadOptions options;
  options.iteration = "1";
  EXPECT_DOUBLE_EQ(read_particles(path_, options).charge[0], -1e-15);
}

TEST_F(OpenPmd, RootGroupIsTheSpecies) {
  for (const char* particles : {"/", ".", "./"}) {
    bunch_file("/", particles, [](Hdf5Builder& file) { io_test::write_bunch_style(file, "/", 4); });
    EXPECT_EQ(read_particles(path_).size(), 4u) << particles;
  }
}

TEST_F(OpenPmd, TotalChargeMustAgree) {
  bunch_file("/", "/", [](Hdf5Builder& file) {
    io_test::write_bunch_style(file, "/", 4);
    file.number("/", "totalCharge", 1e-12);
  });
  expect_error(ErrorCode::item_bad_value, "totalCharge", [&] { read_particles(path_); });
}

TEST_F(OpenPmd, WeightWithoutASignIsRefused) {
  bunch_file("/", "/", [](Hdf5Builder& file) {
    io_test::write_bunch_style(file, "/", 4);
    file.text("/", "speciesType", "#12C");
  });
  expect_error(ErrorCode::item_missing, "without a sign", [&] { read_particles(path_); });
}

TEST_F(OpenPmd, LostParticlesAreLeftOutAndCounted) {
  bunch_file("/", "/", [](Hdf5Builder& file) {
    io_test::write_bunch_style(file, "/", 5);
    file.remove("/particleStatus");
    file.integer_column("/particleStatus", {3, 1, 1, 3, 1}, H5T_STD_I64LE);
  });
  const ParticleSet set = read_particles(path_);
  EXPECT_EQ(set.x, (std::vector<double>{1e-3, 2e-3, 4e-3}));
  EXPECT_EQ(set.lost(), 2u);
  EXPECT_EQ(set.species[0].dropped_rows, (std::vector<std::uint64_t>{0, 3}));
  EXPECT_EQ(set.file_row(0), 1u);
  EXPECT_EQ(set.file_row(1), 2u);
  EXPECT_EQ(set.id_of(2), 4u);
  EXPECT_EQ(inspect(path_).live(), 3u);
  ReadOptions options;
  options.keep_lost = true;
  EXPECT_EQ(read_particles(path_, options).size(), 5u);
}

TEST_F(OpenPmd, NobodyAliveIsAnErrorWithAHint) {
  bunch_file("/", "/", [](Hdf5Builder& file) {
    io_test::write_bunch_style(file, "/", 5);
    file.number("/particleStatus", "value", 0);
  });
  expect_error(ErrorCode::item_bad_value, "--keep-lost", [&] { read_particles(path_); });
  EXPECT_EQ(inspect(path_).lost(), 5u);
}

TEST_F(OpenPmd, SpreadTimesAreNoSnapshot) {
  bunch_file("/", "/", [](Hdf5Builder& file) {
    io_test::write_bunch_style(file, "/", 3);
    file.column("/time", {0, 1e-12, 2e-12});
    file.number("/time", "unitSI", 1);
    file.constant("/timeOffset", 5e-12, 3);  // a record of that name, not the attribute
  });
  expect_error(ErrorCode::not_a_snapshot, "--advance-to", [&] { read_particles(path_); });
  expect_error(ErrorCode::not_a_snapshot, "--as-snapshot", [&] { read_particles(path_); });
  EXPECT_FALSE(inspect(path_).snapshot());
  ReadOptions options;
  options.non_snapshot = NonSnapshot::as_recorded;
  EXPECT_EQ(read_particles(path_, options).x[2], 2e-3);
  options.non_snapshot = NonSnapshot::advance;
  options.advance_to = 1e-11;
  // Closed form: v = p c^2 / sqrt(p^2 c^2 + m^2 c^4) with p = 1 MeV/c along each axis.
  const double p = 1e6 * 5.344285992678308e-28, mc = kElectronMass * kSpeedOfLight;
  const double v = p / std::sqrt(3 * p * p + mc * mc) * kSpeedOfLight;
  EXPECT_NEAR(read_particles(path_, options).x[2], 2e-3 + v * (1e-11 - 7e-12), 1e-15);
}

TEST_F(OpenPmd, OneCommonTimeIsASnapshot) {
  bunch_file("/", "/", [](Hdf5Builder& file) {
    io_test::write_bunch_style(file, "/", 3);
    file.column("/time", {4, 4, 4});
  });
  EXPECT_EQ(read_particles(path_).size(), 3u);
}

TEST_F(OpenPmd, MeanBetaGammaAndVelocity) {
  const FileSummary summary = inspect(bunch([](Hdf5Builder& file) { file.number(kIons + "/mass", "value", 1e-30); }));
  const double u = 1e-22 / (1e-30 * kSpeedOfLight);
  EXPECT_NEAR(summary.contents.mean_beta_gamma, u, 1e-14);
  EXPECT_NEAR(summary.contents.mean_velocity[2], kSpeedOfLight * u / std::sqrt(1 + u * u), 1e-6);
  EXPECT_DOUBLE_EQ(summary.contents.total_charge, 15 * 2 * kElementaryCharge);
  EXPECT_DOUBLE_EQ(summary.contents.extent(), 4.0);
}

TEST_F(OpenPmd, UnitsComeFromTheRecordOrTheUser) {
  bunch([](Hdf5Builder& file) {
    for (const char* axis : {"x", "y", "z"}) {
      file.remove_attribute(kIons + "/position/" + axis, "unitSI");
      file.remove_attribute(kIons + "/positionOffset/" + axis, "unitSI");
    }
  });
  expect_error(ErrorCode::unit_unknown, "--length-unit", [&] { read_particles(path_); });
  ReadOptions options;
  options.length_unit = "mm";
  EXPECT_DOUBLE_EQ(read_particles(path_, options).x[3], 3e-3);
  modify(path_, [](Hdf5Builder& file) {
    file.integer(kIons + "/position", "unitSI", 2);
    file.integer(kIons + "/positionOffset", "unitSI", 1);
  });
  EXPECT_EQ(read_particles(path_).x[3], 6.0);
}

TEST_F(OpenPmd, TextAttributesOfEveryKind) {
  const ParticleSet set = read_particles(bunch([](Hdf5Builder& file) {
    file.variable_text("/", "openPMD", "1.0.1");
    file.variable_text("/", "basePath", "/data/%T/");
    file.text("/", "particlesPath", "particles//");
  }));
  EXPECT_EQ(set.format, "openPMD 1.0.1");
}

}  // namespace
}  // namespace farsum::io
