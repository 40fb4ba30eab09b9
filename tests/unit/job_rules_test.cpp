// What a run makes of components, correlations, kinds of uncertainty, and results seen together. Areas are invented;
// every expectation is arithmetic written here.

#include <algorithm>
#include <cmath>
#include <sstream>
#include <string>

#include "pellicle/base/error.hpp"
#include "pellicle/sample/geometry.hpp"
#include "pellicle/transport/attenuation_length.hpp"
#include "support/close_to.hpp"
#include "support/run_text.hpp"

using namespace pellicle;
using test::close_to;
using test::contribution_nm;
using test::cosine_of_deg;
using test::error_of;
using test::rel;
using test::run_from;
using test::thickness_at;
using test::thicknesses;

namespace {

constexpr double kLength = 3.0, kReference = 0.8;

/// Silica on silicon at 0 degrees, length 3 nm, reference ratio 0.8; what a case changes goes between the parts.
std::string silica(const std::string& film_line, const std::string& options = "interval = \"gum\"\n", const std::string& data = "",
                   const std::string& reference = "[[reference]]\nfilm = \"oxide\"\nsubstrate = \"metal\"\nratio = 0.8\n",
                   const std::string& substrate_line = "length_nm = { film = 3.0 }\n") {
  return "[instrument]\nsource = \"Al Ka\"\nemission_deg = 0\nemission_sd_deg = 1\n[sample]\nsubstrate = \"Si\"\n"
         "[[sample.layer]]\nname = \"film\"\nmaterial = \"SiO2\"\n"
         "[[line]]\nlabel = \"oxide\"\nlevel = \"Si 2p\"\nfrom = \"film\"\n" +
         film_line + "[[line]]\nlabel = \"metal\"\nlevel = \"Si 2p\"\nfrom = \"substrate\"\n" + substrate_line + reference +
         "[thickness]\n" + options + "[data]\nareas = \"areas.csv\"\n" + data;
}

ContributionKind kind_of(const Thickness& t, const std::string& name) {
  const auto row = std::find_if(t.budget.rows.begin(), t.budget.rows.end(), [&](const BudgetRow& r) { return r.name == name; });
  REQUIRE_MESSAGE(row != t.budget.rows.end(), name);
  return row->kind;
}

}  // namespace

TEST_SUITE("rules of a run") {

TEST_CASE("one component that is not detected leaves the line detected") {
  // It adds nothing, with the spread of nothing over its background: √(2·450) = 30 counts.
  const std::string toml = silica("components = [\"Si4+\", \"Si2+\"]\n", "interval = \"gum\"\n", "area_unit = \"counts\"\n");
  const ThicknessResults all = thicknesses(toml, "line,area,background_counts\nSi4+,20000,5000\nSi2+,nd,450\nmetal,10000,4000\n");
  CHECK(close_to(thickness_at(all, 0).value_nm, kLength * std::log1p(20000.0 / 10000.0 / kReference), rel(1e-12)));
  CHECK(close_to(all.results[0].film_area->sd(), std::sqrt(20000.0 + 2.0 * 5000.0 + 900.0), rel(1e-12)));
  // All of them not detected: the line is not.
  const ThicknessResults none = thicknesses(toml, "line,area,background_counts\nSi4+,nd,5000\nSi2+,nd,450\nmetal,10000,4000\n");
  REQUIRE(none.results[0].bound.has_value());
  CHECK(none.results[0].bound->upper);
}

TEST_CASE("inputs of different formulas are not correlated and no set of coefficients is impossible") {
  // Mg 1s leaves MgO with 184 eV, where S3 gives the length, and Si 2p with 1387 eV, where it rests on the IMFP.
  const std::string toml =
      "[instrument]\nsource = \"Al Ka\"\nemission_deg = 0\n[sample]\nsubstrate = \"Si\"\n[[sample.layer]]\nname = \"film\"\n"
      "material = \"MgO\"\n[[line]]\nlabel = \"Mg\"\nlevel = \"Mg 1s\"\nfrom = \"film\"\n[[line]]\nlabel = \"Si\"\nlevel = \"Si 2p\"\n"
      "from = \"substrate\"\n[[reference]]\nfilm = \"Mg\"\nsubstrate = \"Si\"\nratio = \"computed\"\n"
      "[thickness]\ninterval = \"monte-carlo\"\ndraws = 2000\n[data]\nareas = \"areas.csv\"\n";
  const ThicknessResults all = thicknesses(toml, "line,area,area_sd\nMg,1000,10\nSi,9000,50\n");
  CHECK(thickness_at(all, 0).value_nm > 0.0);
  REQUIRE(all.results[0].monte_carlo.has_value());
  const auto& correlations = all.routes[0].correlations;
  const auto of = [&](const std::string& a, const std::string& b) {
    for (const NamedCorrelation& c : correlations) {
      if ((c.first == a && c.second == b) || (c.first == b && c.second == a)) return c.coefficient;
    }
    return 0.0;
  };
  CHECK(of("imfp_film", "imfp_substrate") == 0.9);
  CHECK(of("imfp_film", kSubstrateLengthName) == 0.9);
  CHECK(of("imfp_substrate", kSubstrateLengthName) == 0.9);
  CHECK(of("imfp_film", kFilmLengthName) == 0.0);
  CHECK(of(kFilmLengthName, kSubstrateLengthName) == 0.0);
}

TEST_CASE("sensitivities of one line make a ratio as doubtful as a computed one") {
  const ThicknessResults all = thicknesses(silica("sensitivity = 0.8\n", "interval = \"gum\"\n", "", "", "sensitivity = 0.8\nlength_nm = { film = 3.0 }\n"),
                                           "line,area,area_sd\noxide,2000,20\nmetal,1000,10\n");
  CHECK(all.routes[0].reference_origin == "sensitivities");
  CHECK(has_finding(all.findings, "reference_computed"));
  // r/(1 + r) L times 40 %, r = 2/R₀.
  const double r = 2.0 / all.routes[0].reference_ratio->value;
  CHECK(close_to(contribution_nm(thickness_at(all, 0), "computed_reference_ratio"), 0.4 * kLength * r / (1.0 + r), rel(1e-9)));
}

TEST_CASE("what a contamination correction shares with all spots does not average") {
  const auto toml = [](const std::string& layer, const std::string& more) {
    return "[instrument]\nsource = \"Al Ka\"\nemission_deg = 0\n[sample]\nsubstrate = \"Si\"\n[[sample.layer]]\nname = \"carbon\"\nmaterial = \"hydrocarbon\"\n" +
           layer +
           "[[sample.layer]]\nname = \"film\"\nmaterial = \"hfo2\"\n"
           "[[line]]\nlabel = \"Hf\"\nlevel = \"Hf 4f\"\nfrom = \"film\"\nlength_nm = { film = 2.0, carbon = 4.0 }\n"
           "[[line]]\nlabel = \"Si\"\nlevel = \"Si 2p\"\nfrom = \"substrate\"\nlength_nm = { film = 1.0, carbon = 3.0 }\n" +
           more + "[[reference]]\nfilm = \"Hf\"\nsubstrate = \"Si\"\nratio = 4\n[thickness]\ninterval = \"gum\"\n[data]\nareas = \"areas.csv\"\n";
  };
  // k = d (1/4 − 1/3); ∂x/∂ln r = 1/(ϱ + 1/(e^x − 1)), ϱ = 2, and x = t/L_f.
  const auto slope = [](const Thickness& t) { return 2.0 / (2.0 + 1.0 / std::expm1(t.value_nm / 2.0)) * (1.0 / 3.0 - 1.0 / 4.0); };
  const ThicknessResults stated = thicknesses(toml("thickness_nm = { value = 1.0, sd = 0.5 }\n", ""), "line,area,area_sd\nHf,8000,80\nSi,1000,10\n");
  const Thickness& by_statement = thickness_at(stated, 0);
  CHECK(kind_of(by_statement, "contamination_correction") == ContributionKind::scale);
  CHECK(close_to(contribution_nm(by_statement, "contamination_correction"), 0.5 * slope(by_statement), rel(1e-9)));
  CHECK(contribution_nm(by_statement, "contamination_of_spot") == 0.0);
  // d = −L ln(1 − C/C∞): of its uncertainty the area of C 1s repeats, its reference and length are common.
  const ThicknessResults measured = thicknesses(
      toml("", "[[line]]\nlabel = \"C\"\nlevel = \"C 1s\"\nfrom = \"carbon\"\nlength_nm = { carbon = { value = 3.5, sd = 0.35 } }\n"
               "reference_area = { value = 5000, sd = 250 }\n[contamination]\nlayer = \"carbon\"\nline = \"C\"\nroute = \"reference\"\n"),
      "line,area,area_sd\nHf,8000,80\nSi,1000,10\nC,1000,30\n");
  const Thickness& by_carbon = thickness_at(measured, 1);
  CHECK(kind_of(by_carbon, "contamination_correction") == ContributionKind::scale);
  CHECK(kind_of(by_carbon, "contamination_of_spot") == ContributionKind::repeatability);
  const double per_log = 3.5 * 0.2 / 0.8, d = -3.5 * std::log(0.8);
  CHECK(close_to(contribution_nm(by_carbon, "contamination_of_spot"), 0.03 * per_log * slope(by_carbon), rel(1e-9)));
  CHECK(close_to(contribution_nm(by_carbon, "contamination_correction"), std::hypot(0.05 * per_log, 0.1 * d, 0.0) * slope(by_carbon), rel(1e-3)));
}

TEST_CASE("a film line near its reference has an interval that knows of films without end") {
  // 940 ± 20 of 1000 ± 10: r reaches 1 in about 3 of 1000 draws, Φ(−0.06/(0.94 · hypot(20/940, 10/1000))).
  const std::string toml = silica("reference_area = { value = 1000, sd = 10 }\nlength_nm = { film = 3.0 }\n", "method = \"film-line\"\ninterval = \"monte-carlo\"\n", "", "");
  const ThicknessResults all = thicknesses(toml, "line,area,area_sd\noxide,940,20\n");
  REQUIRE_MESSAGE(all.results[0].thickness.has_value(), all.results[0].failure);
  const MonteCarloThickness& mc = *all.results[0].monte_carlo;
  const double z = 0.06 / (0.94 * std::hypot(20.0 / 940.0, 10.0 / 1000.0));
  const double expected = 0.5 * std::erfc(z / std::sqrt(2.0));
  CHECK(close_to(static_cast<double>(mc.endless) / static_cast<double>(mc.draws), expected, rel(0.15)));
  CHECK(mc.rejected == 0);
  CHECK(close_to(mc.standard_uncertainty_nm, 0.25 * (mc.interval_nm.high95 - mc.interval_nm.low95), rel(1e-12)));
  CHECK(has_finding(all.findings, "draws_endless"));
  // Closer than 1.96 u there is no upper end, only a bound.
  CHECK(thicknesses(toml, "line,area,area_sd\noxide,980,20\n").results[0].bound.has_value());
}

TEST_CASE("a substrate line as strong as bare has an interval that begins at no film") {
  const std::string toml = silica("", "method = \"substrate-line\"\ninterval = \"monte-carlo\"\n", "", "",
                                  "reference_area = { value = 1000, sd = 10 }\nlength_nm = { film = 3.0 }\n");
  const ThicknessResults all = thicknesses(toml, "spot,line,area,area_sd\nbare,metal,1000,10\nx,metal,400,10\n");
  REQUIRE(all.results.size() == 2);
  REQUIRE(all.results[0].monte_carlo.has_value());
  CHECK(all.results[0].monte_carlo->interval_nm.low95 == 0.0);
  // Half of the draws are cut to zero; 97.5 % of −L ln(I/I∞) lie below 1.96 √2 · 1 % of L.
  CHECK(close_to(all.results[0].monte_carlo->interval_nm.high95, 1.96 * std::sqrt(2.0) * 0.01 * kLength, rel(0.02)));
  CHECK(close_to(thickness_at(all, 1).value_nm, -kLength * std::log(0.4), rel(1e-12)));
  CHECK(all.results[1].monte_carlo.has_value());
}

TEST_CASE("an areal density carries the density as far as the length does not take it back") {
  const auto relative = [](const Quantity& q) { return q.sd() / q.value; };
  // A given length knows nothing of the density: 10 % of it add to those of the thickness.
  const ThicknessResults given = thicknesses(silica("", "interval = \"gum\"\n", "", "[[reference]]\nfilm = \"oxide\"\nsubstrate = \"metal\"\nratio = 0.8\n",
                                                    "length_nm = { film = { value = 3.0, sd = 0.03 } }\n"),
                                             "line,area,area_sd\noxide,2000,20\nmetal,1000,10\n");
  const Thickness& t = thickness_at(given, 0);
  CHECK(close_to(given.results[0].areal_density_ug_cm2->value, 0.1 * 2.20 * t.value_nm, rel(1e-12)));
  CHECK(close_to(relative(*given.results[0].areal_density_ug_cm2), std::hypot(t.standard_uncertainty_nm / t.value_nm, 0.10), rel(1e-9)));
  // A predicted one falls as the density rises: the exponent between two densities, made here.
  const ThicknessResults predicted = thicknesses(silica("", "interval = \"gum\"\n", "", "[[reference]]\nfilm = \"oxide\"\nsubstrate = \"metal\"\nratio = 0.8\n", ""),
                                                 "line,area,area_sd\noxide,2000,20\nmetal,1000,10\n");
  const double energy = kinetic_energy_ev(core_level("Si 2p"), photon_source("Al Ka"));
  const auto length = [&](double density) { return *predict_attenuation_length(make_material("SiO2", density, catalogue_material("SiO2").band_gap_ev), energy, AttenuationModel::seah_gilmore).value_nm; };
  const double exponent = std::log(length(2.244) / length(2.156)) / std::log(2.244 / 2.156);
  CHECK(exponent < -0.1);
  const Thickness& p = thickness_at(predicted, 0);
  CHECK(close_to(relative(*predicted.results[0].areal_density_ug_cm2), std::hypot(p.standard_uncertainty_nm / p.value_nm, 0.10 * (1.0 + exponent)), rel(2e-3)));
  CHECK(relative(*predicted.results[0].areal_density_ug_cm2) < std::hypot(p.standard_uncertainty_nm / p.value_nm, 0.10));
}

TEST_CASE("a tilt turns the emission angle as the geometry says") {
  Geometry g;
  g.tilt_direction = TiltDirection::toward_source;
  g.emission_at_zero_tilt_deg = 10.0;
  CHECK(emission_deg_of_tilt(g, 25.0) == 35.0);
  CHECK(emission_deg_of_tilt(g, -25.0) == 15.0);
  g.signal_area = SignalArea::x_ray_spot;
  CHECK(error_of<InputError>([&] { (void)emission_deg_of_tilt(g, -25.0); }).where() == "tilt_deg");
  // Across: the normal leaves the plane, cosθ = cos 10 cos 25.
  g.tilt_direction = TiltDirection::across;
  CHECK(close_to(std::cos(emission_deg_of_tilt(g, 25.0) * std::acos(-1.0) / 180.0), cosine_of_deg(10.0) * cosine_of_deg(25.0), rel(1e-14)));
  CHECK(emission_deg_of_tilt(g, -25.0) == emission_deg_of_tilt(g, 25.0));
}

TEST_CASE("the angles of a spot are averaged before the spots are") {
  // Two spots at two angles each, of 1 and 3 nm by the first angle, 2 and 4 nm by the second.
  std::ostringstream areas;
  areas.precision(17);
  areas << "spot,emission_deg,line,area,area_sd\n";
  const auto add = [&](const char* spot, double emission, double t) {
    areas << spot << ',' << emission << ",oxide," << 800.0 * std::expm1(t / (kLength * cosine_of_deg(emission))) << ",8\n"
          << spot << ',' << emission << ",metal,1000,10\n";
  };
  add("a", 0.0, 1.0);
  add("a", 60.0, 2.0);
  add("b", 0.0, 3.0);
  add("b", 60.0, 4.0);
  const ThicknessResults all = thicknesses(silica(""), areas.str());
  const ThicknessSummary& s = all.summaries[0];
  CHECK(s.count == 2);
  CHECK(s.thicknesses == 4);
  CHECK(close_to(s.mean_nm, 2.5, rel(1e-12)));
  CHECK(close_to(*s.standard_deviation_nm, std::sqrt(2.0), rel(1e-12)));
  CHECK(close_to(s.repeatability_of_mean_nm, 1.0, rel(1e-12)));
  CHECK(has_finding(all.findings, "angles_disagree"));
  CHECK(has_finding(all.findings, "spots_differ"));
}

TEST_CASE("an outlier is far from the rest and beyond its own repeatability") {
  const auto run = [&](const std::vector<double>& thickness_nm, double relative_sd) {
    std::ostringstream areas;
    areas.precision(17);
    areas << "spot,line,area,area_sd\n";
    for (std::size_t i = 0; i < thickness_nm.size(); ++i) {
      const double film = 800.0 * std::expm1(thickness_nm[i] / kLength);
      areas << i << ",oxide," << film << ',' << relative_sd * film << '\n' << i << ",metal,1000," << relative_sd * 1000.0 << '\n';
    }
    return thicknesses(silica(""), areas.str());
  };
  const std::vector<double> spots = {3.00, 3.01, 2.99, 3.00, 3.02, 2.98, 3.01, 3.30};
  const ThicknessResults sharp = run(spots, 0.002);
  CHECK(sharp.summaries[0].outliers == std::vector<std::size_t>{7});
  CHECK(has_finding(sharp.findings, "spots_differ"));
  // With areas good to 10 % a spot of 3.30 nm is no surprise.
  const ThicknessResults dull = run(spots, 0.10);
  CHECK(dull.summaries[0].outliers.empty());
  CHECK_FALSE(has_finding(dull.findings, "spots_differ"));
  // Too few to tell.
  CHECK(run({3.00, 3.01, 3.00, 3.01, 3.30}, 0.002).summaries[0].outliers.empty());
}

}  // TEST_SUITE("rules of a run")
