#pragma once
/// Photoionisation: cross sections and asymmetry at the laboratory photon energies.

#include <optional>
#include <string>

#include "pellicle/lines/core_level.hpp"
#include "pellicle/lines/photon_source.hpp"

namespace pellicle {

/// A tabulated value, or why there is none.
struct TabulatedValue {
  std::optional<double> value;
  std::string refusal;  ///< one sentence when `value` is empty
  std::string reason;   ///< the reason alone, a few words
  std::string source;   ///< bibliography key
};

/// Photoionisation cross section of all electrons of the level [barn per atom], both members for a full
/// doublet. Tabulated for Mg Ka, Al Ka, Ag La, Cr Ka and Ga Ka; refused for any other energy, below the
/// threshold, and where the evaluation behind the table extrapolates: there a sensitivity must be given.
/// Accuracy: within 3 % of the EPDL evaluation of EPICS2017 wherever a value is given.
/// @cite xraylib
[[nodiscard]] TabulatedValue photoionisation_cross_section_barn(const CoreLevel& level, const PhotonSource& source);

/// Photoelectron asymmetry parameter β of the subshell (dipole, unpolarised light), −1 … 2.
/// s levels have β = 2 exactly; the others are computed values with an uncertainty of 0.05.
/// @cite cooper1968 reilman1976
[[nodiscard]] TabulatedValue asymmetry_parameter(const CoreLevel& level, const PhotonSource& source);

}  // namespace pellicle
