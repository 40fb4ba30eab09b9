#pragma once
/// Inelastic mean free path (IMFP) λ from the composition of a solid.
///
/// | model  | equation                                    | range            | typical error (as the source states it) |
/// |--------|---------------------------------------------|------------------|------------------------------------------|
/// | TPP-2M | relativistic form [shinotsuka2015], β of [tanuma1994] | 50 eV – 200 keV  | 12 % RMS over 41 elements      |
/// | S1     | [seah2012imfp] eq. S1, W = 0.02 E_g         | 100 eV – 10 keV  | 8 % RMS (from memory)                    |
///
/// Outside its range a model gives no number. Electrons are counted from the Fermi level.

#include <optional>
#include <span>
#include <string>
#include <string_view>
#include <vector>

#include "pellicle/base/finding.hpp"
#include "pellicle/base/status.hpp"
#include "pellicle/matter/material.hpp"

namespace pellicle {

enum class ImfpModel { tpp2m, s1 };

/// A model as users see it; the registry behind command line, JSON and Python.
struct ModelInfo {
  std::string name;          ///< "TPP-2M"
  std::string citation;      ///< bibliography keys
  double lowest_energy_ev = 0.0;
  double highest_energy_ev = 0.0;
  bool legacy = false;       ///< kept for comparison, never counted in a spread
  std::string about;         ///< one line
};

/// What one model says of one solid at one energy.
struct ModelValue {
  std::string model;
  std::optional<double> value_nm;  ///< nothing: refused
  std::string refusal;             ///< the reason when there is no value
  bool legacy = false;
  Findings findings;
};

/// Name, source and range [eV] of a model.
[[nodiscard]] const ModelInfo& model_info(ImfpModel model);
/// All models, in the order they are shown.
[[nodiscard]] std::span<const ImfpModel> imfp_models();
/// Model by name, letter case ignored. @throws InputError with the known names.
[[nodiscard]] ImfpModel imfp_model(std::string_view name);

/// Parameters of TPP-2M for one solid.
///
///   λ = αE / { E_p² [ β ln(γαE) − C/E + D/E² ] },  α = (1 + E/2mc²)/(1 + E/mc²)²       [nm, eV]
///   E_p = 28.816 √U, U = N_v ρ/M;  β = −1.0 + 9.44/√(E_p² + E_g²) + 0.69 ρ^0.1;  γ = 0.191 ρ^−0.5
///   C = 19.7 − 9.1 U;  D = 534 − 208 U
///
/// @cite shinotsuka2015 tanuma1994
struct Tpp2mParameters {
  double plasmon_energy_ev = 0.0;      ///< E_p
  double beta_per_ev_nm = 0.0;
  double gamma_per_ev = 0.0;
  double c_per_nm = 0.0;
  double d_ev_per_nm = 0.0;
  double valence_density = 0.0;        ///< U, mol of valence electrons per cm³

  /// λ [nm] at `energy_ev`, or nothing where the formula has no positive value.
  [[nodiscard]] std::optional<double> imfp_nm(double energy_ev) const noexcept;
};

/// @throws InputError unless density, molar mass and valence electrons are > 0 and the gap is >= 0.
[[nodiscard]] Tpp2mParameters tpp2m_parameters(double density_g_cm3, double molar_mass_g_mol,
                                               double valence_electrons, double band_gap_ev);

/// λ by one model, with the reason when it refuses and what to doubt when it does not.
/// @param energy_ev kinetic energy, > 0
[[nodiscard]] ModelValue predict_imfp(const Material& material, double energy_ev, ImfpModel model);

/// λ [nm] by one model. @throws DomainError when the model refuses, with its reason.
[[nodiscard]] double imfp_nm(const Material& material, double energy_ev, ImfpModel model = ImfpModel::tpp2m);

/// λ for many energies: a value and a status per element, NaN where the status is not ok. Never throws
/// for an element; `imfp_nm` and `status` must have the size of `energy_ev`. Parallel, any thread count
/// gives the same bits.
void imfp_nm(const Material& material, std::span<const double> energy_ev, ImfpModel model,
             std::span<double> imfp_nm, std::span<Status> status);

}  // namespace pellicle
