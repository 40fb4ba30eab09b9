#pragma once
/// Effective attenuation length (EAL) L for overlayer thickness: the length that makes
/// exp(−t/(L cosθ)) true although electrons also scatter elastically. It belongs in exponents only.
///
/// | model        | equation                                              | range             |
/// |--------------|-------------------------------------------------------|-------------------|
/// | Seah-Gilmore | λ (1 − 0.028 √Z)(0.501 + 0.068 ln E) [seah2001elastic] | 200 eV – 2 keV    |
/// | S3           | [seah2012al] eq. S3, W = 0.02 E_g                     | 100 eV – 10 keV   |
/// | CS2          | [cumpson1997] eq. CS2                                 | 100 eV – 6 keV    |
/// | organic      | 0.00837 E^0.842 [seah2011]                            | organics, 200 eV – 2 keV |
/// | Seah-Dench   | [seah1979], legacy                                    | 50 eV – 6 keV     |
///
/// Default: organic for organic solids, else Seah-Gilmore on TPP-2M (on S1 where TPP-2M is refused).
/// Standard uncertainty: max(0.10 L, sample standard deviation of the in-range, non-legacy models).

#include <string>
#include <string_view>
#include <vector>

#include "pellicle/transport/imfp.hpp"

namespace pellicle {

enum class AttenuationModel { seah_gilmore, s3, cs2, organic, seah_dench };

/// Name, source and range [eV] of a model.
[[nodiscard]] const ModelInfo& model_info(AttenuationModel model);
/// All models, in the order they are shown.
[[nodiscard]] std::span<const AttenuationModel> attenuation_models();
/// Model by name, letter case ignored. @throws InputError with the known names.
[[nodiscard]] AttenuationModel attenuation_model(std::string_view name);

/// Ratio EAL/IMFP (1 − 0.028 √Z)(0.501 + 0.068 ln E). @param mean_atomic_number Z @cite seah2001elastic
[[nodiscard]] double seah_gilmore_factor(double mean_atomic_number, double energy_ev) noexcept;

/// L [nm] of the power law for organic solids, 0.00837 E^0.842. @cite seah2011
[[nodiscard]] double organic_attenuation_length_nm(double energy_ev) noexcept;

/// Classes of the curves of Seah and Dench.
enum class SolidClass { element, inorganic, organic };

/// L [nm]: 143/E² + 0.054 √E (element), 641/E² + 0.096 √E (inorganic), 31/E² + 0.087 √E (organic). Legacy.
/// @cite seah1979
[[nodiscard]] double seah_dench_length_nm(SolidClass solid_class, double energy_ev) noexcept;

/// L by one model, with the reason when it refuses.
[[nodiscard]] ModelValue predict_attenuation_length(const Material& material, double energy_ev, AttenuationModel model);

/// The length to use, how far to trust it, and everything that was weighed.
struct AttenuationLength {
  double value_nm = 0.0;
  double standard_uncertainty_nm = 0.0;
  std::string model;                ///< the attenuation model chosen
  std::string imfp_model;           ///< the IMFP it rests on; empty when it rests on none
  std::vector<ModelValue> models;   ///< every attenuation model
  std::vector<ModelValue> imfp;     ///< every IMFP model
  Findings findings;
};

/// Every model at once, also where none of them gives an attenuation length: `model` is then empty and `value_nm` 0.
/// @throws InputError for an energy that is not a number > 0
[[nodiscard]] AttenuationLength survey_lengths(const Material& material, double energy_ev);

/// Predicted attenuation length of electrons of `energy_ev` in `material`.
/// @param energy_ev kinetic energy [eV], > 0
/// @throws InputError for an energy that is not a number > 0
/// @throws DomainError when no model is valid there
[[nodiscard]] AttenuationLength attenuation_length(const Material& material, double energy_ev);

}  // namespace pellicle
