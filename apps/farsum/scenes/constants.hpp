#pragma once
// Constants that the scenes are made with. They are fixed here, apart from io/units, so that a later CODATA set never moves a
// scene.
namespace farsum::scenes {

inline constexpr double kElementaryCharge = 1.602176634e-19;  ///< C, exact in the SI
inline constexpr double kElectronMass = 9.1093837139e-31;     ///< kg, CODATA 2022
inline constexpr double kProtonMass = 1.67262192595e-27;      ///< kg, CODATA 2022
inline constexpr double kMassUnit = 1.66053906892e-27;        ///< kg, atomic mass constant, CODATA 2022
inline constexpr double kBoltzmann = 1.380649e-23;            ///< J/K, exact in the SI

}  // namespace farsum::scenes
