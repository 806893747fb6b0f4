// Constants against the GNU Scientific Library (test-only), whose values are those of CODATA 1998 to 2006; against published
// CODATA 2022 figures; units by dimension.
#include "io/units.hpp"

#include <gsl/gsl_const_mksa.h>
#include <gtest/gtest.h>

#include <cmath>

#include "tests/io/expect_error.hpp"

namespace farsum::io {
namespace {

using io_test::expect_error;

double relative(double a, double b) {
  return std::abs(a / b - 1);
}

TEST(Constants, AgreeWithGslToTheDigitsOfItsYears) {
  // GSL 2.7 states CODATA 1998 to 2006; each bound is about twice the uncertainty or later correction of those years.
  EXPECT_LT(relative(kElementaryCharge, GSL_CONST_MKSA_ELECTRON_CHARGE), 2e-7);
  EXPECT_EQ(kSpeedOfLight, GSL_CONST_MKSA_SPEED_OF_LIGHT);
  EXPECT_LT(relative(kVacuumPermittivity, GSL_CONST_MKSA_VACUUM_PERMITTIVITY), 5e-10);
  EXPECT_LT(relative(kElectronMass, GSL_CONST_MKSA_MASS_ELECTRON), 4e-7);
  EXPECT_LT(relative(kProtonMass, GSL_CONST_MKSA_MASS_PROTON), 4e-7);
  EXPECT_LT(relative(kMuonMass, GSL_CONST_MKSA_MASS_MUON), 6e-7);
  EXPECT_LT(relative(kAtomicMass, GSL_CONST_MKSA_UNIFIED_ATOMIC_MASS), 4e-7);
  EXPECT_LT(relative(kBohrRadius, GSL_CONST_MKSA_BOHR_RADIUS), 8e-9);
  EXPECT_LT(relative(kBoltzmann, GSL_CONST_MKSA_BOLTZMANN), 2e-6);
}

TEST(Constants, ExactOnesAreThoseOfTheSiOf2019) {
  // 26th CGPM, Resolution 1 (2018).
  EXPECT_EQ(kElementaryCharge, 1.602176634e-19);
  EXPECT_EQ(kSpeedOfLight, 299792458.0);
  EXPECT_EQ(kAvogadro, 6.02214076e23);
  EXPECT_EQ(kBoltzmann, 1.380649e-23);
}

TEST(Constants, PermittivityIsThatOfCodata2022) {
  // Mohr, Newell, Taylor, Tiesinga, CODATA 2022: eps0 = 8.8541878188(14)e-12 F/m.
  EXPECT_EQ(kVacuumPermittivity, 8.8541878188e-12);
  EXPECT_NEAR(kCoulombConstant, 8.9875517862e9, 0.0000000001e9);
}

TEST(Constants, CoulombEnergyOfTwoElementaryCharges) {
  // k e^2 = 14.3996454687 eV Angstrom and 1389.35457550 kJ/mol Angstrom follow from the CODATA 2022 values.
  EXPECT_NEAR(kCoulombConstant * kElementaryCharge / 1e-10, 14.3996454687, 1e-10);
  EXPECT_NEAR(kCoulombConstant * kElementaryCharge * kElementaryCharge * kAvogadro / 1e-10 / 1e3, 1389.35457550, 1e-8);
}

TEST(Constants, HartreeTimesBohrIsTheSameEnergy) {
  EXPECT_NEAR(kHartree * kBohrRadius / (kCoulombConstant * kElementaryCharge * kElementaryCharge), 1, 3e-10);
}

struct UnitCase {
  const char* text;
  double factor;
  Dimension dimension;
};

TEST(Units, FactorsAndDimensions) {
  const UnitCase cases[] = {{"m", 1, dimension::kLength},
                            {"mm", 1e-3, dimension::kLength},
                            {"um", 1e-6, dimension::kLength},
                            {"\xC2\xB5m", 1e-6, dimension::kLength},
                            {"nm", 1e-9, dimension::kLength},
                            {"Angstrom", 1e-10, dimension::kLength},
                            {"\xC3\x85", 1e-10, dimension::kLength},
                            {"bohr", kBohrRadius, dimension::kLength},
                            {"C", 1, dimension::kCharge},
                            {"pC", 1e-12, dimension::kCharge},
                            {"e", kElementaryCharge, dimension::kCharge},
                            {"A s", 1, dimension::kCharge},
                            {"kg", 1, dimension::kMass},
                            {"u", kAtomicMass, dimension::kMass},
                            {"kg m/s", 1, dimension::kMomentum},
                            {"kg*m*s^-1", 1, dimension::kMomentum},
                            {"eV/c", 5.344285992678308e-28, dimension::kMomentum},
                            {"MeV/c", 5.344285992678308e-22, dimension::kMomentum},
                            {"V/m", 1, dimension::kField},
                            {"1", 1, dimension::kNone}};
  for (const UnitCase& entry : cases) {
    const Unit unit = parse_unit(entry.text);
    EXPECT_LT(relative(unit.factor, entry.factor), 1e-15) << entry.text;
    EXPECT_TRUE(same_dimension(unit.dimension, entry.dimension)) << entry.text;
  }
}

TEST(Units, UnknownOnesAreNamed) {
  for (const char* text : {"furlong", "", "mmm", "m^x", "/s", "m/", "xm"}) {
    expect_error(ErrorCode::unit_unknown, text, [&] { parse_unit(text); });
  }
}

TEST(Units, WrongDimensionNamesBoth) {
  expect_error(ErrorCode::unit_wrong_dimension, "of a charge", [] { unit_factor("mm", dimension::kCharge, "charge"); });
}

}  // namespace
}  // namespace farsum::io
