#pragma once
/// Attenuation lengths measured on films of known thickness, as labelled sets that are never mixed.

#include <optional>
#include <span>
#include <string>
#include <string_view>

#include "pellicle/uncertainty/quantity.hpp"

namespace pellicle {

struct CalibratedLength {
  std::string set;                ///< "sio2-2004"
  std::string material;           ///< catalogue id
  std::string line;               ///< "Si 2p"
  std::string photon_source;      ///< "Al Ka"
  double kinetic_energy_ev = 0.0;
  Quantity length_nm;
  std::string source, mark, note;
};

/// All rows of all sets.
[[nodiscard]] std::span<const CalibratedLength> calibrated_lengths();

/// The row of one set for a material, line and source.
/// @throws InputError for an unknown set (with the known ones), or when the set has no such row.
[[nodiscard]] const CalibratedLength& calibrated_length(std::string_view set, std::string_view material_id,
                                                        std::string_view line, std::string_view photon_source);

}  // namespace pellicle
