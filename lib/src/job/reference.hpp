#pragma once
/// The reference of a route: what an infinitely thick layer would give, as factors of r.

#include "pellicle/job/thickness_job.hpp"

namespace pellicle::detail {

/// How the lines of a run state what they would give for a thick layer.
enum class LineScale { none, reference_area, sensitivity };

/// The one scale of all lines that no [[reference]] covers.
/// @throws InputError for a mixture, listing which line has which
[[nodiscard]] LineScale line_scale(const Run& run);

/// Adds R₀ of a film line and a substrate line to a route: factors, correlations, origin, findings.
/// @param reference the stated one, or nullptr: from the scale of the lines
void add_reference_ratio(const Run& run, const ReferenceRatio* reference, const Line& film, const Line& substrate,
                         ThicknessRoute& route);

/// Adds the reference area of a single line. @throws InputError when it has none
void add_reference_area(const Run& run, const Line& line, ThicknessRoute& route);

/// Inputs of one formula or set share most of their error; those of different ones share none.
inline constexpr double kSameFormulaCorrelation = 0.9;

/// Correlates the inputs of a route that come from one formula. A set of equal coefficients is always possible.
void correlate_formulas(ThicknessRoute& route);

/// Signal of a line per emitting atom of a thick solid, up to a constant common to all lines: thick_signal() without the
/// atom density. Areas in atomic-percent hold the sensitivities; what is left is the IMFP over that of an average matrix.
/// Elemental sensitivities of a pure element count its own density as well, which is the same for one element only.
/// The uncertainty leaves out the IMFP, see kImfpRatioRelativeSd. @throws as thick_signal()
[[nodiscard]] Quantity response_per_atom(const Run& run, const Line& line, std::vector<std::string>& applied, Findings& findings);

/// Relative standard uncertainty of a ratio of two predicted IMFPs: 10 % each, correlated by kSameFormulaCorrelation.
inline constexpr double kImfpRatioRelativeSd = 0.045;

/// A sensitivity with its uncertainty: the stated one, or the assumed one with its finding.
[[nodiscard]] Quantity with_assumed_sensitivity(Quantity sensitivity, Findings& findings);

/// The one value of a product of factors and its standard uncertainty without correlations.
[[nodiscard]] Quantity product(const std::vector<SignalFactor>& factors);

}  // namespace pellicle::detail
