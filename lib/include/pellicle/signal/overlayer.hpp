#pragma once
/// Forward model of one film on a substrate: what the areas must be for a given thickness.
///
/// Flat, uniform, continuous film on an infinite substrate, amorphous or polycrystalline, exponential
/// attenuation, X-rays not attenuated, one emission angle θ from the normal:
///
///   I_f / I_f∞ = 1 − exp(−t/(L_f cosθ))        I_s / I_s∞ = exp(−t/(L_s cosθ))       [hill1976]
///   R / R₀ = [1 − exp(−x)] exp(ϱ x),  x = t/(L_f cosθ),  ϱ = L_f/L_s
///
/// L_f and L_s are the attenuation lengths, in the film, of the film's line and of the substrate's line.

namespace pellicle {

/// I_f / I_f∞, 0 … 1. @param thickness_nm t >= 0 @param length_nm L_f > 0 @param emission_deg 0 … <90
/// @throws InputError for arguments outside these ranges. @cite hill1976
[[nodiscard]] double film_signal(double thickness_nm, double length_nm, double emission_deg);

/// I_s / I_s∞, 0 … 1. Same arguments and errors as film_signal. @cite hill1976
[[nodiscard]] double substrate_signal(double thickness_nm, double length_nm, double emission_deg);

/// R = I_f / I_s of a film of `thickness_nm`.
/// @param reference_ratio R₀ > 0, the ratio of an infinitely thick film to the bare substrate
/// @throws InputError as above; DomainError when the ratio exceeds the range of a double. @cite hill1976
[[nodiscard]] double ratio_of_film(double thickness_nm, double reference_ratio, double film_line_length_nm,
                                   double substrate_line_length_nm, double emission_deg);

}  // namespace pellicle
