#pragma once
/// The contamination layer from its C 1s line against the sum of all lines from below, each over its response per atom.
///
///   (A_C/q_C) / Σ A_l/q_l = R₀ [1 − exp(−x)] exp(ϱ x),  R₀ = N_C/N
///
/// q: response per atom, IMFP included; N_C carbon atoms per volume of the contamination, N atoms per volume of the solid
/// just below it, of the elements that the lines show. Of several levels of an element in a layer the first counts.
/// @cite smith2005

#include <string>
#include <vector>

#include "job/measurements.hpp"
#include "pellicle/job/thickness_job.hpp"

namespace pellicle::detail {

/// A line from below the contamination, as its sum needs it.
struct LineBelow {
  std::size_t line = 0;    ///< position in Run::lines
  Quantity response;       ///< per atom, unit common to all lines
  double length_nm = 0.0;  ///< attenuation length in the contamination
};

/// What the route needs besides the areas.
struct CarbonBalance {
  Quantity response;  ///< of C 1s, per atom
  std::vector<LineBelow> below;
};

/// Adds R₀ to the route of this line.
/// @throws InputError for a line without a sensitivity (areas in atomic-percent need none), or elemental sensitivities
void add_carbon_reference(const Run& run, const Line& carbon, ThicknessRoute& route);

[[nodiscard]] CarbonBalance carbon_balance(const Run& run, const ThicknessRoute& route);

/// Adds the sum of the lines below to a measurement of C 1s, and the one length that attenuates it like its parts do.
/// @return why it cannot be done; empty when it was
[[nodiscard]] std::string add_lines_below(const ThicknessRoute& route, const CarbonBalance& balance, const Measurement& m,
                                          FilmMeasurement& measurement);

}  // namespace pellicle::detail
