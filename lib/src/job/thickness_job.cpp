// One result per spot, angle and route: areas into measurements, measurements into thicknesses or bounds.
#include "pellicle/job/thickness_job.hpp"

#include <algorithm>
#include <cmath>
#include <map>

#include <boost/math/distributions/chi_squared.hpp>

#include "job/finding_pool.hpp"
#include "job/length_choice.hpp"
#include "job/measurements.hpp"
#include "job/overlying.hpp"
#include "job/reference.hpp"
#include "job/thickness_monte_carlo.hpp"
#include "pellicle/base/constants.hpp"
#include "pellicle/base/error.hpp"
#include "pellicle/base/number.hpp"
#include "pellicle/base/parallel.hpp"
#include "pellicle/uncertainty/detection.hpp"
#include "pellicle/uncertainty/distribution.hpp"

namespace pellicle {
namespace {

using detail::LineArea;
using detail::Measurement;

/// Monte Carlo is run without being asked for up to this many results.
constexpr std::size_t kMonteCarloResults = 20;
constexpr double kOneSided95 = 1.6448536269514722;
/// Two lengths predicted by one formula for one material share nearly all of their error.
constexpr double kSameFormulaCorrelation = 0.9;

/// A line from below the contamination, as its sum needs it.
struct LineBelow {
  std::size_t line = 0;
  Quantity response;       ///< per atom, unit common to all lines
  double length_nm = 0.0;  ///< attenuation length in the contamination
};

/// What a route needs besides itself, settled once for all spots.
struct RouteWork {
  const ThicknessRoute* route;
  std::vector<detail::OverlyingLayer> overlying;
  std::vector<LineBelow> below;        ///< of the route "sensitivities"
  Quantity response = 1.0;             ///< of its contamination line, per atom
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

RouteWork work_of(const Run& run, const ThicknessRoute& route) {
  RouteWork work{&route, detail::overlying_layers(run, route), {}, 1.0};
  if (route.contamination != ContaminationRoute::sensitivities) return work;
  std::vector<std::string> applied;
  Findings noted_by_the_route;
  for (std::size_t l = 0; l < run.lines.size(); ++l) {
    const Line& line = run.lines[l];
    const Quantity response = detail::response_per_atom(run, line, applied, noted_by_the_route);
    if (l == *route.film_line) {
      work.response = response;
    } else if (line.from != route.layer) {
      work.below.push_back({l, response, detail::choose_length(run, line, route.layer, line.kinetic_energy_ev).length_nm.value});
    }
  }
  return work;
}

/// Sum of the lines from below, each over its response: atoms per volume, attenuated.
struct OtherLines {
  Quantity amount;
  std::vector<std::pair<double, double>> amount_and_length;
  std::string missing;  ///< why the sum cannot be made
};

OtherLines other_lines(const RouteWork& work, const Measurement& m) {
  OtherLines sum;
  double variance = 0.0;
  for (const LineBelow& below : work.below) {
    if (!m.lines[below.line]) {
      sum.missing = m.missing[below.line];
      return sum;
    }
    const double response = below.response.value, amount = m.lines[below.line]->value / response;
    sum.amount.value += amount;
    variance += std::pow(m.lines[below.line]->sd / response, 2) + std::pow(below.response.sd() / response * amount, 2);
    sum.amount_and_length.emplace_back(amount, below.length_nm);
  }
  sum.amount.standard_uncertainty = std::sqrt(variance);
  return sum;
}

/// The length L for which exp(d/(L c)) equals the amount-weighted mean of exp(d/(Lᵢ c)).
double common_length(const OtherLines& others, double reduced_depth) {
  double sum = 0.0, reciprocal = 0.0;
  for (const auto& [amount, length] : others.amount_and_length) {
    sum += amount * std::exp(reduced_depth / length);
    reciprocal += amount / length;
  }
  if (!(reduced_depth > 0.0)) return others.amount.value / reciprocal;
  return reduced_depth / std::log(sum / others.amount.value);
}

/// The thickness whose sum of other lines fits: the common length depends on it, a few passes settle it.
Quantity settle_common_length(FilmMeasurement& m, const OtherLines& others) {
  Quantity length(common_length(others, 0.0));
  length.standard_uncertainty = m.film_line_length_nm.sd() / m.film_line_length_nm.value * length.value;
  const double cosine = std::cos(m.emission_deg.value * kRadianPerDegree);
  for (int pass = 0; pass < 50; ++pass) {
    m.substrate_line_length_nm = length;
    const double t = thickness_from_factors(m).value_nm;
    const double next = common_length(others, t / cosine);
    const bool settled = std::abs(next / length.value - 1.0) < 1e-14;
    length.standard_uncertainty = length.sd() * next / length.value;
    length.value = next;
    if (settled) break;
  }
  return length;
}

SignalFactor area_factor(const char* name, const Quantity& area, double power) {
  return {name, area, power, ContributionKind::repeatability, true};
}

/// Correlation coefficient of the areas of two lines: covariances of their components over both uncertainties. A
/// component that stands in both is fully correlated with itself.
double area_correlation(const Run& run, const Measurement& m, std::size_t first, std::size_t second) {
  const LineArea& a = *m.lines[first];
  const LineArea& b = *m.lines[second];
  if (!(a.sd > 0.0) || !(b.sd > 0.0)) return 0.0;
  const auto coefficient = [&](const std::string& x, const std::string& y) {
    if (x == y) return 1.0;
    for (const AreaCorrelation& c : run.area_correlations) {
      if ((c.first == x && c.second == y) || (c.first == y && c.second == x)) return c.coefficient;
    }
    return 0.0;
  };
  const auto sd_of = [](const LineArea& area, std::size_t component) { return area.component_sd.empty() ? area.sd : area.component_sd[component]; };
  const std::vector<Component>& parts = run.lines[first].components;
  const std::vector<Component>& others = run.lines[second].components;
  double covariance = 0.0;
  for (std::size_t i = 0; i < parts.size(); ++i) {
    for (std::size_t j = 0; j < others.size(); ++j) {
      const double r = coefficient(parts[i].label, others[j].label);
      if (r != 0.0) covariance += r * sd_of(a, i) * sd_of(b, j);
    }
  }
  return std::clamp(covariance / (a.sd * b.sd), -1.0, 1.0);
}

/// The measurement of one spot by one route, with these areas.
FilmMeasurement measurement_of(const Run& run, const RouteWork& work, const Measurement& m, const std::optional<Quantity>& film,
                               const std::optional<Quantity>& substrate, const std::optional<Quantity>& contamination_nm, Findings& findings) {
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
  general.length_given_for_angle = run.length_given_for_angle && route.film_length.origin == "given";

  if (film && substrate && route.film_line && route.substrate_line) {
    const double r = area_correlation(run, m, *route.film_line, *route.substrate_line);
    if (r != 0.0) general.correlations.push_back({"film_area", "substrate_area", r});
  }
  const bool single = route.method == ThicknessMethod::film_line || route.method == ThicknessMethod::substrate_line;
  // A reference without an angle of its own was measured like the areas: there is nothing to carry over.
  const std::optional<std::size_t>& own_line = route.film_line ? route.film_line : route.substrate_line;
  if (single && run.geometry.signal_area != SignalArea::analyser && run.lines[*own_line].reference_emission_deg) {
    general.factors.push_back({"tilt", Quantity(tilt_factor(run.geometry, m.emission_deg), 0.0), -1.0, ContributionKind::scale});
  }
  if (!work.overlying.empty()) {
    const auto correction = detail::overlying_correction(work.overlying, route.method, m.emission_deg, contamination_nm);
    if (correction) {
      general.factors.push_back(*correction);
    } else {
      add_finding(findings, {"contamination_uncorrected", Severity::warning,
                             "layers above the film attenuate its lines and no thickness is known for them; this is not corrected "
                             "(state thickness_nm of the layer, or a [contamination] route)"});
    }
  }
  return general;
}

void set_areal_densities(const ThicknessRoute& route, ThicknessResult& result) {
  const Thickness& t = *result.thickness;
  const double sd = result.standard_uncertainty_nm();
  const double relative_t = t.value_nm > 0.0 ? sd / t.value_nm : 0.0;
  // A predicted length falls as the density rises, so their product hardly depends on it; a given one does not.
  const double density = route.film_length.predicted ? 0.0 : assumed_value("film_density_relative_sd");
  const double relative = std::hypot(relative_t, density);
  const auto quantity = [&](double per_nm) {
    const double value = per_nm * t.value_nm;
    return Quantity(value, t.value_nm > 0.0 ? relative * value : per_nm * sd);
  };
  result.areal_density_ug_cm2 = quantity(0.1 * route.density_g_cm3);  // 1 nm of 1 g/cm³ is 0.1 µg/cm²
  if (route.emitter_density_per_nm3 > 0.0) result.emitting_atoms_per_nm2 = quantity(route.emitter_density_per_nm3);
}

void bound_from_undetected(const Run& run, const RouteWork& work, const Measurement& m, const LineArea* film, const LineArea* substrate,
                           const std::optional<Quantity>& contamination_nm, Evaluated& e) {
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
  const auto with_lost_area = [&](double area) {
    const auto quantity = [&](const LineArea* line) -> std::optional<Quantity> {
      if (!line) return std::nullopt;
      return line == &lost ? Quantity(area, 0.0) : Quantity(line->value, line->sd);
    };
    return thickness_from_factors(measurement_of(run, work, m, quantity(film), quantity(substrate), contamination_nm, e.findings));
  };
  // The area may be anything up to its limit, and lengths, references and angle are uncertain as well: their part is
  // added in quadrature to the way from the middle of the area's distribution to its limit.
  const Thickness at_limit = with_lost_area(upper_bound_95(lost.value, lost.sd));
  const double middle = with_lost_area(Distribution::truncated_normal(lost.value, lost.sd).quantile(0.5)).value_nm;
  const double way = std::hypot(at_limit.value_nm - middle, kOneSided95 * at_limit.standard_uncertainty_nm);
  e.result.bound = ThicknessBound{film_lost, film_lost ? middle + way : std::max(middle - way, 0.0)};
  add_findings(e.findings, at_limit.findings);
  add_finding(e.findings, {film_lost ? "film_not_detected" : "substrate_not_detected", Severity::warning,
                           film_lost ? "the film's line is not detected: the thickness is at most the bound (95 %)"
                                     : "the substrate's line is not detected: the thickness is at least the bound (95 %)",
                           lost.value, lost.decision_level()});
}

/// A single line beyond its reference area: r = area/reference, moved by 1.645 of its standard uncertainty below one,
/// bounds the thickness. Length and angle add their part: to an upper bound in quadrature, since the thickness itself may
/// be nothing; from a lower bound it is taken whole, since the thickness itself may be anything.
bool bound_from_excess(const ThicknessRoute& route, const FilmMeasurement& general, const LineArea& area, Evaluated& e) {
  const bool film = route.method == ThicknessMethod::film_line;
  if (!film && route.method != ThicknessMethod::substrate_line) return false;
  FilmMeasurement moved = general;
  double relative = 0.0;
  for (SignalFactor& f : moved.factors) {
    relative = std::hypot(relative, f.power * f.quantity.sd() / f.quantity.value);
    f.quantity.standard_uncertainty = 0.0;
  }
  for (SignalFactor& f : moved.factors) {
    if (f.name == (film ? "film_area" : "substrate_area")) f.quantity.value *= 1.0 - kOneSided95 * relative;
  }
  try {
    const Thickness at_limit = thickness_from_factors(moved);
    const double rest = kOneSided95 * at_limit.standard_uncertainty_nm;
    e.result.bound = film ? ThicknessBound{false, std::max(at_limit.value_nm - rest, 0.0)} : ThicknessBound{true, std::hypot(at_limit.value_nm, rest)};
  } catch (const Error&) {
    return false;
  }
  add_finding(e.findings, {film ? "film_saturated" : "substrate_unattenuated", Severity::warning,
                           film ? "the film's area reaches that of an infinitely thick film: the thickness is at least the bound (95 %)"
                                : "the substrate's area reaches that of the bare substrate: the thickness is at most the bound (95 %)",
                           area.value});
  return true;
}

void note_detection(const LineArea& area, bool film, Findings& findings) {
  const std::optional<double> limit = area.detection_limit();
  if (!limit || area.value >= *limit) return;
  add_finding(findings, {film ? "below_detection_limit" : "beyond_substrate_limit", Severity::warning,
                         film ? "the film's area is below its detection limit; the thickness is hardly more than a hint"
                              : "the substrate's area is below its detection limit; the film is thicker than this measurement can carry",
                         area.value, *limit});
}

Evaluated evaluate(const Run& run, const RouteWork& work, std::size_t route_index, const Measurement& m, const std::optional<Quantity>& contamination_nm) {
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
      bound_from_undetected(run, work, m, film, substrate, contamination_nm, e);
      return e;
    }
    FilmMeasurement general = measurement_of(run, work, m, e.result.film_area, e.result.substrate_area, contamination_nm, e.findings);
    if (sum_route) {
      const OtherLines others = other_lines(work, m);
      if (!others.missing.empty() || !(others.amount.value > 0.0)) {
        e.result.failure = !others.missing.empty() ? others.missing : "spot \"" + m.spot + "\" has no other line to compare the contamination with";
        return e;
      }
      general.factors.push_back({"sensitivity", work.response, -1.0, ContributionKind::scale});
      general.factors.push_back({"other_lines", others.amount, -1.0, ContributionKind::repeatability, true});
      general.substrate_line_length_nm = settle_common_length(general, others);
      if (route.film_length.predicted) general.correlations.push_back({kFilmLengthName, kSubstrateLengthName, kSameFormulaCorrelation});
    }
    try {
      e.result.thickness = thickness_from_factors(general);
    } catch (const DomainError&) {
      const LineArea& area = film ? *film : *substrate;
      if (bound_from_excess(route, general, area, e)) return e;
      throw;
    }
    if (film) note_detection(*film, true, e.findings);
    if (substrate) note_detection(*substrate, false, e.findings);
    add_findings(e.findings, e.result.thickness->findings);
    e.result.thickness->findings.clear();
    set_areal_densities(route, e.result);
    e.measurement = std::move(general);
  } catch (const Error& failure) {
    e.result.failure = failure.what();
  }
  return e;
}

void add_monte_carlo(const Run& run, std::size_t stream, const ThicknessRoute& route, Evaluated& e) {
  if (!e.result.thickness || !e.measurement) return;
  e.result.monte_carlo = detail::thickness_by_monte_carlo(*e.measurement, *e.result.thickness, run.uncertainty, stream);
  set_areal_densities(route, e.result);
  const MonteCarloThickness& mc = *e.result.monte_carlo;
  if (!mc.gum_agrees) {
    add_finding(e.findings, {"gum_disagrees", Severity::note,
                             "Monte Carlo and GUM intervals differ by more than the last quoted digit; the Monte Carlo one is quoted [jcgm101]"});
  }
  constexpr double kAsymmetry = 1.25;
  const double up = mc.interval_nm.high95 - e.result.thickness->value_nm;
  const double down = e.result.thickness->value_nm - mc.interval_nm.low95;
  const double asymmetry = std::max(up, down) / std::max(std::min(up, down), 1e-300);
  if (asymmetry > kAsymmetry) {
    add_finding(e.findings, {"interval_not_symmetric", Severity::note,
                             "the 95 % interval is not symmetric about the thickness; quote its two ends, not ± one number", asymmetry, kAsymmetry});
  }
  if (mc.rejected > 0) {
    add_finding(e.findings, {"draws_rejected", Severity::note, "some Monte Carlo draws have no finite thickness and were left out",
                             static_cast<double>(mc.rejected)});
  }
}

/// Part of the budget that differs between angles of one spot: what repeats, and the angle.
double angle_to_angle_sd(const Thickness& t) {
  double variance = t.budget.repeatability * t.budget.repeatability;
  for (const BudgetRow& row : t.budget.rows) {
    if (row.name == kEmissionName) variance += row.contribution * row.contribution;
  }
  return std::sqrt(variance);
}

/// χ² of the thicknesses of one spot at several angles; a film that is what the model says has one thickness.
void compare_angles(ThicknessResults& all, detail::FindingPool& pool) {
  std::map<std::tuple<std::size_t, std::size_t, std::string>, std::vector<std::size_t>> groups;
  bool several = false;
  for (std::size_t i = 0; i < all.results.size(); ++i) several = several || all.results[i].emission_deg != all.results.front().emission_deg;
  if (!several) return;
  for (std::size_t i = 0; i < all.results.size(); ++i) {
    const ThicknessResult& r = all.results[i];
    if (r.thickness) groups[{r.route, r.table, r.spot}].push_back(i);
  }
  for (const auto& [key, members] : groups) {
    if (members.size() < 2) continue;
    double weights = 0.0, mean = 0.0;
    for (const std::size_t i : members) {
      const double sd = angle_to_angle_sd(*all.results[i].thickness);
      if (!(sd > 0.0)) return;
      weights += 1.0 / (sd * sd);
      mean += all.results[i].thickness->value_nm / (sd * sd);
    }
    mean /= weights;
    double chi_square = 0.0;
    for (const std::size_t i : members) {
      const Thickness& t = *all.results[i].thickness;
      chi_square += std::pow((t.value_nm - mean) / angle_to_angle_sd(t), 2);
    }
    const double limit = boost::math::quantile(boost::math::chi_squared(static_cast<double>(members.size() - 1)), 0.95);
    if (chi_square <= limit) continue;
    const std::uint32_t finding = pool.add({"angles_disagree", Severity::warning,
                                            "the angles of one spot give different thicknesses; islands, roughness, a wrong reference ratio, a swapped "
                                            "angle convention or an angle offset would do that",
                                            chi_square, limit});
    for (const std::size_t i : members) all.results[i].findings.push_back(finding);
  }
}

/// Results far from the rest, by the modified z score of Iglewicz and Hoaglin (1993): 0.6745 |x − median|/MAD > 3.5.
std::vector<std::size_t> outliers_of(const std::vector<ThicknessResult>& results, const std::vector<std::size_t>& members) {
  constexpr std::size_t kFewest = 5;
  if (members.size() < kFewest) return {};
  const auto median = [](std::vector<double> v) {
    const auto middle = v.begin() + static_cast<std::ptrdiff_t>(v.size() / 2);
    std::nth_element(v.begin(), middle, v.end());
    if (v.size() % 2 == 1) return *middle;
    return 0.5 * (*middle + *std::max_element(v.begin(), middle));
  };
  std::vector<double> values;
  for (const std::size_t i : members) values.push_back(results[i].thickness->value_nm);
  const double centre = median(values);
  for (double& v : values) v = std::abs(v - centre);
  const double spread = median(values);
  if (!(spread > 0.0)) return {};
  std::vector<std::size_t> outliers;
  for (std::size_t k = 0; k < members.size(); ++k) {
    if (0.6745 * values[k] / spread > 3.5) outliers.push_back(members[k]);
  }
  return outliers;
}

ThicknessSummary summarise(const std::vector<ThicknessResult>& results, std::size_t route) {
  ThicknessSummary summary;
  summary.route = route;
  std::vector<std::size_t> members;
  double sum = 0.0, repeatability_squares = 0.0, scale_sum = 0.0;
  for (std::size_t i = 0; i < results.size(); ++i) {
    const ThicknessResult& r = results[i];
    if (r.route != route) continue;
    if (r.bound) ++summary.bounds;
    if (!r.thickness && !r.bound) ++summary.failed;
    if (!r.thickness) continue;
    members.push_back(i);
    sum += r.thickness->value_nm;
    repeatability_squares += r.thickness->budget.repeatability * r.thickness->budget.repeatability;
    scale_sum += r.thickness->budget.scale;
    summary.scale_stated = summary.scale_stated && r.thickness->scale_stated;
  }
  summary.count = members.size();
  if (members.empty()) return summary;
  const double n = static_cast<double>(members.size());
  summary.mean_nm = sum / n;
  // A common error moves every result the same way, so it is averaged over results but not divided by √n.
  summary.scale_nm = scale_sum / n;
  summary.repeatability_of_mean_nm = std::sqrt(repeatability_squares) / n;
  summary.outliers = outliers_of(results, members);
  if (members.size() < 2) return summary;
  double squares = 0.0;
  for (const std::size_t i : members) squares += std::pow(results[i].thickness->value_nm - summary.mean_nm, 2);
  summary.standard_deviation_nm = std::sqrt(squares / (n - 1.0));
  // What the spots really do counts more than what counting statistics promises.
  summary.repeatability_of_mean_nm = std::max(summary.repeatability_of_mean_nm, *summary.standard_deviation_nm / std::sqrt(n));
  return summary;
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
  const std::vector<Measurement> measurements = detail::collect_measurements(run);
  std::vector<RouteWork> work;
  std::optional<std::size_t> contamination;
  for (std::size_t r = 0; r < all.routes.size(); ++r) {
    work.push_back(work_of(run, all.routes[r]));
    if (all.routes[r].contamination) contamination = r;
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
        std::optional<Quantity> contamination_nm;
        for (std::size_t r = 0; r < work.size(); ++r) {
          Evaluated& e = chunk[i * work.size() + r];
          e = evaluate(run, work[r], r, m, contamination_nm);
          if (contamination == r && e.result.thickness) {
            contamination_nm = Quantity(e.result.thickness->value_nm, e.result.thickness->standard_uncertainty_nm);
          }
        }
      }
    });
    for (std::size_t i = 0; i < chunk.size(); ++i) {
      Evaluated& e = chunk[i];
      const ThicknessRoute& route = all.routes[e.result.route];
      if (draw) add_monte_carlo(run, begin * work.size() + i, route, e);
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
  compare_angles(all, pool);
  for (std::size_t r = 0; r < all.routes.size(); ++r) all.summaries.push_back(summarise(all.results, r));
  return all;
}

}  // namespace pellicle
