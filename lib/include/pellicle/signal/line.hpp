#pragma once
/// One fitted photoelectron peak, or a weighted sum of components, assigned to the layer that emits it.

#include <map>
#include <optional>
#include <string>
#include <vector>

#include "pellicle/lines/core_level.hpp"
#include "pellicle/uncertainty/quantity.hpp"

namespace pellicle {

/// One row label of the area table that a line sums.
struct Component {
  std::string label;
  double weight = 1.0;
};

struct Line {
  std::string label;
  std::vector<Component> components;       ///< default: the label itself
  std::optional<CoreLevel> level;          ///< nothing for a line known by its kinetic energy alone (Auger)
  double kinetic_energy_ev = 0.0;
  std::string from;                        ///< layer name or "substrate"
  std::map<std::string, Quantity> length_nm;  ///< given attenuation lengths, by layer that attenuates
  std::optional<Quantity> main_peak_fraction; ///< share of the line's intensity inside the fitted area, 0 … 1
  std::optional<Quantity> reference_area;  ///< the area an infinitely thick layer of its material gives
  std::optional<double> reference_emission_deg;  ///< angle at which that was measured; nothing: that of the areas
  std::optional<Quantity> sensitivity;     ///< see SensitivityKind
  std::optional<Quantity> transmission;    ///< of the analyser at this energy, any scale common to the lines
};

}  // namespace pellicle
