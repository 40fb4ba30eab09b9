#include "job/thickness_monte_carlo.hpp"
namespace pellicle::detail {
MonteCarloThickness thickness_by_monte_carlo(const FilmMeasurement&, const Thickness& gum, const UncertaintyOptions&, std::uint64_t) {
  return {gum.value_nm, gum.standard_uncertainty_nm, gum.interval_nm, 0, 0, true};
}
}
