#include "job/contamination.hpp"

#include <cmath>
#include <set>

#include "job/length_choice.hpp"
#include "job/reference.hpp"
#include "pellicle/base/constants.hpp"
#include "pellicle/base/error.hpp"

namespace pellicle::detail {
namespace {

/// Sum of the lines from below, each over its response: atoms per volume, attenuated.
struct AtomsBelow {
  double amount = 0.0;
  double area_variance = 0.0;
  double response_variance = 0.0;
  std::vector<std::pair<double, double>> amount_and_length;
};

/// The length L for which exp(d/(L c)) equals the amount-weighted mean of exp(d/(Lᵢ c)).
double common_length(const AtomsBelow& atoms, double reduced_depth) {
  double sum = 0.0, reciprocal = 0.0;
  for (const auto& [amount, length] : atoms.amount_and_length) {
    sum += amount * std::exp(reduced_depth / length);
    reciprocal += amount / length;
  }
  if (!(reduced_depth > 0.0)) return atoms.amount / reciprocal;
  return reduced_depth / std::log(sum / atoms.amount);
}

/// The length depends on the thickness it gives; a few passes settle both.
void settle_common_length(FilmMeasurement& m, const AtomsBelow& atoms) {
  Quantity length(common_length(atoms, 0.0));
  const double relative = m.film_line_length_nm.sd() / m.film_line_length_nm.value;
  const double cosine = std::cos(m.emission_deg.value * kRadianPerDegree);
  constexpr int kMostPasses = 50;
  for (int pass = 0; pass < kMostPasses; ++pass) {
    m.substrate_line_length_nm = Quantity(length.value, relative * length.value);
    const double next = common_length(atoms, thickness_from_factors(m).value_nm / cosine);
    const bool settled = std::abs(next / length.value - 1.0) < 1e-14;
    length.value = next;
    if (settled) break;
  }
  m.substrate_line_length_nm = Quantity(length.value, relative * length.value);
}

}  // namespace

void add_carbon_reference(const Run& run, const Line& carbon, ThicknessRoute& route) {
  if (run.sensitivity_kind == SensitivityKind::elemental && run.area_unit != AreaUnit::atomic_percent) {
    throw InputError(run.place, "the contamination route sensitivities does not take elemental sensitivities", "give atomic or average-matrix ones");
  }
  for (const Line& line : run.lines) {
    if (line.sensitivity || run.area_unit == AreaUnit::atomic_percent) continue;
    throw InputError(run.place, "line \"" + line.label + "\" states no sensitivity, which the contamination route needs for every line");
  }
  const std::string below = run.sample.layers.size() > 1 ? run.sample.layers[1].name : std::string(kSubstrate);
  const Material& solid = run.sample.material(below);
  // An element counts where a line shows it, above and below the bar of the ratio.
  std::set<std::string> shown;
  for (const Line& line : run.lines) {
    if (line.from != carbon.from && line.level) shown.insert(line.level->element->symbol);
  }
  double atoms_below = 0.0;
  for (const std::string& symbol : shown) atoms_below += atom_density_per_nm3(solid, symbol);
  if (!(atoms_below > 0.0)) {
    throw InputError(run.place, "no line shows an element of " + solid.id + ", the solid just below the contamination",
                     "declare its lines, or choose another contamination route");
  }
  const double ratio = atom_density_per_nm3(run.sample.material(carbon.from), "C") / atoms_below;
  const double density = assumed_value("film_density_relative_sd");
  const double density_below = assumed_value(below == kSubstrate ? "bulk_density_relative_sd" : "film_density_relative_sd");
  route.reference_ratio = Quantity(ratio, ratio * std::hypot(density, density_below, kImfpRatioRelativeSd));
  (void)response_per_atom(run, carbon, route.reference_applied, route.findings);
  route.reference_origin = "sensitivities";
  route.factors.push_back({"reference_ratio", *route.reference_ratio, -1.0, ContributionKind::scale});
}

CarbonBalance carbon_balance(const Run& run, const ThicknessRoute& route) {
  CarbonBalance balance;
  std::vector<std::string> applied;
  Findings noted_by_the_route;
  std::set<std::pair<std::string, std::string>> counted;
  for (std::size_t l = 0; l < run.lines.size(); ++l) {
    const Line& line = run.lines[l];
    if (l == *route.film_line) {
      balance.response = response_per_atom(run, line, applied, noted_by_the_route);
    } else if (line.from != route.layer && line.level && counted.emplace(line.level->element->symbol, line.from).second) {
      // A second level of an element in the same layer shows the same atoms once more.
      balance.below.push_back({l, response_per_atom(run, line, applied, noted_by_the_route),
                               choose_length(run, line, route.layer, line.kinetic_energy_ev).length_nm.value});
    }
  }
  return balance;
}

std::string add_lines_below(const ThicknessRoute& route, const CarbonBalance& balance, const Measurement& m, FilmMeasurement& measurement) {
  AtomsBelow atoms;
  for (const LineBelow& below : balance.below) {
    if (!m.lines[below.line]) return m.missing[below.line];
    const double amount = m.lines[below.line]->value / below.response.value;
    atoms.amount += amount;
    atoms.area_variance += std::pow(m.lines[below.line]->sd / below.response.value, 2);
    atoms.response_variance += std::pow(amount * below.response.sd() / below.response.value, 2);
    atoms.amount_and_length.emplace_back(amount, below.length_nm);
  }
  if (!(atoms.amount > 0.0)) return "spot \"" + m.spot + "\" has no line from below to compare the contamination with";
  measurement.factors.push_back({"sensitivity", balance.response, -1.0, ContributionKind::scale});
  measurement.factors.push_back({"other_lines", Quantity(atoms.amount, std::sqrt(atoms.area_variance)), -1.0, ContributionKind::repeatability, true});
  measurement.factors.push_back({"other_sensitivities", Quantity(1.0, std::sqrt(atoms.response_variance) / atoms.amount), 1.0, ContributionKind::scale});
  settle_common_length(measurement, atoms);
  if (!route.film_length.formula.empty()) measurement.correlations.push_back({kFilmLengthName, kSubstrateLengthName, kSameFormulaCorrelation});
  return {};
}

}  // namespace pellicle::detail
