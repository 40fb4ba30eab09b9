#pragma once

#include <string>

#include "pellicle/matter/material.hpp"
#include "pellicle/transport/attenuation_length.hpp"

namespace pellicle {

/// One question of the `lengths` command with its answer.
struct LengthQuery {
  std::string asked;      ///< the material as the user named it
  Material material;
  double energy_ev = 0.0;
  AttenuationLength length;
};

}  // namespace pellicle
