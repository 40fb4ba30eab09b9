// Notation: t thickness [nm], R ratio, R0 reference ratio, r product of all factors (R/R0 for the ratio method),
// Lf and Ls attenuation lengths in the film of the film's and the substrate's line [nm], theta emission angle,
// x = t/(Lf cos theta), rho = Lf/Ls.
#include "pellicle/estimate/thickness.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <limits>
#include <string>

#include <boost/math/tools/toms748_solve.hpp>

#include "estimate/overlayer_kernel.hpp"
#include "pellicle/base/constants.hpp"
#include "pellicle/base/error.hpp"
#include "pellicle/base/number.hpp"
#include "pellicle/base/parallel.hpp"
#include "pellicle/sample/acceptance.hpp"
#include "pellicle/sample/emission.hpp"

namespace pellicle {
namespace {

/// Beyond this many lengths the substrate keeps less than 5 % of its signal.
constexpr double kThickestReduced = 3.0;

void check_quantity(const std::string& name, const Quantity& q, bool zero_allowed) {
  if (!std::isfinite(q.value) || !(zero_allowed ? q.value >= 0.0 : q.value > 0.0)) {
    throw InputError(name, number_text(q.value) + " is not a number " + (zero_allowed ? ">= 0" : "> 0"));
  }
  if (q.standard_uncertainty && (!std::isfinite(*q.standard_uncertainty) || !(*q.standard_uncertainty >= 0.0))) {
    throw InputError(name + "_sd", number_text(*q.standard_uncertainty) + " is not a standard uncertainty",
                     "expected a number >= 0");
  }
}

void note_missing_uncertainty(const std::string& name, const Quantity& q, Findings& findings) {
  if (q.standard_uncertainty) return;
  add_finding(findings, {"uncertainty_not_given", Severity::warning,
                         "no uncertainty is given for " + name + "; it adds nothing to the budget", q.value});
}

double length_ratio(const FilmMeasurement& m) {
  return m.substrate_line_length_nm ? m.film_line_length_nm.value / m.substrate_line_length_nm->value : 1.0;
}

const char* film_length_name(const FilmMeasurement& m) { return m.substrate_line_length_nm ? kFilmLengthName : kLengthName; }

/// x and its derivatives: by ln r, and by ϱ at constant r.
struct Reduced {
  double x = 0.0;
  double by_log_r = 0.0;
  double by_rho = 0.0;
};

/// Implicit differentiation of g(x) = ln(1 − e^−x) + ϱx = ln r:  dx = [d ln r − x dϱ] / (ϱ + 1/(e^x − 1)).
std::optional<Reduced> solve_reduced(ThicknessMethod method, double r, double rho) {
  switch (method) {
    case ThicknessMethod::ratio: {
      if (!(r > 0.0)) return Reduced{};
      const detail::RootResult root = detail::overlayer_root_as_in_arrays(r, rho);
      if (root.status != Status::ok) return std::nullopt;
      const double inverse_slope = root.x > 0.0 ? 1.0 / (rho + 1.0 / std::expm1(root.x)) : 0.0;
      return Reduced{root.x, inverse_slope, -root.x * inverse_slope};
    }
    case ThicknessMethod::substrate_line:
      if (!(r > 0.0) || r > 1.0) return std::nullopt;
      return Reduced{-std::log(r), -1.0, 0.0};
    case ThicknessMethod::film_line:
    case ThicknessMethod::atomic_percent: break;
  }
  if (!(r < 1.0)) return std::nullopt;
  return Reduced{-std::log1p(-r), r / (1.0 - r), 0.0};
}

/// r of the cone for a thickness: intensities are averaged over the rays before a ratio is formed.
double cone_signal(ThicknessMethod method, double thickness_nm, double film_length, double substrate_length,
                   const std::vector<Ray>& rays) {
  double film = 0.0, substrate = 0.0;
  for (const Ray& ray : rays) {
    film -= ray.weight * std::expm1(-thickness_nm / (film_length * ray.cos_emission));
    substrate += ray.weight * std::exp(-thickness_nm / (substrate_length * ray.cos_emission));
  }
  if (method == ThicknessMethod::ratio) return film / substrate;
  return method == ThicknessMethod::substrate_line ? substrate : film;
}

/// r times value^power, exact for the powers that occur.
void apply(double& r, double value, double power) {
  if (power == 1.0) {
    r *= value;
  } else if (power == -1.0) {
    r = detail::reduced_ratio(r, value);
  } else {
    r *= std::pow(value, power);
  }
}

double product_of(const FilmMeasurement& m) {
  double r = 1.0;
  for (const SignalFactor& f : m.factors) apply(r, f.quantity.value, f.power);
  return r;
}

[[noreturn]] void throw_no_thickness(const FilmMeasurement& m, double r) {
  const std::string value = rounded_text(r, 4);
  switch (m.method) {
    case ThicknessMethod::substrate_line:
      if (r > 1.0) throw DomainError("substrate_area", "it is " + value + " times its reference area, as if the film were thinner than nothing", "only an upper bound of the thickness can be given");
      throw DomainError("substrate_area", "the substrate's line is not there", "only a lower bound of the thickness can be given");
    case ThicknessMethod::film_line:
      throw DomainError("film_area", "it is " + value + " times the area of an infinitely thick film", "only a lower bound of the thickness can be given");
    case ThicknessMethod::atomic_percent:
      throw DomainError("atomic_percent", "an apparent fraction of " + value + " leaves no signal from below", "only a lower bound of the thickness can be given");
    case ThicknessMethod::ratio: break;
  }
  throw ConvergenceError("thickness", "the solver did not reach its tolerance");
}

void check_correlation(double coefficient) {
  if (!(std::abs(coefficient) <= 1.0)) throw InputError("length_correlation", number_text(coefficient) + " lies outside [-1, 1]");
}

void check_measurement(const FilmMeasurement& m) {
  for (const SignalFactor& f : m.factors) {
    // Only what was measured may be nothing; a reference may not, nor the substrate's line where it stands alone.
    const bool measured = f.is_area && f.power > 0.0 && f.kind == ContributionKind::repeatability;
    check_quantity(f.name, f.quantity, measured && m.method != ThicknessMethod::substrate_line);
  }
  check_quantity(kFilmLengthName, m.film_line_length_nm, false);
  if (m.substrate_line_length_nm) check_quantity(kSubstrateLengthName, *m.substrate_line_length_nm, false);
  check_emission_deg(m.emission_deg.value);
  check_quantity(kEmissionName, m.emission_deg, true);
  const double r = product_of(m);
  if (!std::isfinite(r)) throw InputError("areas", "their ratio is too large or too small for a number");
}

/// Result at the estimate with all sensitivities.
struct Point {
  double t = 0.0, x = 0.0;
  std::vector<UncertainInput> inputs;
};

Point differentiate(const FilmMeasurement& m, const Reduced& reduced, double cone) {
  const double angle = m.emission_deg.value * kRadianPerDegree;
  const double unit = cone * m.film_line_length_nm.value * std::cos(angle);
  Point p;
  p.x = reduced.x;
  p.t = reduced.x * unit;
  for (const SignalFactor& f : m.factors) {
    double sensitivity = 0.0;
    if (f.quantity.value > 0.0) {
      sensitivity = f.power * unit * reduced.by_log_r / f.quantity.value;
    } else if (f.power == 1.0 && m.method != ThicknessMethod::substrate_line) {
      // No film signal: x ≈ r, and r is proportional to this area.
      double others = 1.0;
      for (const SignalFactor& other : m.factors) {
        if (&other != &f) others *= std::pow(other.quantity.value, other.power);
      }
      sensitivity = unit * others;
    }
    p.inputs.push_back({f.name, f.quantity.value, f.quantity.sd(), sensitivity, f.kind});
  }
  const Quantity& film = m.film_line_length_nm;
  double by_film_length = cone * std::cos(angle) * reduced.x;
  if (m.substrate_line_length_nm) {
    const Quantity& substrate = *m.substrate_line_length_nm;
    by_film_length += unit * reduced.by_rho / substrate.value;
    const double by_substrate = -unit * reduced.by_rho * film.value / (substrate.value * substrate.value);
    p.inputs.push_back({kFilmLengthName, film.value, film.sd(), by_film_length, ContributionKind::scale});
    p.inputs.push_back({kSubstrateLengthName, substrate.value, substrate.sd(), by_substrate, ContributionKind::scale});
  } else {
    p.inputs.push_back({kLengthName, film.value, film.sd(), by_film_length, ContributionKind::scale});
  }
  // A stage offset is the same for every spot of a mount, so the angle counts as common, not as repeatability.
  // t ∝ cosθ at constant r, and r itself changes with the way through layers above.
  const double by_angle = (unit * reduced.by_log_r * m.log_of_layers_above - p.t) * std::tan(angle) * kRadianPerDegree;
  p.inputs.push_back({kEmissionName, m.emission_deg.value, m.emission_deg.sd(), by_angle, ContributionKind::scale});
  return p;
}

std::vector<Correlation> positions(const FilmMeasurement& m, const std::vector<UncertainInput>& inputs) {
  std::vector<Correlation> all;
  const auto position = [&](const std::string& name) {
    const auto found = std::find_if(inputs.begin(), inputs.end(), [&](const UncertainInput& i) { return i.name == name; });
    if (found == inputs.end()) throw InputError("correlation", "no input is called \"" + name + "\"");
    return static_cast<std::size_t>(found - inputs.begin());
  };
  for (const NamedCorrelation& c : m.correlations) all.push_back({position(c.first), position(c.second), c.coefficient});
  return all;
}

void note_inputs(const FilmMeasurement& m, bool scale_stated, Findings& findings) {
  for (const SignalFactor& f : m.factors) note_missing_uncertainty(f.name, f.quantity, findings);
  note_missing_uncertainty(film_length_name(m), m.film_line_length_nm, findings);
  if (m.substrate_line_length_nm) note_missing_uncertainty(kSubstrateLengthName, *m.substrate_line_length_nm, findings);
  note_missing_uncertainty(kEmissionName, m.emission_deg, findings);
  if (!scale_stated) {
    add_finding(findings, {"scale_not_stated", Severity::warning,
                           "thickness scale: not stated, because the attenuation length has no uncertainty"});
  }
}

}  // namespace

const char* method_name(ThicknessMethod method) noexcept {
  switch (method) {
    case ThicknessMethod::ratio: return "ratio";
    case ThicknessMethod::substrate_line: return "substrate-line";
    case ThicknessMethod::film_line: return "film-line";
    case ThicknessMethod::atomic_percent: break;
  }
  return "atomic-percent";
}

double cone_factor(const FilmMeasurement& m) {
  check_measurement(m);
  if (m.acceptance_half_angle_deg == 0.0) return 1.0;
  const std::vector<Ray> rays = acceptance_rays(m.emission_deg.value, m.acceptance_half_angle_deg);
  const double r = product_of(m);
  const std::optional<Reduced> axis = solve_reduced(m.method, r, length_ratio(m));
  if (!axis) throw_no_thickness(m, r);
  if (!(axis->x > 0.0)) return 1.0;
  const double film_length = m.film_line_length_nm.value;
  const double substrate_length = m.substrate_line_length_nm ? m.substrate_line_length_nm->value : film_length;
  const double t = axis->x * film_length * std::cos(m.emission_deg.value * kRadianPerDegree);
  const auto misfit = [&](double factor) { return std::log(cone_signal(m.method, t * factor, film_length, substrate_length, rays) / r); };
  double low = 0.5, high = 2.0;
  while (misfit(low) * misfit(high) > 0.0 && high < 1e3) {
    low *= 0.5;
    high *= 2.0;
  }
  if (!(misfit(low) * misfit(high) <= 0.0)) throw ConvergenceError("acceptance_half_angle_deg", "no thickness fits the cone");
  std::uintmax_t steps = 100;
  const auto [a, b] = boost::math::tools::toms748_solve(misfit, low, high, boost::math::tools::eps_tolerance<double>(50), steps);
  return 0.5 * (a + b);
}

Thickness thickness_from_factors(const FilmMeasurement& m) {
  check_measurement(m);
  const double r = product_of(m);
  const std::optional<Reduced> reduced = solve_reduced(m.method, r, length_ratio(m));
  if (!reduced) throw_no_thickness(m, r);
  const Point p = differentiate(m, *reduced, m.acceptance_half_angle_deg == 0.0 ? 1.0 : cone_factor(m));

  Thickness result;
  result.value_nm = p.t;
  result.reduced_thickness = p.x;
  result.budget = combine(p.inputs, positions(m, p.inputs));
  result.standard_uncertainty_nm = result.budget.standard_uncertainty;
  if (!std::isfinite(p.t) || !std::isfinite(result.standard_uncertainty_nm)) {
    throw DomainError("thickness_nm", "it or its uncertainty is too large for a number", "check the sizes of areas and lengths");
  }
  result.scale_stated = m.film_line_length_nm.standard_uncertainty &&
                        (!m.substrate_line_length_nm || m.substrate_line_length_nm->standard_uncertainty);
  result.interval_nm = normal_interval(p.t, result.standard_uncertainty_nm);
  Findings findings = emission_findings(m.emission_deg.value, m.length_given_for_angle);
  note_inputs(m, result.scale_stated, findings);
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

void thickness_of_draws(const FilmMeasurement& m, std::span<const std::span<const double>> inputs, double cone, std::span<double> out) {
  const std::size_t size = out.size();
  std::array<double, kBlockSize> r, unit;
  std::size_t input = 0;
  std::fill_n(r.begin(), size, 1.0);
  for (const SignalFactor& f : m.factors) {
    const std::span<const double> values = inputs[input++];
    if (f.power == 1.0) {
      for (std::size_t k = 0; k < size; ++k) r[k] *= values[k];
    } else if (f.power == -1.0) {
      for (std::size_t k = 0; k < size; ++k) r[k] /= values[k];
    } else {
      for (std::size_t k = 0; k < size; ++k) r[k] *= std::pow(values[k], f.power);
    }
  }
  const std::span<const double> film_length = inputs[input++];
  const std::span<const double> substrate_length = m.substrate_line_length_nm ? inputs[input++] : film_length;
  detail::overlayer_kernel().cosines_of_deg(inputs[input].data(), size, unit.data());
  if (m.log_of_layers_above != 0.0) {
    const double at_estimate = std::cos(m.emission_deg.value * kRadianPerDegree);
    for (std::size_t k = 0; k < size; ++k) r[k] *= std::exp(m.log_of_layers_above * (at_estimate / unit[k] - 1.0));
  }
  for (std::size_t k = 0; k < size; ++k) unit[k] *= cone * film_length[k];

  constexpr double kNone = std::numeric_limits<double>::quiet_NaN();
  switch (m.method) {
    case ThicknessMethod::ratio: break;
    case ThicknessMethod::substrate_line:
      for (std::size_t k = 0; k < size; ++k) out[k] = unit[k] > 0.0 && r[k] > 0.0 ? std::max(-std::log(r[k]), 0.0) * unit[k] : kNone;
      return;
    case ThicknessMethod::film_line:
    case ThicknessMethod::atomic_percent:
      for (std::size_t k = 0; k < size; ++k) {
        const double x = r[k] < 1.0 ? -std::log1p(-r[k]) : std::numeric_limits<double>::infinity();
        out[k] = unit[k] > 0.0 && r[k] >= 0.0 ? x * unit[k] : kNone;
      }
      return;
  }
  const double one = 1.0;
  const bool equal_lengths = !m.substrate_line_length_nm.has_value();
  std::array<Status, kBlockSize> status;
  const detail::KernelInput input_of_kernel{{r.data(), 1}, {&one, 0}, {film_length.data(), 1}, {substrate_length.data(), 1}, {unit.data(), 1}, equal_lengths};
  if (detail::overlayer_kernel().solve(input_of_kernel, size, out.data(), status.data()) == 0) return;
  for (std::size_t k = 0; k < size; ++k) {
    if (status[k] == Status::ok) continue;
    const detail::RootResult root = unit[k] > 0.0 ? detail::overlayer_root_as_in_arrays(r[k], film_length[k] / substrate_length[k]) : detail::RootResult{0.0, Status::invalid_input};
    out[k] = root.status == Status::ok ? root.x * unit[k] : kNone;
  }
}

Thickness thickness_from_ratio(const RatioMeasurement& m) {
  if (m.ratio.value == std::numeric_limits<double>::infinity()) {
    throw DomainError("ratio", "the substrate's line is not there", "only a lower bound of the thickness can be given");
  }
  check_correlation(m.length_correlation);
  FilmMeasurement general;
  general.factors = {{"ratio", m.ratio, 1.0, ContributionKind::repeatability, true},
                     {"reference_ratio", m.reference_ratio, -1.0, ContributionKind::scale}};
  general.film_line_length_nm = m.film_line_length_nm;
  general.substrate_line_length_nm = m.substrate_line_length_nm;
  general.emission_deg = m.emission_deg;
  if (m.substrate_line_length_nm && m.length_correlation != 0.0) {
    general.correlations = {{kFilmLengthName, kSubstrateLengthName, m.length_correlation}};
  }
  return thickness_from_factors(general);
}

Thickness thickness_from_areas(const AreaMeasurement& m) {
  if (m.substrate_area.value == 0.0) {
    throw DomainError("substrate_area", "the substrate's line is not there", "only a lower bound of the thickness can be given");
  }
  const bool by_areas = m.reference_film_area || m.reference_substrate_area;
  if (by_areas == m.reference_ratio.has_value()) {
    throw InputError("reference", by_areas ? "both a reference ratio and reference areas are given" : "no reference ratio is given",
                     "give reference_ratio, or both reference_film_area and reference_substrate_area");
  }
  if (by_areas && !(m.reference_film_area && m.reference_substrate_area)) {
    throw InputError("reference", "one of the two reference areas is missing",
                     "give both reference_film_area and reference_substrate_area");
  }
  check_correlation(m.length_correlation);
  FilmMeasurement general;
  general.factors = {{"film_area", m.film_area, 1.0, ContributionKind::repeatability, true},
                     {"substrate_area", m.substrate_area, -1.0, ContributionKind::repeatability, true}};
  if (by_areas) {
    general.factors.push_back({"reference_film_area", *m.reference_film_area, -1.0, ContributionKind::scale, true});
    general.factors.push_back({"reference_substrate_area", *m.reference_substrate_area, 1.0, ContributionKind::scale, true});
  } else {
    general.factors.push_back({"reference_ratio", *m.reference_ratio, -1.0, ContributionKind::scale});
  }
  general.film_line_length_nm = m.film_line_length_nm;
  general.substrate_line_length_nm = m.substrate_line_length_nm;
  general.emission_deg = m.emission_deg;
  if (m.substrate_line_length_nm && m.length_correlation != 0.0) {
    general.correlations = {{kFilmLengthName, kSubstrateLengthName, m.length_correlation}};
  }
  return thickness_from_factors(general);
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

  const detail::OverlayerKernel kernel = detail::overlayer_kernel().solve;
  const auto column = [](std::span<const double> values) {
    return detail::KernelColumn{values.data(), values.size() == 1 ? std::size_t{0} : std::size_t{1}};
  };
  const detail::KernelColumn ratio = column(in.ratio), reference = column(in.reference_ratio);
  const detail::KernelColumn film_length = column(in.film_line_length_nm), emission = column(in.emission_deg);
  const detail::KernelColumn substrate_length = equal_lengths ? film_length : column(in.substrate_line_length_nm);
  const auto positive = [](double v) { return v > 0.0 && std::isfinite(v); };
  // L_f cosθ; NaN, which the kernel leaves to us, where one of them is not legal.
  const auto unit_of = [&](double length, double angle) {
    const bool legal = positive(length) && angle >= 0.0 && angle < 90.0;
    return legal ? length * std::cos(angle * kRadianPerDegree) : std::numeric_limits<double>::quiet_NaN();
  };
  const bool one_unit = film_length.step == 0 && emission.step == 0;
  for_each_block(size, [&](std::size_t begin, std::size_t end) {
    std::array<double, kBlockSize> units;
    units[0] = unit_of(film_length[begin], emission[begin]);
    if (!one_unit) {
      // Neighbours mostly share their angle; its cosine is then known.
      double angle = emission[begin], cosine = unit_of(1.0, angle);
      for (std::size_t i = begin; i < end; ++i) {
        if (emission[i] != angle) cosine = unit_of(1.0, angle = emission[i]);
        units[i - begin] = positive(film_length[i]) ? film_length[i] * cosine : std::numeric_limits<double>::quiet_NaN();
      }
    }
    const auto here = [&](const detail::KernelColumn& c) { return detail::KernelColumn{c.values + begin * c.step, c.step}; };
    const detail::KernelColumn unit{units.data(), one_unit ? std::size_t{0} : std::size_t{1}};
    const detail::KernelInput input{here(ratio), here(reference), here(film_length), here(substrate_length), unit, equal_lengths};
    if (kernel(input, end - begin, &out[begin], &status[begin]) == 0) return;
    for (std::size_t i = begin; i < end; ++i) {
      if (status[i] == Status::ok) continue;
      const double unit_nm = unit[i - begin];
      out[i] = std::numeric_limits<double>::quiet_NaN();
      if (!(ratio[i] >= 0.0) || !positive(reference[i]) || !positive(substrate_length[i]) || std::isnan(unit_nm)) {
        status[i] = Status::invalid_input;
        continue;
      }
      const double rho = equal_lengths ? 1.0 : film_length[i] / substrate_length[i];
      const detail::RootResult root = detail::overlayer_root_as_in_arrays(detail::reduced_ratio(ratio[i], reference[i]), rho);
      const double thickness = root.x * unit_nm;
      status[i] = root.status == Status::ok && !std::isfinite(thickness) ? Status::no_solution : root.status;
      if (status[i] == Status::ok) out[i] = thickness;
    }
  });
}

}  // namespace pellicle
