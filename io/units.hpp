#pragma once
// Physical constants (CODATA 2022) and units with their dimensions. All io numbers are SI: m, C, kg, s, V, V/m, N, J.
// Source of the values: P. J. Mohr, D. B. Newell, B. N. Taylor, E. Tiesinga, CODATA recommended values 2022, Rev. Mod. Phys.
// 97, 025002 (2025). e, c, N_A, k_B are exact by the definition of the SI of 2019.
#include <array>
#include <numbers>
#include <string>
#include <string_view>

namespace farsum::io {

inline constexpr std::string_view kConstantsName = "CODATA 2022";

inline constexpr double kElementaryCharge = 1.602176634e-19;     ///< C, exact
inline constexpr double kSpeedOfLight = 299792458.0;             ///< m/s, exact
inline constexpr double kAvogadro = 6.02214076e23;               ///< 1/mol, exact
inline constexpr double kBoltzmann = 1.380649e-23;               ///< J/K, exact
inline constexpr double kVacuumPermittivity = 8.8541878188e-12;  ///< F/m, uncertainty 14 in the last two digits
inline constexpr double kElectronMass = 9.1093837139e-31;        ///< kg, (28)
inline constexpr double kProtonMass = 1.67262192595e-27;         ///< kg, (52)
inline constexpr double kMuonMass = 1.883531627e-28;             ///< kg, (42)
inline constexpr double kAtomicMass = 1.66053906892e-27;         ///< kg, (52)
inline constexpr double kBohrRadius = 5.29177210544e-11;         ///< m, (82)
inline constexpr double kHartree = 4.3597447222060e-18;          ///< J, (48)
inline constexpr double kThermochemicalCalorie = 4.184;          ///< J, exact by convention

/// 1 / (4 pi eps0) in N m^2 / C^2: the potential in V is this times the engine's sum of q / r with q in C and r in m.
inline constexpr double kCoulombConstant = 1.0 / (4.0 * std::numbers::pi * kVacuumPermittivity);

/// Exponents of length, mass, time, current, temperature, amount of substance, luminous intensity; the order of openPMD.
using Dimension = std::array<double, 7>;

namespace dimension {
inline constexpr Dimension kNone{};
inline constexpr Dimension kLength{1, 0, 0, 0, 0, 0, 0};
inline constexpr Dimension kMass{0, 1, 0, 0, 0, 0, 0};
inline constexpr Dimension kTime{0, 0, 1, 0, 0, 0, 0};
inline constexpr Dimension kCharge{0, 0, 1, 1, 0, 0, 0};
inline constexpr Dimension kVelocity{1, 0, -1, 0, 0, 0, 0};
inline constexpr Dimension kMomentum{1, 1, -1, 0, 0, 0, 0};
inline constexpr Dimension kPotential{2, 1, -3, -1, 0, 0, 0};
inline constexpr Dimension kField{1, 1, -3, -1, 0, 0, 0};
inline constexpr Dimension kForce{1, 1, -2, 0, 0, 0, 0};
inline constexpr Dimension kEnergy{2, 1, -2, 0, 0, 0, 0};
}  // namespace dimension

/// A unit as text, its size in SI and what it measures.
struct Unit {
  std::string symbol;
  double factor = 1;  ///< value in this unit * factor = value in SI
  Dimension dimension{};
};

/// The unit that a text names: symbols joined by blank, * or / with whole powers (`mm`, `e`, `kg m/s`, `MeV/c`, `m s^-1`).
/// Known symbols: m C g s A V J N eV (with SI prefixes f p n u µ m c d k M G T), e, c, u amu Da, Angstrom Å Ang, bohr a0, 1.
/// A slash divides by the one symbol after it. Throws Error(unit_unknown) naming the symbol.
Unit parse_unit(std::string_view text);

/// Factor to SI of the unit `text`, which must have the dimension `expected` of the quantity `what`.
/// Throws Error(unit_unknown) or Error(unit_wrong_dimension) naming both dimensions.
double unit_factor(std::string_view text, const Dimension& expected, std::string_view what);

/// "length * mass / time", for messages; "no dimension" for a pure number.
std::string describe(const Dimension& dimension);

/// Equal within the rounding that single precision attributes bring.
bool same_dimension(const Dimension& a, const Dimension& b) noexcept;

/// How results are expressed. Engine sums (charge/length in C/m) times `potential`, and so on, give the outputs. Molecular and
/// atomic systems are further values of this struct.
struct UnitSystem {
  std::string_view name, length, charge, potential_unit, field_unit, force_unit, energy_unit;
  double coulomb_constant;  ///< k in these units
};
inline constexpr UnitSystem kSi{"SI", "m", "C", "V", "V/m", "N", "J", kCoulombConstant};

}  // namespace farsum::io
