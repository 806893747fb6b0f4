// Each rule once: a file that breaks it gets the finding, and a file that follows all rules gets none.
#include "io/conformity.hpp"

#include <gtest/gtest.h>

#include <algorithm>
#include <cmath>

#include "tests/io/expect_error.hpp"
#include "tests/io/hdf5_builder.hpp"

namespace farsum::io {
namespace {

using io_test::Folder;
using io_test::Hdf5Builder;
using io_test::kIons;
using io_test::modify;

class Conformity : public ::testing::Test {
 protected:
  void SetUp() override {
    io_test::write_bunch(path_, 4);
    modify(path_, [](Hdf5Builder& file) {
      const std::string patches = kIons + "/particlePatches";
      file.group(patches + "/offset");
      file.group(patches + "/extent");
      for (const auto& [name, value] : {std::pair{"/numParticles", 4}, std::pair{"/numParticlesOffset", 0}}) {
        file.integer_column(patches + name, {value});
        file.number(patches + name, "unitSI", 1);
      }
      for (const char* axis : {"/x", "/y", "/z"}) {
        file.column(patches + "/offset" + axis, {-10});
        file.column(patches + "/extent" + axis, {20});
      }
    });
  }
  template <class Change>
  void expect(const std::string& rule, const std::string& named, Change&& change) {
    SetUp();
    modify(path_, change);
    const auto findings = check_conformity(path_);
    const bool found = std::any_of(findings.begin(), findings.end(), [&](const Finding& finding) {
      return finding.rule == rule && (finding.message + " " + finding.item).find(named) != std::string::npos;
    });
    EXPECT_TRUE(found) << rule << " " << named << ", " << findings.size() << " findings";
  }
  Folder folder_;
  std::string path_ = folder_.file("in.h5");
};

TEST_F(Conformity, AGoodFileHasNoFindings) {
  for (const Finding& finding : check_conformity(path_))
    ADD_FAILURE() << finding.rule << " " << finding.item << " " << finding.message;
}

TEST_F(Conformity, RootAndIterationAttributes) {
  expect("root_attribute", "iterationEncoding", [](Hdf5Builder& file) { file.remove_attribute("/", "iterationEncoding"); });
  expect("root_attribute", "author", [](Hdf5Builder& file) { file.remove_attribute("/", "author"); });
  expect("iteration_attribute", "'dt'", [](Hdf5Builder& file) { file.remove_attribute("/data/0", "dt"); });
  expect("paths", "meshes", [](Hdf5Builder& file) { file.text("/", "meshesPath", "meshes/"); });
}

TEST_F(Conformity, RecordsAndComponents) {
  expect("name", "spin-x", [](Hdf5Builder& file) { file.column(kIons + "/spin-x", {1, 2, 3, 4}); });
  expect("required_record", "positionOffset", [](Hdf5Builder& file) { file.remove(kIons + "/positionOffset"); });
  expect("component", "'y' is missing", [](Hdf5Builder& file) { file.remove(kIons + "/momentum/y"); });
  expect("unit_si", "mass", [](Hdf5Builder& file) { file.remove_attribute(kIons + "/mass", "unitSI"); });
  expect("unit_dimension", "7 are expected", [](Hdf5Builder& file) {
    file.numbers(kIons + "/mass", "unitDimension", {0, 1, 0, 0, 0, 0});
  });
  expect("unit_dimension", "expected is",
         [](Hdf5Builder& file) { file.numbers(kIons + "/mass", "unitDimension", io_test::kTime); });
  expect("record_attribute", "timeOffset", [](Hdf5Builder& file) { file.remove_attribute(kIons + "/mass", "timeOffset"); });
  expect("record_attribute", "weightingPower",
         [](Hdf5Builder& file) { file.remove_attribute(kIons + "/mass", "weightingPower"); });
}

TEST_F(Conformity, LengthsShapesValuesAndIds) {
  expect("equal_lengths", "has 2 rows", [](Hdf5Builder& file) { file.column(kIons + "/spin", {1, 2}); });
  expect("shape", "has 1 rows", [](Hdf5Builder& file) { file.integers(kIons + "/mass", "shape", {1}); });
  expect("finite", "row 3 is", [](Hdf5Builder& file) { file.column(kIons + "/spin", {1, 2, 3, NAN}); });
  expect("unique_ids", "id 7", [](Hdf5Builder& file) {
    file.remove(kIons + "/id");
    file.integer_column(kIons + "/id", {7, 1, 7, 2});
  });
  expect("id_type", "signed", [](Hdf5Builder& file) {
    file.remove(kIons + "/id");
    file.integer_column(kIons + "/id", {7, 1, 3, 2}, H5T_STD_I64LE);
  });
}

TEST_F(Conformity, Patches) {
  expect("patches", "hold 5 particles", [](Hdf5Builder& file) {
    file.remove(kIons + "/particlePatches/numParticles");
    file.integer_column(kIons + "/particlePatches/numParticles", {5});
  });
  expect("patches", "particle 3 lies outside", [](Hdf5Builder& file) {
    file.remove(kIons + "/particlePatches/extent/x");
    file.column(kIons + "/particlePatches/extent/x", {13});  // the upper bound is exclusive: -10 + 13 = 3
  });
  expect("patches", "'particlePatches' is missing", [](Hdf5Builder& file) { file.remove(kIons + "/particlePatches"); });
}

TEST_F(Conformity, WhatCannotBeOpenedIsAnError) {
  io_test::expect_error(ErrorCode::file_not_found, "no such file", [&] { check_conformity(folder_.file("none.h5")); });
}

}  // namespace
}  // namespace farsum::io
