#include "pellicle/signal/area.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <vector>

#include "base/nearest.hpp"
#include "pellicle/base/error.hpp"

namespace pellicle {
namespace {

constexpr std::array kUnits = {AreaUnit::counts, AreaUnit::counts_per_s, AreaUnit::counts_ev,
                               AreaUnit::counts_ev_per_s, AreaUnit::arbitrary, AreaUnit::atomic_percent};

}  // namespace

const char* area_unit_name(AreaUnit unit) noexcept {
  switch (unit) {
    case AreaUnit::counts: return "counts";
    case AreaUnit::counts_per_s: return "counts/s";
    case AreaUnit::counts_ev: return "counts*eV";
    case AreaUnit::counts_ev_per_s: return "counts*eV/s";
    case AreaUnit::arbitrary: return "arbitrary";
    case AreaUnit::atomic_percent: return "atomic-percent";
  }
  return "arbitrary";
}

AreaUnit area_unit(std::string_view name) {
  std::vector<std::string> names;
  for (const AreaUnit unit : kUnits) {
    if (name == area_unit_name(unit)) return unit;
    names.emplace_back(area_unit_name(unit));
  }
  throw InputError("", "unknown area unit \"" + std::string(name) + "\"", "expected one of: " + detail::join_names(names));
}

std::optional<double> counts_per_area(AreaUnit unit, const CountingConditions& c) noexcept {
  switch (unit) {
    case AreaUnit::counts: return 1.0;
    case AreaUnit::counts_per_s: return c.dwell_s;
    case AreaUnit::counts_ev:
      if (c.step_ev) return 1.0 / *c.step_ev;
      return std::nullopt;
    case AreaUnit::counts_ev_per_s:
      if (c.step_ev && c.dwell_s) return *c.dwell_s / *c.step_ev;
      return std::nullopt;
    case AreaUnit::arbitrary:
    case AreaUnit::atomic_percent: break;
  }
  return std::nullopt;
}

std::optional<double> counting_uncertainty(double area, AreaUnit unit, const CountingConditions& conditions) noexcept {
  const std::optional<double> factor = counts_per_area(unit, conditions);
  if (!factor || !(*factor > 0.0)) return std::nullopt;
  const double counts = std::max(area * *factor, 0.0);
  return std::sqrt(std::max(counts + 2.0 * conditions.background_counts.value_or(0.0), 1.0)) / *factor;
}

}  // namespace pellicle
