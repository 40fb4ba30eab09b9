#pragma once
/// One fitted photoelectron peak, assigned to the layer that emits it.

#include <map>
#include <optional>
#include <string>

#include "pellicle/lines/core_level.hpp"
#include "pellicle/uncertainty/quantity.hpp"

namespace pellicle {

struct Line {
  std::string label;                       ///< the name the area table uses
  std::optional<CoreLevel> level;          ///< nothing for a line known by its kinetic energy alone (Auger)
  double kinetic_energy_ev = 0.0;
  std::string from;                        ///< layer name or "substrate"
  std::map<std::string, Quantity> length_nm;  ///< given attenuation lengths, by layer that attenuates
  std::optional<Quantity> reference_area;  ///< the area an infinitely thick layer of its material gives
};

}  // namespace pellicle
