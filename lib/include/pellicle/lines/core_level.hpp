#pragma once
/// Core levels: what an atom has, and the kinetic energy its photoelectrons leave with.

#include <optional>
#include <span>
#include <string>
#include <string_view>
#include <vector>

#include "pellicle/base/finding.hpp"
#include "pellicle/lines/photon_source.hpp"
#include "pellicle/matter/element.hpp"

namespace pellicle {

/// One level ("Si 2p3/2") or a full spin-orbit doublet ("Si 2p").
struct CoreLevel {
  std::string name;                  ///< "Si 2p", "Ti 2p3/2"
  const Element* element = nullptr;
  std::string subshell;              ///< "2p"
  std::vector<std::string> levels;   ///< the j-resolved levels it holds: {"2p1/2", "2p3/2"} or one
  double binding_energy_ev = 0.0;    ///< of a full doublet: the mean weighted by occupancy
  double occupancy = 0.0;            ///< electrons
  std::string source, mark;          ///< of the binding energy
  bool outer = false;                ///< an outer level, whose tabulated energy is only a rounded filler

  /// True for a spin-orbit pair taken together.
  [[nodiscard]] bool is_full_doublet() const noexcept { return levels.size() == 2; }
  /// True for one member of a spin-orbit pair.
  [[nodiscard]] bool is_half_doublet() const noexcept;
};

/// Core level by name, "element subshell" or "element level": "Al 2p", "Ti 2p3/2", "O1s". Elements Li to U.
/// Binding energies are those of solids, except where their source says otherwise.
/// @throws InputError for an unknown element or a level this element does not have (it lists those it has).
/// @cite elam2002 xraydb
[[nodiscard]] CoreLevel core_level(std::string_view name);

/// All levels of an element by falling binding energy, a full doublet before its members.
[[nodiscard]] std::vector<CoreLevel> core_levels(const Element& element);

/// Kinetic energy = photon energy − binding energy [eV], referred to the Fermi level.
/// @throws DomainError when the photon cannot reach the level.
[[nodiscard]] double kinetic_energy_ev(const CoreLevel& level, const PhotonSource& source);

}  // namespace pellicle
