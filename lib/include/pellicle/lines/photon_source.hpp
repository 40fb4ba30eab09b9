#pragma once
/// Photon sources of laboratory instruments.

#include <span>
#include <string>
#include <string_view>

namespace pellicle {

struct PhotonSource {
  std::string name;                ///< "Al Ka"; for any other energy the energy itself, "1000 eV"
  double photon_energy_ev = 0.0;
};

/// The named sources, by rising energy. @cite xraylib
[[nodiscard]] std::span<const PhotonSource> photon_sources();

/// Source by name, spelling relaxed ("Al Ka", "AlKa", "Al K-alpha", "al kα").
/// @throws InputError with the known names.
[[nodiscard]] const PhotonSource& photon_source(std::string_view name);

/// A source of any energy from 20 eV to 30 keV. @throws InputError outside.
[[nodiscard]] PhotonSource photon_source_of_energy(double photon_energy_ev);

}  // namespace pellicle
