#pragma once
/// Physical constants. Values: CODATA 2018 (exact where the SI fixes them).

#include <numbers>

namespace pellicle {

inline constexpr double kAvogadroPerMol = 6.02214076e23;           ///< exact (SI 2019)
inline constexpr double kElectronRestEnergyEv = 510998.95;         ///< CODATA 2018
inline constexpr double kRadianPerDegree = std::numbers::pi / 180.0;
/// Coverage factor of a two-sided 95 % interval of a normal quantity.
inline constexpr double kNormal95 = 1.959963984540054;

}  // namespace pellicle
