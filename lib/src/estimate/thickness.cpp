// Notation: t thickness [nm], R ratio, R0 reference ratio, Lf and Ls attenuation lengths in the film of
// the film's and the substrate's line [nm], theta emission angle, x = t/(Lf cos theta), rho = Lf/Ls.
#include "pellicle/estimate/thickness.hpp"

#include <algorithm>
#include <cmath>
#include <limits>
#include <string>

#include "estimate/overlayer_root.hpp"
#include "pellicle/base/constants.hpp"
#include "pellicle/base/error.hpp"
#include "pellicle/base/number.hpp"
#include "pellicle/base/parallel.hpp"
#include "pellicle/sample/emission.hpp"

namespace pellicle {
namespace {

/// Beyond this many lengths the substrate keeps less than 5 % of its signal.
constexpr double kThickestReduced = 3.0;

void check_quantity(const char* name, const Quantity& q, bool zero_allowed) {
  if (!std::isfinite(q.value) || !(zero_allowed ? q.value >= 0.0 : q.value > 0.0)) {
    throw InputError(name, number_text(q.value) + " is not a number " + (zero_allowed ? ">= 0" : "> 0"));
  }
  if (q.standard_uncertainty && (!std::isfinite(*q.standard_uncertainty) || !(*q.standard_uncertainty >= 0.0))) {
    throw InputError(std::string(name) + "_sd", number_text(*q.standard_uncertainty) + " is not a standard uncertainty",
                     "expected a number >= 0");
  }
}

void note_missing_uncertainty(const char* name, const Quantity& q, Findings& findings) {
  if (q.standard_uncertainty) return;
  add_finding(findings, {"uncertainty_not_given", Severity::warning,
                         std::string("no uncertainty is given for ") + name + "; it adds nothing to the budget", q.value});
}

/// Thickness and its first derivatives at one point.
struct Point {
  double t, x;
  double by_log_ratio;       // ∂t/∂ln R = −∂t/∂ln R0
  double by_film_length;     // ∂t/∂Lf
  double by_substrate_length;// ∂t/∂Ls; 0 when Ls is Lf
  double by_emission_deg;    // ∂t/∂θ per degree
};

/// Implicit differentiation of g(x) = ln(1 − e^−x) + ϱx = ln(R/R0):
///   dx = [d ln(R/R0) − x dϱ] / (ϱ + 1/(e^x − 1)),  t = x Lf cosθ,  ϱ = Lf/Ls.
Point solve(double ratio, double reference_ratio, double film_length, std::optional<double> substrate_length,
            double emission_deg) {
  const double angle = emission_deg * kRadianPerDegree;
  const double unit = film_length * std::cos(angle);
  Point p{};
  p.by_emission_deg = 0.0;
  const double rho = substrate_length ? film_length / *substrate_length : 1.0;
  if (ratio > 0.0) {
    const detail::RootResult root = detail::overlayer_root(ratio / reference_ratio, rho);
    if (root.status != Status::ok) throw ConvergenceError("thickness", "the solver did not reach its tolerance");
    p.x = root.x;
  }
  p.t = p.x * unit;
  // 1/(ϱ + 1/(e^x − 1)) written so that x = 0 gives 0 and a large x gives 1/ϱ.
  const double inverse_slope = p.x > 0.0 ? 1.0 / (rho + 1.0 / std::expm1(p.x)) : 0.0;
  p.by_log_ratio = unit * inverse_slope;
  const double dx_drho = -p.x * inverse_slope;
  if (substrate_length) {
    p.by_film_length = std::cos(angle) * (p.x + film_length * dx_drho / *substrate_length);
    p.by_substrate_length = -unit * dx_drho * film_length / (*substrate_length * *substrate_length);
  } else {
    p.by_film_length = p.x * std::cos(angle);
  }
  p.by_emission_deg = -p.t * std::tan(angle) * kRadianPerDegree;
  return p;
}

/// What both kinds of measurement share: lengths and angle.
struct Common {
  const Quantity& film_line_length_nm;
  const std::optional<Quantity>& substrate_line_length_nm;
  const Quantity& emission_deg;
  double length_correlation;
};

/// ∂t/∂v of a quantity v of which R/R0 is proportional to v^power. At v = 0 (no film signal) t ≈ Lf cosθ R/R0.
double by_factor(const Point& p, double value, double power, double unit_at_zero) {
  return value > 0.0 ? power * p.by_log_ratio / value : unit_at_zero;
}

Thickness assemble(const Point& p, std::vector<UncertainInput> inputs, const Common& common, Findings findings) {
  std::vector<Correlation> correlations;
  const Quantity& film = common.film_line_length_nm;
  const char* film_name = common.substrate_line_length_nm ? "film_line_length_nm" : "length_nm";
  inputs.push_back({film_name, film.value, film.sd(), p.by_film_length, ContributionKind::scale});
  note_missing_uncertainty(film_name, film, findings);
  bool scale_stated = film.standard_uncertainty.has_value();
  if (common.substrate_line_length_nm) {
    const Quantity& substrate = *common.substrate_line_length_nm;
    inputs.push_back({"substrate_line_length_nm", substrate.value, substrate.sd(), p.by_substrate_length, ContributionKind::scale});
    note_missing_uncertainty("substrate_line_length_nm", substrate, findings);
    scale_stated = scale_stated && substrate.standard_uncertainty;
    if (common.length_correlation != 0.0) {
      correlations.push_back({inputs.size() - 2, inputs.size() - 1, common.length_correlation});
    }
  }
  const Quantity& angle = common.emission_deg;
  // A stage offset is the same for every spot of a mount, so the angle counts as common, not as repeatability.
  inputs.push_back({"emission_deg", angle.value, angle.sd(), p.by_emission_deg, ContributionKind::scale});
  note_missing_uncertainty("emission_deg", angle, findings);

  Thickness result;
  result.value_nm = p.t;
  result.reduced_thickness = p.x;
  result.budget = combine(inputs, correlations);
  result.standard_uncertainty_nm = result.budget.standard_uncertainty;
  result.scale_stated = scale_stated;
  result.interval_nm = normal_interval(p.t, result.standard_uncertainty_nm);
  if (!scale_stated) {
    add_finding(findings, {"scale_not_stated", Severity::warning,
                           "thickness scale: not stated, because the attenuation length has no uncertainty"});
  }
  if (result.interval_nm.low95 < 0.0) {
    add_finding(findings, {"interval_reaches_zero", Severity::warning,
                           "the 95 % interval reaches zero thickness; its lower end is set to 0 nm",
                           result.interval_nm.low95, 0.0});
    result.interval_nm.low95 = 0.0;
  }
  if (p.x > kThickestReduced) {
    add_finding(findings, {"film_thick", Severity::warning,
                           "the film is thicker than three attenuation lengths along the emission direction; the substrate "
                           "keeps less than 5 % of its signal and small errors of its area dominate",
                           p.x, kThickestReduced});
  }
  result.findings = std::move(findings);
  return result;
}

void check_common(const Common& common) {
  check_quantity("film_line_length_nm", common.film_line_length_nm, false);
  if (common.substrate_line_length_nm) check_quantity("substrate_line_length_nm", *common.substrate_line_length_nm, false);
  check_emission_deg(common.emission_deg.value);
  check_quantity("emission_deg", common.emission_deg, true);
}

Point solve(double ratio, double reference_ratio, const Common& common) {
  return solve(ratio, reference_ratio, common.film_line_length_nm.value,
               common.substrate_line_length_nm ? std::optional<double>(common.substrate_line_length_nm->value) : std::nullopt,
               common.emission_deg.value);
}

double slope_at_zero(const Common& common) {
  return common.film_line_length_nm.value * std::cos(common.emission_deg.value * kRadianPerDegree);
}

}  // namespace

Thickness thickness_from_ratio(const RatioMeasurement& m) {
  const Common common{m.film_line_length_nm, m.substrate_line_length_nm, m.emission_deg, m.length_correlation};
  if (m.ratio.value == std::numeric_limits<double>::infinity()) {
    throw DomainError("ratio", "the substrate's line is not there", "only a lower bound of the thickness can be given");
  }
  check_quantity("ratio", m.ratio, true);
  check_quantity("reference_ratio", m.reference_ratio, false);
  check_common(common);
  const Point p = solve(m.ratio.value, m.reference_ratio.value, common);
  Findings findings = emission_findings(m.emission_deg.value);
  note_missing_uncertainty("ratio", m.ratio, findings);
  note_missing_uncertainty("reference_ratio", m.reference_ratio, findings);
  return assemble(p,
                  {{"ratio", m.ratio.value, m.ratio.sd(),
                    by_factor(p, m.ratio.value, 1.0, slope_at_zero(common) / m.reference_ratio.value),
                    ContributionKind::repeatability},
                   {"reference_ratio", m.reference_ratio.value, m.reference_ratio.sd(),
                    by_factor(p, m.reference_ratio.value, -1.0, 0.0), ContributionKind::scale}},
                  common, std::move(findings));
}

Thickness thickness_from_areas(const AreaMeasurement& m) {
  const Common common{m.film_line_length_nm, m.substrate_line_length_nm, m.emission_deg, m.length_correlation};
  check_quantity("film_area", m.film_area, true);
  if (m.substrate_area.value == 0.0) {
    throw DomainError("substrate_area", "the substrate's line is not there", "only a lower bound of the thickness can be given");
  }
  check_quantity("substrate_area", m.substrate_area, false);
  check_common(common);
  const bool by_areas = m.reference_film_area || m.reference_substrate_area;
  if (by_areas == m.reference_ratio.has_value()) {
    throw InputError("reference", by_areas ? "both a reference ratio and reference areas are given" : "no reference ratio is given",
                     "give reference_ratio, or both reference_film_area and reference_substrate_area");
  }
  if (by_areas && !(m.reference_film_area && m.reference_substrate_area)) {
    throw InputError("reference", "one of the two reference areas is missing",
                     "give both reference_film_area and reference_substrate_area");
  }
  double reference_ratio = 0.0;
  if (by_areas) {
    check_quantity("reference_film_area", *m.reference_film_area, false);
    check_quantity("reference_substrate_area", *m.reference_substrate_area, false);
    reference_ratio = m.reference_film_area->value / m.reference_substrate_area->value;
  } else {
    check_quantity("reference_ratio", *m.reference_ratio, false);
    reference_ratio = m.reference_ratio->value;
  }
  const double ratio = m.film_area.value / m.substrate_area.value;
  if (!std::isfinite(ratio) || !(reference_ratio > 0.0) || !std::isfinite(reference_ratio) ||
      !std::isfinite(ratio / reference_ratio)) {
    throw InputError("areas", "their ratio is too large or too small for a number");
  }
  const Point p = solve(ratio, reference_ratio, common);

  Findings findings = emission_findings(m.emission_deg.value);
  std::vector<UncertainInput> inputs;
  const auto add = [&](const char* name, const Quantity& q, double power, double at_zero, ContributionKind kind) {
    note_missing_uncertainty(name, q, findings);
    inputs.push_back({name, q.value, q.sd(), by_factor(p, q.value, power, at_zero), kind});
  };
  add("film_area", m.film_area, 1.0, slope_at_zero(common) / (m.substrate_area.value * reference_ratio), ContributionKind::repeatability);
  add("substrate_area", m.substrate_area, -1.0, 0.0, ContributionKind::repeatability);
  if (by_areas) {
    add("reference_film_area", *m.reference_film_area, -1.0, 0.0, ContributionKind::scale);
    add("reference_substrate_area", *m.reference_substrate_area, 1.0, 0.0, ContributionKind::scale);
  } else {
    add("reference_ratio", *m.reference_ratio, -1.0, 0.0, ContributionKind::scale);
  }
  return assemble(p, std::move(inputs), common, std::move(findings));
}

void thickness_nm(const RatioArrays& in, std::span<double> out, std::span<Status> status) {
  const std::size_t size = out.size();
  const bool equal_lengths = in.substrate_line_length_nm.empty();
  const auto check_size = [&](const char* name, std::span<const double> values) {
    if (values.size() != size && values.size() != 1) {
      throw InputError(name, "it has " + std::to_string(values.size()) + " elements where " + std::to_string(size) + " or 1 are needed");
    }
  };
  check_size("status", std::span<const double>(out.data(), status.size() == size ? size : 0));
  check_size("ratio", in.ratio);
  check_size("reference_ratio", in.reference_ratio);
  check_size("film_line_length_nm", in.film_line_length_nm);
  if (!equal_lengths) check_size("substrate_line_length_nm", in.substrate_line_length_nm);
  check_size("emission_deg", in.emission_deg);

  const auto at = [](std::span<const double> values, std::size_t i) { return values.size() == 1 ? values[0] : values[i]; };
  const auto positive = [](double v) { return v > 0.0 && std::isfinite(v); };
  for_each_block(size, [&](std::size_t begin, std::size_t end) {
    for (std::size_t i = begin; i < end; ++i) {
      const double ratio = at(in.ratio, i);
      const double reference = at(in.reference_ratio, i);
      const double film_length = at(in.film_line_length_nm, i);
      const double substrate_length = equal_lengths ? film_length : at(in.substrate_line_length_nm, i);
      const double emission = at(in.emission_deg, i);
      out[i] = std::numeric_limits<double>::quiet_NaN();
      if (!(ratio >= 0.0) || !positive(reference) || !positive(film_length) || !positive(substrate_length) ||
          !(emission >= 0.0 && emission < 90.0)) {
        status[i] = Status::invalid_input;
        continue;
      }
      const double reduced = ratio / reference;
      if (!std::isfinite(reduced)) {
        status[i] = Status::no_solution;
        continue;
      }
      detail::RootResult root{0.0, Status::ok};
      if (reduced > 0.0) root = detail::overlayer_root(reduced, film_length / substrate_length);
      status[i] = root.status;
      if (root.status == Status::ok) out[i] = root.x * film_length * std::cos(emission * kRadianPerDegree);
    }
  });
}

}  // namespace pellicle
