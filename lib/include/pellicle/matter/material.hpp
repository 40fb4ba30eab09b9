#pragma once
/// Solids: composition, density, band gap, valence electrons, and what follows from them.

#include <optional>
#include <span>
#include <string>
#include <string_view>
#include <vector>

#include "pellicle/base/finding.hpp"
#include "pellicle/matter/formula.hpp"

namespace pellicle {

/// A homogeneous solid. Build one with make_material() or take it from the catalogue.
struct Material {
  std::string id;       ///< catalogue id, or the formula of a material defined inline
  std::string name;
  std::string category; ///< "oxide", "element", "polymer", …; "inline" when defined by the caller
  Formula formula;
  double density_g_cm3 = 0.0;
  std::optional<double> band_gap_ev;        ///< 0 for metals; nothing when not stated
  std::optional<double> valence_electrons;  ///< per formula unit; nothing: summed from the elements
  std::string density_source, density_mark; ///< bibliography key, and "printed" or "from memory"
  std::string gap_source, gap_mark;

  /// True for carbon-hydrogen solids and what the catalogue files as polymer or organic.
  [[nodiscard]] bool is_organic() const noexcept;
};

/// A material defined by its numbers.
/// @param formula             see Formula::parse
/// @param density_g_cm3       0.0001 to 30 [g/cm³]; the lightest aerogels have 0.0002
/// @param band_gap_ev         >= 0 and <= 30 [eV]; nothing when not known
/// @param valence_electrons   > 0, per formula unit; nothing: summed from the elements
/// @throws InputError naming the field that is out of range
[[nodiscard]] Material make_material(std::string_view formula, double density_g_cm3,
                                     std::optional<double> band_gap_ev = std::nullopt,
                                     std::optional<double> valence_electrons = std::nullopt);

/// Number of atoms of one element per volume, 602.214 ρ k / M [atoms/nm³]; 0 when it is absent.
[[nodiscard]] double atom_density_per_nm3(const Material& material, std::string_view symbol);

/// Mean atomic spacing a, a³ = M/(ρ N_A n) [nm], n atoms per formula unit. @cite seah2012imfp
[[nodiscard]] double mean_spacing_nm(const Material& material);

/// Valence electrons per formula unit, and what is doubtful about them.
struct ValenceElectrons {
  std::optional<double> count;  ///< nothing: refused, with the reason in `refusal`
  std::string refusal;
  Findings findings;
};

/// Stated by the material, else summed over the elements. Convention: outer s and p electrons of the
/// main groups; s and d of the d metals; the filled d shell counts for Cu, Ag, Au, Zn, Cd, Hg only.
/// @cite tanuma1994
[[nodiscard]] ValenceElectrons valence_electrons(const Material& material);

/// All catalogued solids.
[[nodiscard]] std::span<const Material> catalogue();

/// The material meant by a catalogue id ("al2o3-amorphous") or by a formula that only one catalogued
/// solid has. "SiO2" means thermal oxide, 2.20 g/cm³.
/// @throws InputError when several solids share the formula (it lists their ids) or none has it.
[[nodiscard]] const Material& catalogue_material(std::string_view id_or_formula);

/// Numbers that replace those of the catalogue.
struct MaterialOverrides {
  std::optional<double> density_g_cm3;      ///< [g/cm³]
  std::optional<double> band_gap_ev;        ///< [eV]
  std::optional<double> valence_electrons;  ///< per formula unit
  /// True when any of them is given.
  [[nodiscard]] bool any() const noexcept { return density_g_cm3 || band_gap_ev || valence_electrons; }
};

/// A material as people name one: a catalogue id, with or without numbers that replace the catalogue's; or
/// any formula together with its density, which then owes nothing to the catalogue.
/// @throws InputError as catalogue_material() and make_material() do
[[nodiscard]] Material define_material(std::string_view id_or_formula, const MaterialOverrides& overrides = {});

}  // namespace pellicle
