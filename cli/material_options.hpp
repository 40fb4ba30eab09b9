#pragma once

#include <CLI/CLI.hpp>

#include "pellicle/matter/material.hpp"

namespace pellicle::cli {

/// Adds --<prefix>density-g-cm3, --<prefix>band-gap-ev and --<prefix>valence-electrons.
inline void add_material_options(CLI::App& command, const std::string& prefix, MaterialOverrides& overrides) {
  command.add_option("--" + prefix + "density-g-cm3", overrides.density_g_cm3, "density instead of the catalogue's")->type_name("NUMBER");
  command.add_option("--" + prefix + "band-gap-ev", overrides.band_gap_ev, "band gap instead of the catalogue's")->type_name("NUMBER");
  command.add_option("--" + prefix + "valence-electrons", overrides.valence_electrons, "valence electrons per formula unit")->type_name("NUMBER");
}

}  // namespace pellicle::cli
