#include "job/contamination.hpp"

#include <cmath>
#include <set>

#include "job/length_choice.hpp"
#include "job/reference.hpp"
#include "pellicle/base/constants.hpp"
#include "pellicle/base/error.hpp"

namespace pellicle::detail {
namespace {

/// Relative standard uncertainty of the ratio of two IMFPs of one formula, 10 % each.
const double kImfpRatioRelativeSd = 0.10 * std::sqrt(2.0 * (1.0 - kSameFormulaCorrelation));

/// Sum of the other lines over their sensitivities.
struct OtherLines {
  double amount = 0.0;
  double area_variance = 0.0;
  double sensitivity_variance = 0.0;
  std::vector<std::pair<double, double>> amount_and_length;
};

OtherLines other_lines(const Run& run, const ThicknessRoute& route, const std::vector<double>& lengths, const Measurement& m, Findings& findings) {
  OtherLines sum;
  for (std::size_t l = 0; l < run.lines.size(); ++l) {
    if (!(lengths[l] > 0.0) || l == *route.film_line || !m.lines[l]) continue;
    const Quantity s = run.lines[l].sensitivity ? with_assumed_sensitivity(*run.lines[l].sensitivity, findings) : Quantity(1.0, 0.0);
    const double amount = m.lines[l]->value / s.value;
    sum.amount += amount;
    sum.area_variance += std::pow(m.lines[l]->sd / s.value, 2);
    sum.sensitivity_variance += std::pow(amount * s.sd() / s.value, 2);
    sum.amount_and_length.emplace_back(amount, lengths[l]);
  }
  return sum;
}

/// The length L for which exp(d/(L c)) equals the amount-weighted mean of exp(d/(Lᵢ c)).
double common_length(const OtherLines& others, double reduced_depth) {
  double sum = 0.0, reciprocal = 0.0;
  for (const auto& [amount, length] : others.amount_and_length) {
    sum += amount * std::exp(reduced_depth / length);
    reciprocal += amount / length;
  }
  if (!(reduced_depth > 0.0)) return others.amount / reciprocal;
  return reduced_depth / std::log(sum / others.amount);
}

/// The length depends on the thickness it gives; a few passes settle both.
void settle_common_length(FilmMeasurement& m, const OtherLines& others) {
  Quantity length(common_length(others, 0.0));
  const double relative = m.film_line_length_nm.sd() / m.film_line_length_nm.value;
  const double cosine = std::cos(m.emission_deg.value * kRadianPerDegree);
  constexpr int kMostPasses = 50;
  for (int pass = 0; pass < kMostPasses; ++pass) {
    m.substrate_line_length_nm = Quantity(length.value, relative * length.value);
    const double next = common_length(others, thickness_from_factors(m).value_nm / cosine);
    const bool settled = std::abs(next / length.value - 1.0) < 1e-14;
    length.value = next;
    if (settled) break;
  }
  m.substrate_line_length_nm = Quantity(length.value, relative * length.value);
}

}  // namespace

Quantity contamination_reference(const Run& run, const Line& carbon, std::vector<std::string>& applied) {
  if (run.sensitivity_kind == SensitivityKind::elemental) {
    throw InputError(run.place, "the contamination route sensitivities does not take elemental sensitivities", "give atomic or average-matrix ones");
  }
  const bool holds_escape_depth = run.sensitivity_kind == SensitivityKind::average_matrix || run.sensitivity_includes_escape_depth;
  const auto signal = [&](const Material& material, const std::string& symbol, double energy_ev) {
    const double depth = *signal_imfp(material, energy_ev).value_nm * (holds_escape_depth ? average_escape_depth_weight(energy_ev) : 1.0);
    return atom_density_per_nm3(material, symbol) * depth;
  };
  const std::string below = run.sample.layers.size() > 1 ? run.sample.layers[1].name : std::string(kSubstrate);
  const Material& solid = run.sample.material(below);
  std::set<std::string> elements;
  double sum = 0.0;
  for (const Line& line : run.lines) {
    if (!line.sensitivity && run.area_unit != AreaUnit::atomic_percent) {
      throw InputError(run.place, "line \"" + line.label + "\" states no sensitivity, which the contamination route needs for every line");
    }
    if (line.from == carbon.from || !line.level) continue;
    const std::string& symbol = line.level->element->symbol;
    if (elements.insert(symbol).second) sum += signal(solid, symbol, line.kinetic_energy_ev);
  }
  if (!(sum > 0.0)) {
    throw InputError(run.place, "no other line shows an element of " + solid.id + ", the solid just below the contamination",
                     "declare the lines of that solid, or choose another contamination route");
  }
  const double ratio = signal(run.sample.material(carbon.from), carbon.level->element->symbol, carbon.kinetic_energy_ev) / sum;
  applied = {"atom densities", holds_escape_depth ? "IMFP over that of an average matrix (∝ E^0.75)" : "IMFP (Q = 1)"};
  const double density = assumed_value("film_density_relative_sd");
  const double density_below = assumed_value(below == kSubstrate ? "bulk_density_relative_sd" : "film_density_relative_sd");
  return {ratio, ratio * std::hypot(density, density_below, kImfpRatioRelativeSd)};
}

std::vector<double> lengths_in_contamination(const Run& run, const ThicknessRoute& route) {
  std::vector<double> lengths;
  for (const Line& line : run.lines) {
    const bool own = line.from == route.layer;
    lengths.push_back(own ? 0.0 : choose_length(run, line, route.layer, line.kinetic_energy_ev).length_nm.value);
  }
  return lengths;
}

std::string add_other_lines(const Run& run, const ThicknessRoute& route, const std::vector<double>& lengths, const Measurement& m,
                            FilmMeasurement& measurement, Findings& findings) {
  const OtherLines others = other_lines(run, route, lengths, m, findings);
  if (!(others.amount > 0.0)) return "spot \"" + m.spot + "\" has no other line to compare the contamination with";
  if (const auto& s = run.lines[*route.film_line].sensitivity) {
    measurement.factors.push_back({"sensitivity", with_assumed_sensitivity(*s, findings), -1.0, ContributionKind::scale});
    measurement.factors.push_back({"other_sensitivities", Quantity(1.0, std::sqrt(others.sensitivity_variance) / others.amount), 1.0, ContributionKind::scale});
  }
  measurement.factors.push_back({"other_lines", Quantity(others.amount, std::sqrt(others.area_variance)), -1.0, ContributionKind::repeatability, true});
  settle_common_length(measurement, others);
  measurement.correlations.push_back({kFilmLengthName, kSubstrateLengthName, kSameFormulaCorrelation});
  return {};
}

}  // namespace pellicle::detail
