#include "job/bounds.hpp"

#include <algorithm>
#include <cmath>

#include "pellicle/base/constants.hpp"
#include "pellicle/uncertainty/detection.hpp"
#include "pellicle/uncertainty/distribution.hpp"

namespace pellicle::detail {
namespace {

constexpr double kTwoSided95 = 1.9599639845400543;

Thickness with_area(FilmMeasurement m, const char* name, double area) {
  for (SignalFactor& f : m.factors) {
    if (f.name == name) f.quantity = Quantity(area, 0.0);
  }
  return thickness_from_factors(m);
}

}  // namespace

Quantity undetected_area(const LineArea& area) {
  if (!area.not_detected_stated) return {area.value, area.sd};
  const double at_zero = area.sd_at_zero.value_or(area.sd);
  return {kOneSided95 * at_zero + kCurrieCounts * area.one_count.value_or(0.0), at_zero};
}

double bound_of_undetected(const FilmMeasurement& measurement, const char* lost, bool upper) {
  const auto found = std::find_if(measurement.factors.begin(), measurement.factors.end(), [&](const SignalFactor& f) { return f.name == lost; });
  const Quantity& area = found->quantity;
  const Distribution truth = Distribution::truncated_normal(std::max(area.value, -30.0 * area.sd()), area.sd());
  const Thickness limit = with_area(measurement, lost, upper_bound_95(area.value, area.sd()));
  const Thickness middle = with_area(measurement, lost, truth.quantile(0.5));
  const double by_area = std::abs(limit.value_nm - middle.value_nm);
  const double beyond = std::hypot(by_area, kOneSided95 * limit.standard_uncertainty_nm) - by_area;
  return upper ? limit.value_nm + beyond : std::max(limit.value_nm - beyond, 0.0);
}

std::optional<ThicknessBound> bound_of_single_line(const FilmMeasurement& m) {
  if (m.method == ThicknessMethod::ratio) return std::nullopt;
  double r = 1.0, relative_variance = 0.0;
  for (const SignalFactor& f : m.factors) {
    r *= std::pow(f.quantity.value, f.power);
    if (f.quantity.value > 0.0) relative_variance += std::pow(f.power * f.quantity.sd() / f.quantity.value, 2);
  }
  const double u = r * std::sqrt(relative_variance);
  const Quantity& length = m.film_line_length_nm;
  const double unit_nm = length.value * std::cos(m.emission_deg.value * kRadianPerDegree);
  const double length_margin = std::exp(kOneSided95 * length.sd() / length.value);
  if (m.method == ThicknessMethod::substrate_line) {
    if (!(r > 1.0)) return std::nullopt;
    return ThicknessBound{true, upper_bound_95(-std::log(r), u / r) * unit_nm * length_margin};
  }
  if (1.0 - r > kTwoSided95 * u) return std::nullopt;
  const double passes = std::min(upper_bound_95(1.0 - r, u), 1.0);
  if (!(passes > 0.0)) return std::nullopt;
  return ThicknessBound{false, -std::log(passes) * unit_nm / length_margin};
}

}  // namespace pellicle::detail
