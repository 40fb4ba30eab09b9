// One result per spot, angle and route: areas into measurements, measurements into thicknesses or bounds.
#include "pellicle/job/thickness_job.hpp"

#include <algorithm>
#include <cmath>

#include "job/bounds.hpp"
#include "job/contamination.hpp"
#include "job/finding_pool.hpp"
#include "job/measurements.hpp"
#include "job/overlying.hpp"
#include "job/summary.hpp"
#include "job/thickness_monte_carlo.hpp"
#include "pellicle/base/error.hpp"
#include "pellicle/base/number.hpp"
#include "pellicle/base/parallel.hpp"
#include "pellicle/sample/emission.hpp"

namespace pellicle {
namespace {

using detail::LineArea;
using detail::Measurement;

/// Monte Carlo is run without being asked for up to this many results.
constexpr std::size_t kMonteCarloResults = 20;

/// What a route needs besides itself, settled once for all spots.
struct RouteWork {
  const ThicknessRoute* route;
  std::vector<detail::OverlyingLayer> overlying;
  std::optional<detail::CarbonBalance> carbon;  ///< of the contamination route "sensitivities"
};

/// A result with the findings it alone has.
struct Evaluated {
  ThicknessResult result;
  Findings findings;
  std::optional<FilmMeasurement> measurement;  ///< kept for Monte Carlo
};

Quantity emission_quantity(const Run& run, double emission_deg, Findings& findings) {
  if (run.emission_sd_deg) return {emission_deg, *run.emission_sd_deg};
  const double sd = assumed_value("emission_sd_deg");
  add_finding(findings, {"assumed", Severity::note,
                         "the uncertainty of the emission angle is assumed to be " + rounded_text(sd, 2) +
                             " deg (common practice, no source)",
                         sd});
  return {emission_deg, sd};
}

void note_area(const LineArea& area, Findings& findings) {
  if (area.sd_assumed) {
    const double relative = assumed_value("area_relative_sd");
    add_finding(findings, {"assumed", Severity::warning,
                           "the uncertainty of the areas is assumed to be " + rounded_text(100.0 * relative, 2) +
                               " % (common practice, no source)",
                           relative});
  }
  if (area.background_missing) {
    add_finding(findings, {"background_not_given", Severity::note,
                           "no background counts are given, so the counting uncertainty leaves the background out"});
  }
}

SignalFactor area_factor(const char* name, const Quantity& area, double power) {
  return {name, area, power, ContributionKind::repeatability, true};
}

/// The measurement of one spot by one route, with these areas.
FilmMeasurement measurement_of(const Run& run, const RouteWork& work, const Measurement& m, const std::optional<Quantity>& film,
                               const std::optional<Quantity>& substrate,
                               const std::optional<detail::ContaminationThickness>& contamination, Findings& findings) {
  const ThicknessRoute& route = *work.route;
  FilmMeasurement general;
  general.method = route.method;
  if (film) general.factors.push_back(area_factor("film_area", *film, 1.0));
  if (substrate) general.factors.push_back(area_factor("substrate_area", *substrate, route.method == ThicknessMethod::ratio ? -1.0 : 1.0));
  general.factors.insert(general.factors.end(), route.factors.begin(), route.factors.end());
  general.correlations = route.correlations;
  general.film_line_length_nm = route.film_length.length_nm;
  if (route.substrate_length) general.substrate_line_length_nm = route.substrate_length->length_nm;
  general.emission_deg = emission_quantity(run, m.emission_deg, findings);
  general.acceptance_half_angle_deg = run.geometry.acceptance_half_angle_deg;
  general.length_given_for_angle = run.length_given_for_angle && route.film_length.origin == "given" &&
                                   (!route.substrate_length || route.substrate_length->origin == "given");

  if (film && substrate) {
    for (const detail::LineCorrelation& c : m.correlations) {
      const bool match = (c.first == route.film_line && c.second == route.substrate_line) || (c.first == route.substrate_line && c.second == route.film_line);
      if (match) general.correlations.push_back({"film_area", "substrate_area", c.coefficient});
    }
  }
  const bool single = route.method == ThicknessMethod::film_line || route.method == ThicknessMethod::substrate_line;
  // A reference without an angle of its own was measured like the areas: there is nothing to carry over.
  const std::optional<std::size_t>& own_line = route.film_line ? route.film_line : route.substrate_line;
  if (single && run.geometry.signal_area != SignalArea::analyser && run.lines[*own_line].reference_emission_deg) {
    general.factors.push_back({"tilt", Quantity(tilt_factor(run.geometry, m.emission_deg), 0.0), -1.0, ContributionKind::scale});
  }
  if (!work.overlying.empty()) {
    const auto correction = detail::overlying_correction(work.overlying, route.method, m.emission_deg, contamination);
    if (correction) {
      general.factors.insert(general.factors.end(), correction->begin(), correction->end());
      general.log_of_layers_above = std::log(correction->front().quantity.value);
    } else {
      add_finding(findings, {"contamination_uncorrected", Severity::warning,
                             "layers above the film attenuate its lines and no thickness is known for them; this is not corrected "
                             "(state thickness_nm of the layer, or a [contamination] route)"});
    }
  }
  return general;
}

/// Part of t's derivative by ln ρ that a computed reference ratio brings: it holds the film's density.
double density_part_nm(const Thickness& t) {
  for (const BudgetRow& row : t.budget.rows) {
    if (row.name == "density_film") return -row.contribution;
  }
  return 0.0;
}

/// Thickness times density. A denser film lets electrons less far, so a predicted length falls and takes part of the
/// density's error back; so does a computed reference ratio. A given length does not.
void set_areal_densities(const ThicknessRoute& route, Evaluated& e) {
  const Thickness& t = *e.result.thickness;
  const double sd = e.result.standard_uncertainty_nm();
  const double density_sd = assumed_value("film_density_relative_sd");
  const double by_reference = density_part_nm(t);
  const double by_density = by_reference + t.value_nm * (1.0 + route.film_length.density_exponent) * density_sd;
  const double rest = std::max(sd * sd - by_reference * by_reference, 0.0);
  const double sd_nm = std::sqrt(rest + by_density * by_density);
  const auto quantity = [&](double per_nm) { return Quantity(per_nm * t.value_nm, per_nm * sd_nm); };
  e.result.areal_density_ug_cm2 = quantity(0.1 * route.density_g_cm3);  // 1 nm of 1 g/cm³ is 0.1 µg/cm²
  if (route.emitter_density_per_nm3 > 0.0) e.result.emitting_atoms_per_nm2 = quantity(route.emitter_density_per_nm3);
  add_finding(e.findings, {"assumed", Severity::note,
                           "the density of the film is assumed good to " + rounded_text(100.0 * density_sd, 2) +
                               " %; only the areal densities hang on it (common practice, no source)",
                           density_sd});
}

void bound_from_undetected(const Run& run, const RouteWork& work, const Measurement& m, const LineArea* film, const LineArea* substrate,
                           const std::optional<detail::ContaminationThickness>& contamination, Evaluated& e) {
  const bool film_lost = film && !film->detected();
  const bool substrate_lost = substrate && !substrate->detected();
  if (film_lost && substrate_lost) {
    e.result.failure = "neither the film's nor the substrate's line is detected";
    return;
  }
  const LineArea& lost = film_lost ? *film : *substrate;
  if (!(lost.sd > 0.0) || lost.sd_assumed) {
    e.result.failure = std::string("the ") + (film_lost ? "film's" : "substrate's") +
                       " line has no area, and neither area_sd nor background_counts say how weak it may be";
    return;
  }
  const auto entering = [](const LineArea& area, bool is_lost) { return is_lost ? detail::undetected_area(area) : Quantity(area.value, area.sd); };
  const std::optional<Quantity> film_area = film ? std::optional(entering(*film, film_lost)) : std::nullopt;
  const std::optional<Quantity> substrate_area = substrate ? std::optional(entering(*substrate, substrate_lost)) : std::nullopt;
  FilmMeasurement general = measurement_of(run, work, m, film_area, substrate_area, contamination, e.findings);
  e.result.bound = ThicknessBound{film_lost, detail::bound_of_undetected(general, film_lost ? "film_area" : "substrate_area", film_lost)};
  e.measurement = std::move(general);
  add_findings(e.findings, emission_findings(m.emission_deg, e.measurement->length_given_for_angle));
  add_finding(e.findings, {film_lost ? "film_not_detected" : "substrate_not_detected", Severity::warning,
                           film_lost ? "the film's line is not detected: the thickness is at most the bound (95 %)"
                                     : "the substrate's line is not detected: the thickness is at least the bound (95 %)",
                           lost.value, lost.decision_level()});
}

void note_single_line_bound(const ThicknessBound& bound, Evaluated& e) {
  e.result.bound = bound;
  add_finding(e.findings, {bound.upper ? "substrate_unattenuated" : "film_saturated", Severity::warning,
                           bound.upper ? "the substrate's area reaches that of the bare substrate: the thickness is at most the bound (95 %)"
                                       : "the film's area reaches that of an infinitely thick film within its uncertainty: the thickness is at "
                                         "least the bound (95 %)"});
}

void note_detection(const LineArea& area, bool film, Findings& findings) {
  const std::optional<double> limit = area.detection_limit();
  if (!limit || area.value >= *limit) return;
  add_finding(findings, {film ? "below_detection_limit" : "beyond_substrate_limit", Severity::warning,
                         film ? "the film's area is below its detection limit; the thickness is hardly more than a hint"
                              : "the substrate's area is below its detection limit; the film is thicker than this measurement can carry",
                         area.value, *limit});
}

Evaluated evaluate(const Run& run, const RouteWork& work, std::size_t route_index, const Measurement& m,
                   const std::optional<detail::ContaminationThickness>& contamination) {
  const ThicknessRoute& route = *work.route;
  Evaluated e;
  e.result.table = m.table;
  e.result.spot = m.spot;
  e.result.emission_deg = m.emission_deg;
  e.result.route = route_index;
  const bool sum_route = route.contamination == ContaminationRoute::sensitivities;
  for (const std::optional<std::size_t>& line : {route.film_line, route.substrate_line}) {
    if (line && !m.lines[*line]) {
      e.result.failure = m.missing[*line];
      return e;
    }
  }
  const LineArea* film = route.film_line ? &*m.lines[*route.film_line] : nullptr;
  const LineArea* substrate = route.substrate_line ? &*m.lines[*route.substrate_line] : nullptr;
  if (film) e.result.film_area = Quantity(film->value, film->sd);
  if (substrate) e.result.substrate_area = Quantity(substrate->value, substrate->sd);
  for (const LineArea* area : {film, substrate}) {
    if (area) note_area(*area, e.findings);
  }
  try {
    if ((film && !film->detected()) || (substrate && !substrate->detected())) {
      if (sum_route) {
        e.result.failure = "the contamination line is not detected";
        return e;
      }
      bound_from_undetected(run, work, m, film, substrate, contamination, e);
      return e;
    }
    FilmMeasurement general = measurement_of(run, work, m, e.result.film_area, e.result.substrate_area, contamination, e.findings);
    if (sum_route) {
      e.result.failure = detail::add_lines_below(route, *work.carbon, m, general);
      if (!e.result.failure.empty()) return e;
    }
    if (const auto bound = detail::bound_of_single_line(general)) {
      note_single_line_bound(*bound, e);
      return e;
    }
    e.result.thickness = thickness_from_factors(general);
    if (film) note_detection(*film, true, e.findings);
    if (substrate) note_detection(*substrate, false, e.findings);
    add_findings(e.findings, e.result.thickness->findings);
    e.result.thickness->findings.clear();
    set_areal_densities(route, e);
    e.measurement = std::move(general);
  } catch (const Error& failure) {
    e.result.failure = failure.what();
  }
  return e;
}

void add_monte_carlo(const Run& run, std::size_t stream, const ThicknessRoute& route, Evaluated& e) {
  if (!e.measurement) return;
  if (e.result.bound) {
    e.result.bound->at95_nm = detail::bound_by_monte_carlo(*e.measurement, e.result.bound->upper, run.uncertainty, stream);
    return;
  }
  e.result.monte_carlo = detail::thickness_by_monte_carlo(*e.measurement, *e.result.thickness, run.uncertainty, stream);
  set_areal_densities(route, e);
  const MonteCarloThickness& mc = *e.result.monte_carlo;
  if (mc.interval_nm.low95 > 0.0) std::erase_if(e.findings, [](const Finding& f) { return f.code == "interval_reaches_zero"; });
  if (!mc.gum_agrees) {
    add_finding(e.findings, {"gum_disagrees", Severity::note,
                             "the Monte Carlo and GUM intervals differ by more than half a unit of the first digit of the uncertainty; the Monte Carlo "
                             "one is quoted [jcgm101]"});
  }
  constexpr double kAsymmetry = 1.25;
  const double up = mc.interval_nm.high95 - e.result.thickness->value_nm;
  const double down = e.result.thickness->value_nm - mc.interval_nm.low95;
  const double asymmetry = std::max(up, down) / std::max(std::min(up, down), 1e-300);
  if (asymmetry > kAsymmetry) {
    add_finding(e.findings, {"interval_not_symmetric", Severity::note,
                             "the 95 % interval is not symmetric about the thickness; quote its two ends, not ± one number", asymmetry, kAsymmetry});
  }
  if (mc.endless > 0) {
    add_finding(e.findings, {"draws_endless", Severity::warning,
                             "in some Monte Carlo draws the film is as good as infinitely thick; they count in the interval, and its quarter stands for "
                             "the standard uncertainty",
                             static_cast<double>(mc.endless)});
  }
  if (mc.rejected > 0) {
    add_finding(e.findings, {"draws_rejected", Severity::warning, "some Monte Carlo draws have no thickness and were left out",
                             static_cast<double>(mc.rejected)});
  }
}

/// One spot that Monte Carlo cannot do keeps what the GUM says of it.
void try_monte_carlo(const Run& run, std::size_t stream, const ThicknessRoute& route, Evaluated& e) {
  try {
    add_monte_carlo(run, stream, route, e);
  } catch (const DomainError& failure) {
    add_finding(e.findings, {"monte_carlo_failed", Severity::warning, std::string("no Monte Carlo interval: ") + failure.what() + "; the GUM one is quoted"});
  }
}

}  // namespace

double ThicknessResult::standard_uncertainty_nm() const {
  return monte_carlo ? monte_carlo->standard_uncertainty_nm : thickness ? thickness->standard_uncertainty_nm : 0.0;
}

Interval ThicknessResult::interval_nm() const {
  return monte_carlo ? monte_carlo->interval_nm : thickness ? thickness->interval_nm : Interval{};
}

Findings ThicknessResults::findings_of(const ThicknessResult& result) const {
  Findings own;
  for (const std::uint32_t i : result.findings) own.push_back(findings[i]);
  return own;
}

ThicknessResults run_thickness(const Run& run, const Progress& progress) {
  ThicknessResults all;
  all.routes = thickness_routes(run);
  if (!run.unread_columns.empty()) {
    std::string names;
    for (const std::string& column : run.unread_columns) names += (names.empty() ? "\"" : ", \"") + column + "\"";
    for (ThicknessRoute& route : all.routes) add_finding(route.findings, {"columns_unread", Severity::note, "columns of the table that are not used: " + names});
  }
  const std::vector<Measurement> measurements = detail::collect_measurements(run);
  std::vector<RouteWork> work;
  std::optional<std::size_t> contamination_route;
  for (std::size_t r = 0; r < all.routes.size(); ++r) {
    const ThicknessRoute& route = all.routes[r];
    work.push_back({&route, detail::overlying_layers(run, route), {}});
    if (route.contamination) contamination_route = r;
    if (route.contamination == ContaminationRoute::sensitivities) work.back().carbon = detail::carbon_balance(run, route);
  }
  const std::size_t count = measurements.size() * work.size();
  const IntervalMethod method = run.uncertainty.method;
  const bool draw = method == IntervalMethod::monte_carlo || method == IntervalMethod::adaptive_monte_carlo ||
                    (method == IntervalMethod::automatic && count <= kMonteCarloResults);

  detail::FindingPool pool(all.findings);
  all.results.reserve(count);
  // Chunks bound the memory of findings that are not pooled yet.
  constexpr std::size_t kChunk = 16 * kBlockSize;
  std::vector<Evaluated> chunk;
  for (std::size_t begin = 0; begin < measurements.size(); begin += kChunk) {
    const std::size_t size = std::min(kChunk, measurements.size() - begin);
    chunk.assign(size * work.size(), {});
    for_each_block(size, [&](std::size_t low, std::size_t high) {
      for (std::size_t i = low; i < high; ++i) {
        const Measurement& m = measurements[begin + i];
        std::optional<detail::ContaminationThickness> contamination;
        for (std::size_t r = 0; r < work.size(); ++r) {
          Evaluated& e = chunk[i * work.size() + r];
          e = evaluate(run, work[r], r, m, contamination);
          if (contamination_route == r && e.result.thickness) {
            const Thickness& t = *e.result.thickness;
            contamination = {t.value_nm, t.budget.repeatability, t.budget.scale};
          }
        }
      }
    });
    for (std::size_t i = 0; i < chunk.size(); ++i) {
      Evaluated& e = chunk[i];
      const ThicknessRoute& route = all.routes[e.result.route];
      if (draw) try_monte_carlo(run, begin * work.size() + i, route, e);
      for (const Findings* findings : {&std::as_const(e.findings), &route.findings}) {
        for (const Finding& f : *findings) {
          const std::uint32_t index = pool.add(f);
          if (std::find(e.result.findings.begin(), e.result.findings.end(), index) == e.result.findings.end()) e.result.findings.push_back(index);
        }
      }
      all.results.push_back(std::move(e.result));
      if (draw && progress && !progress(all.results.size(), count)) throw ConvergenceError("thickness", "stopped before all results were done");
    }
    if (progress && !progress(all.results.size(), count)) throw ConvergenceError("thickness", "stopped before all results were done");
  }
  detail::compare_angles(all, pool);
  for (std::size_t r = 0; r < all.routes.size(); ++r) all.summaries.push_back(detail::summarise(all, r, pool));
  return all;
}

}  // namespace pellicle
