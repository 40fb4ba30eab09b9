#pragma once
/// The contamination layer from its C 1s line against the sum of all other lines, each over its sensitivity.
///
///   A_C/S_C / Σ A_l/S_l = R₀ [1 − exp(−x)] exp(ϱ x),  R₀ = N_C λ_C(E_C) / Σ_elements N_i λ(E_i)
///
/// with N and λ of the contamination in the numerator and of the solid just below it in the denominator: every element
/// that a line shows counts once. @cite smith2005

#include <vector>

#include "job/measurements.hpp"
#include "pellicle/job/thickness_job.hpp"

namespace pellicle::detail {

/// R₀ of this route with its uncertainty. @param applied gets what it is made of
/// @throws InputError for a line without a sensitivity (areas in atomic-percent need none), elemental sensitivities, or
///         no other line below the contamination
[[nodiscard]] Quantity contamination_reference(const Run& run, const Line& carbon, std::vector<std::string>& applied);

/// Attenuation lengths in the contamination of all lines, by position; 0 for those that come from it.
[[nodiscard]] std::vector<double> lengths_in_contamination(const Run& run, const ThicknessRoute& route);

/// Adds the sum of the other lines to a measurement of C 1s, and the one length that attenuates it like its parts do.
/// @return why it cannot be done; empty when it was
[[nodiscard]] std::string add_other_lines(const Run& run, const ThicknessRoute& route, const std::vector<double>& lengths,
                                          const Measurement& m, FilmMeasurement& measurement, Findings& findings);

}  // namespace pellicle::detail
