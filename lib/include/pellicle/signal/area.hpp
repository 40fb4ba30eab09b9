#pragma once
/// Peak areas, their units, and what counting statistics says of them.

#include <optional>
#include <string>
#include <string_view>

namespace pellicle {

/// Units in which areas are tabulated.
enum class AreaUnit { counts, counts_per_s, counts_ev, counts_ev_per_s, arbitrary, atomic_percent };

/// "counts", "counts/s", "counts*eV", "counts*eV/s", "arbitrary" or "atomic-percent".
[[nodiscard]] const char* area_unit_name(AreaUnit unit) noexcept;
/// @throws InputError with the known units.
[[nodiscard]] AreaUnit area_unit(std::string_view name);

/// What an area needs besides itself to be turned back into counts.
struct CountingConditions {
  std::optional<double> background_counts;  ///< counts of the background under the peak
  std::optional<double> dwell_s;            ///< per channel, all sweeps
  std::optional<double> step_ev;            ///< channel width
};

/// Counts per unit of area: 1, dwell, 1/step or dwell/step; nothing when a number is missing or the unit is
/// arbitrary.
[[nodiscard]] std::optional<double> counts_per_area(AreaUnit unit, const CountingConditions& conditions) noexcept;

/// Standard uncertainty of a net area by counting, in the unit of the area; nothing when counts are not known.
/// Net counts N over a background B taken from an equal window: u² = N + 2B (Poisson).
/// An area of no counts gets the uncertainty of one count. @cite currie1968
[[nodiscard]] std::optional<double> counting_uncertainty(double area, AreaUnit unit,
                                                         const CountingConditions& conditions) noexcept;

}  // namespace pellicle
