#pragma once
/// What every predictive formula shares: its range, and cautions about named solids.

#include <cmath>
#include <string>

#include "base/csv.hpp"
#include "pellicle/base/error.hpp"
#include "pellicle/base/number.hpp"
#include "pellicle/transport/imfp.hpp"

namespace pellicle::detail {

inline void check_energy(double energy_ev) {
  if (!(energy_ev > 0.0) || !std::isfinite(energy_ev)) {
    throw InputError("energy_ev", number_text(energy_ev) + " is not a kinetic energy", "expected a number > 0");
  }
}

/// The reason why `energy_ev` is outside the range of a model, or empty.
inline std::string range_refusal(const ModelInfo& info, double energy_ev) {
  if (energy_ev >= info.lowest_energy_ev && energy_ev <= info.highest_energy_ev) return {};
  return info.name + " holds from " + number_text(info.lowest_energy_ev) + " to " + number_text(info.highest_energy_ev) +
         " eV, not at " + energy_text(energy_ev) + " eV";
}

/// W = 0.02 E_g of the S1 and S3 curves, 0 for a metal.
inline double gap_correction(const Material& material) { return 0.02 * material.band_gap_ev.value_or(0.0); }

/// Finding for a solid whose band gap nobody stated.
inline void note_missing_gap(const Material& material, Findings& findings) {
  if (material.band_gap_ev) return;
  add_finding(findings, {"band_gap_not_given", Severity::warning,
                         "no band gap is given for " + material.id +
                             "; 0 eV was used, which shortens the length of a wide-gap solid by up to 20 %"});
}

}  // namespace pellicle::detail
