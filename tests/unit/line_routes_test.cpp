// Thickness from one line, of contamination, through a cone, and bounds of what is not seen: from the text of a run file
// to the result. Areas are made from a known film by arithmetic written here; all of them are invented.

#include <algorithm>
#include <array>
#include <cmath>
#include <random>
#include <sstream>
#include <string>
#include <vector>

#include "pellicle/base/error.hpp"
#include "pellicle/lines/photoionisation.hpp"
#include "pellicle/transport/imfp.hpp"
#include "support/close_to.hpp"
#include "support/run_text.hpp"

using namespace pellicle;
using test::close_to;
using test::contains;
using test::contribution_nm;
using test::cosine_of_deg;
using test::error_of;
using test::only_thickness_nm;
using test::rel;
using test::thickness_at;
using test::thicknesses;

namespace {

constexpr double kRounding = 1e-12;

std::string number(double value) {
  std::ostringstream text;
  text.precision(17);
  text << value;
  return text.str();
}

/// Length in a hydrocarbon layer [nm] by the organic power law [seah2011], recalled.
double organic(double energy_ev) { return 0.00837 * std::pow(energy_ev, 0.842); }

double energy_of(const char* level) { return kinetic_energy_ev(core_level(level), photon_source("Al Ka")); }
double imfp(const char* material, double energy_ev) {
  return *predict_imfp(catalogue_material(material), energy_ev, ImfpModel::tpp2m).value_nm;
}
/// 1 + (β/2)(3/2 sin²γ − 1) [reilman1976].
double angular_weight(const char* level, double source_analyser_deg) {
  const double sine = test::sine_of_deg(source_analyser_deg);
  return 1.0 + 0.5 * *asymmetry_parameter(core_level(level), photon_source("Al Ka")).value * (1.5 * sine * sine - 1.0);
}

double atoms(const char* material, const char* element) {
  return atom_density_per_nm3(catalogue_material(material), element);
}

/// A film of silica, or hafnia, on silicon; contamination above it where `contaminated`.
struct Text {
  std::string top, instrument = "emission_deg = 45\n", contaminant, lines, rest, options, data;
  std::string film = "SiO2", emission_sd = "1.0";

  [[nodiscard]] std::string toml() const {
    std::string text = top + "\n[instrument]\nsource = \"Al Ka\"\nemission_sd_deg = " + emission_sd + "\n" + instrument +
                       "\n[sample]\nsubstrate = \"Si\"\n";
    if (!contaminant.empty()) text += "[[sample.layer]]\nname = \"carbon\"\nmaterial = \"hydrocarbon\"\n" + contaminant + "\n";
    if (!film.empty()) text += "[[sample.layer]]\nname = \"film\"\nmaterial = \"" + film + "\"\n";
    return text + lines + rest + "\n[thickness]\ninterval = \"gum\"\n" + options + "\n[data]\nareas = \"areas.csv\"\n" + data;
  }
};

std::string line(const std::string& label, const std::string& level, const std::string& from, const std::string& more) {
  return "[[line]]\nlabel = \"" + label + "\"\nlevel = \"" + level + "\"\nfrom = \"" + from + "\"\n" + more + "\n";
}

using Areas = std::vector<std::pair<std::string, double>>;

std::string table(const Areas& areas) {
  std::string text = "line,area,area_sd\n";
  for (const auto& [label, area] : areas) text += label + "," + number(area) + "," + number(0.01 * area) + "\n";
  return text;
}

/// Mean of a signal over a cone of directions, by the midpoint rule in polar angle and azimuth; each direction weighted
/// by its solid angle and the cosine of its emission.
template <typename Signal>
double over_cone(double emission_deg, double half_angle_deg, Signal&& signal) {
  constexpr int kSteps = 400;
  const double axis = emission_deg * std::numbers::pi / 180.0, edge = half_angle_deg * std::numbers::pi / 180.0;
  double sum = 0.0, weights = 0.0;
  for (int i = 0; i < kSteps; ++i) {
    const double polar = edge * (i + 0.5) / kSteps;
    for (int j = 0; j < kSteps; ++j) {
      const double azimuth = std::numbers::pi * (j + 0.5) / kSteps;
      const double c = std::cos(axis) * std::cos(polar) + std::sin(axis) * std::sin(polar) * std::cos(azimuth);
      if (c <= 0.0) continue;
      sum += std::sin(polar) * c * signal(c);
      weights += std::sin(polar) * c;
    }
  }
  return sum / weights;
}

/// The value that the truth exceeds with this probability, for a normal likelihood cut off at zero: Simpson's rule over
/// the density and bisection.
double exceeded_of_truncated_normal(double mean, double sd, double probability) {
  const auto area_between = [&](double low, double high) {
    constexpr int kSteps = 4000;
    const double h = (high - low) / kSteps;
    double sum = 0.0;
    for (int i = 0; i <= kSteps; ++i) {
      const double z = (low + i * h - mean) / sd;
      sum += (i == 0 || i == kSteps ? 1.0 : i % 2 == 1 ? 4.0 : 2.0) * std::exp(-0.5 * z * z);
    }
    return sum * h / 3.0;
  };
  const double top = std::max(mean, 0.0) + 12.0 * sd, all = area_between(0.0, top);
  double low = 0.0, high = top;
  for (int i = 0; i < 60; ++i) {
    const double middle = 0.5 * (low + high);
    (area_between(middle, top) > probability * all ? low : high) = middle;
  }
  return 0.5 * (low + high);
}

}  // namespace

TEST_SUITE("routes of one line") {

TEST_CASE("the line of the substrate alone or of the film alone gives the thickness") {
  // t = −L cosθ ln(I_s/I_s∞) = −L cosθ ln(1 − I_f/I_f∞): 0.761523803 nm for L = 2.5 nm, 45 degrees, 65 % or 35 %.
  const double expected = -2.5 * cosine_of_deg(45.0) * std::log(0.65);
  CHECK(close_to(expected, 0.761523803, test::abs(5e-10)));
  Text text;
  text.lines = line("metal", "Si 2p", "substrate", "reference_area = { value = 1000, sd = 20 }\nlength_nm = { film = { value = 2.5, sd = 0.2 } }");
  text.options = "method = \"substrate-line\"\n";
  const ThicknessResults below = thicknesses(text.toml(), table({{"metal", 650.0}}));
  CHECK(close_to(only_thickness_nm(below), expected, rel(kRounding)));
  // ∂t/∂ln I = L cosθ: 1 % of the area, 2 % of the reference.
  CHECK(close_to(contribution_nm(thickness_at(below, 0), "substrate_area"), 0.01 * 2.5 * cosine_of_deg(45.0), rel(1e-9)));
  CHECK(close_to(contribution_nm(thickness_at(below, 0), "reference_area"), 0.02 * 2.5 * cosine_of_deg(45.0), rel(1e-9)));
  text.lines = line("oxide", "Si 2p", "film", "reference_area = { value = 1000, sd = 20 }\nlength_nm = { film = { value = 2.5, sd = 0.2 } }");
  text.options = "method = \"film-line\"\n";
  const ThicknessResults above = thicknesses(text.toml(), table({{"oxide", 350.0}}));
  CHECK(close_to(only_thickness_nm(above), expected, rel(kRounding)));
  CHECK(close_to(contribution_nm(thickness_at(above, 0), "film_area"), 0.01 * 2.5 * cosine_of_deg(45.0) * 0.35 / 0.65, rel(1e-9)));
  CHECK(has_finding(above.findings, "absolute_area"));
  // Several lines of the substrate: one route each, the film's length of each.
  text.lines = line("2p", "Si 2p", "substrate", "reference_area = 1000\nlength_nm = { film = 2.5 }") +
               line("2s", "Si 2s", "substrate", "reference_area = 2000\nlength_nm = { film = 2.0 }");
  text.options = "method = \"substrate-line\"\n";
  const ThicknessResults two = thicknesses(text.toml(), table({{"2p", 650.0}, {"2s", 1300.0}}));
  REQUIRE(two.results.size() == 2);
  CHECK(close_to(thickness_at(two, 0).value_nm, expected, rel(kRounding)));
  CHECK(close_to(thickness_at(two, 1).value_nm, 0.8 * expected, rel(kRounding)));
}

TEST_CASE("a layer of known thickness above is taken out of a single line") {
  // Each line loses exp(−d/(L cosθ)) in it. d = 0.9 nm, L = 3.6 nm there; below as above.
  const double loss = std::exp(-0.9 / (3.6 * cosine_of_deg(45.0)));
  const double expected = -2.5 * cosine_of_deg(45.0) * std::log(0.65);
  Text text;
  text.contaminant = "thickness_nm = { value = 0.9, sd = 0.1 }";
  text.lines = line("metal", "Si 2p", "substrate", "reference_area = 1000\nlength_nm = { film = 2.5, carbon = 3.6 }");
  text.options = "method = \"substrate-line\"\n";
  const ThicknessResults below = thicknesses(text.toml(), table({{"metal", 650.0 * loss}}));
  CHECK(close_to(only_thickness_nm(below), expected, rel(kRounding)));
  // ∂t/∂d = −L_film/L_carbon.
  CHECK(close_to(contribution_nm(thickness_at(below, 0), "contamination_correction"), 0.1 * 2.5 / 3.6, rel(1e-9)));
  // t = −L cosθ ln(I/I∞) − d L/L_carbon: only the first part goes with the angle, by tanθ of itself.
  const double degree = std::numbers::pi / 180.0;
  CHECK(close_to(contribution_nm(thickness_at(below, 0), "emission_deg"), (expected + 0.9 * 2.5 / 3.6) * degree, rel(1e-9)));
  // So do draws: with the angle alone uncertain, their spread is that.
  text.options += "interval = \"monte-carlo\"\ndraws = 200000\n";
  text.contaminant = "thickness_nm = { value = 0.9, sd = 0 }";
  text.lines = line("metal", "Si 2p", "substrate", "reference_area = { value = 1000, sd = 0 }\nlength_nm = { film = { value = 2.5, sd = 0 }, carbon = { value = 3.6, sd = 0 } }");
  std::string toml = text.toml();
  toml.erase(toml.find("interval = \"gum\"\n"), 17);
  const ThicknessResults drawn = thicknesses(toml, "line,area,area_sd\nmetal," + number(650.0 * loss) + ",1e-6\n");
  REQUIRE_MESSAGE(drawn.results[0].monte_carlo.has_value(), drawn.results[0].failure);
  CHECK(close_to(drawn.results[0].monte_carlo->standard_uncertainty_nm, (expected + 0.9 * 2.5 / 3.6) * degree, rel(0.02)));
  text.contaminant = "thickness_nm = { value = 0.9, sd = 0.1 }";
  text.lines = line("oxide", "Si 2p", "film", "reference_area = 1000\nlength_nm = { film = 2.5, carbon = 3.6 }");
  text.options = "method = \"film-line\"\n";
  CHECK(close_to(only_thickness_nm(thicknesses(text.toml(), table({{"oxide", 350.0 * loss}}))), expected, rel(kRounding)));
  // Not known: not corrected, and said.
  text.contaminant = "\n";
  const ThicknessResults bare = thicknesses(text.toml(), table({{"oxide", 350.0}}));
  CHECK(close_to(only_thickness_nm(bare), expected, rel(kRounding)));
  CHECK(has_finding(bare.findings, "contamination_uncorrected"));
}

TEST_CASE("a small X-ray spot makes a single area depend on the tilt it was measured at") {
  // Rate of a thick solid ∝ cosθ/cos(ψ − θ) when the sample turns toward the source; ψ = 54.7, measured at 45 degrees.
  const auto rate = [](double emission) { return cosine_of_deg(emission) / cosine_of_deg(54.7 - emission); };
  const double expected = -2.5 * cosine_of_deg(45.0) * std::log(0.65);
  Text text;
  text.instrument += "source_analyser_angle_deg = 54.7\ntilt_direction = \"toward-source\"\nsignal_area = \"x-ray-spot\"\n";
  text.options = "method = \"substrate-line\"\n";
  text.lines = line("metal", "Si 2p", "substrate", "reference_area = { value = 1000, emission_deg = 10 }\nlength_nm = { film = 2.5 }");
  CHECK(close_to(only_thickness_nm(thicknesses(text.toml(), table({{"metal", 650.0 * rate(45.0) / rate(10.0)}}))), expected, rel(kRounding)));
  // A reference without an angle of its own was measured at that of the areas, so that nothing is left to carry over.
  text.lines = line("metal", "Si 2p", "substrate", "reference_area = 1000\nlength_nm = { film = 2.5 }");
  CHECK(close_to(only_thickness_nm(thicknesses(text.toml(), table({{"metal", 650.0}}))), expected, rel(kRounding)));
}

}  // TEST_SUITE("routes of one line")

TEST_SUITE("contamination") {

TEST_CASE("carbon against its reference area is a film line of its own") {
  // d = −L cosθ ln(1 − I/I∞), L of C 1s in the layer.
  Text text;
  text.contaminant = "\n";
  text.lines = line("C", "C 1s", "carbon", "reference_area = { value = 5000, sd = 100 }\nlength_nm = { carbon = 3.3 }") +
               line("metal", "Si 2p", "substrate", "length_nm = { film = 2.5 }") + line("oxide", "Si 2p", "film", "");
  text.rest = "[[reference]]\nfilm = \"oxide\"\nsubstrate = \"metal\"\nratio = 0.8\n[contamination]\nlayer = \"carbon\"\nline = \"C\"\nroute = \"reference\"\n";
  const ThicknessResults all = thicknesses(text.toml(), table({{"C", 1000.0}, {"oxide", 800.0}, {"metal", 1000.0}}));
  REQUIRE(all.results.size() == 2);
  CHECK(all.routes[0].layer == "carbon");
  CHECK(close_to(thickness_at(all, 0).value_nm, -3.3 * cosine_of_deg(45.0) * std::log(0.8), rel(kRounding)));
  // Lines of one energy lose the same: the film is as without contamination, to the bit of its budget.
  CHECK(close_to(thickness_at(all, 1).value_nm, 2.5 * cosine_of_deg(45.0) * std::log(2.0), rel(kRounding)));
  CHECK(contribution_nm(thickness_at(all, 1), "contamination_correction") == -1.0);
}

TEST_CASE("carbon in atomic per cent has the thickness of the recalled formula") {
  // d = −L cosθ ln(1 − x) [smith2005], L = 3.281 nm at 1202 eV [seah2011], both recalled: 20, 30 and 50 % at normal
  // emission make 0.7321, 1.1702 and 2.2742 nm; √½ of that at 45 degrees.
  struct Row {
    double percent, thickness_nm;
  };
  Text text;
  text.film.clear();
  text.contaminant = "\n";
  text.lines = line("C", "C 1s", "carbon", "length_nm = { carbon = 3.281 }") + line("Si", "Si 2p", "substrate", "reference_area = 100");
  text.rest = "[contamination]\nlayer = \"carbon\"\nline = \"C\"\nroute = \"atomic-percent\"\n";
  text.data = "area_unit = \"atomic-percent\"\n";
  // The substrate's line against its reference asks for the same layer; only the first result is looked at here.
  text.options = "method = \"substrate-line\"\n";
  for (const Row& row : {Row{20.0, 0.7321}, Row{30.0, 1.1702}, Row{50.0, 2.2742}}) {
    for (const double emission : {0.0, 45.0}) {
      text.instrument = "emission_deg = " + number(emission) + "\n";
      const ThicknessResults all = thicknesses(text.toml(), table({{"C", row.percent}, {"Si", 100.0 - row.percent}}));
      CHECK(close_to(thickness_at(all, 0).value_nm, row.thickness_nm * cosine_of_deg(emission), test::abs(6e-5)));
    }
  }
  // The length by default is that of the organic power law at the energy of C 1s.
  text.lines = line("C", "C 1s", "carbon", "") + line("Si", "Si 2p", "substrate", "reference_area = 100");
  const ThicknessResults all = thicknesses(text.toml(), table({{"C", 30.0}, {"Si", 70.0}}));
  CHECK(close_to(thickness_at(all, 0).value_nm, -organic(energy_of("C 1s")) * cosine_of_deg(45.0) * std::log(0.7), rel(kRounding)));
  text.data = "area_unit = \"arbitrary\"\n";
  CHECK(contains(error_of<InputError>([&] { (void)thicknesses(text.toml(), table({{"C", 30.0}, {"Si", 70.0}})); }).fact(), "atomic-percent"));
}

TEST_CASE("carbon against all other lines is found from areas of every kind of sensitivity") {
  // Areas of 0.8 nm of hydrocarbon on silica so thick that no silicon shines through, 30 degrees:
  //   C 1s:       K_C N_C λ_C(carbon) [1 − exp(−d/(L_C cosθ))]
  //   Si 2p, O 1s: K N λ(silica at its energy) exp(−d/(L cosθ)),  L at its own energy
  // K = S T W for per-atom factors; average-matrix ones have E^0.75 of the matrix below. Pure-element factors would need
  // solid oxygen.
  const double d = 0.8, c = cosine_of_deg(30.0);
  struct Emitter {
    const char *label, *level, *from, *material, *element;
    double sensitivity, transmission;
  };
  const std::array<Emitter, 3> emitters = {Emitter{"C", "C 1s", "carbon", "hydrocarbon", "C", 0.31, 1.0},
                                           Emitter{"O", "O 1s", "film", "SiO2", "O", 0.71, 0.8},
                                           Emitter{"Si", "Si 2p", "film", "SiO2", "Si", 0.34, 1.15}};
  for (const std::string kind : {"atomic", "average-matrix"}) {
    for (const bool raw : {false, true}) {
      for (const bool holds_transmission : {false, true}) {
        for (const bool holds_depth : {false, true}) {
          if ((holds_transmission && !raw) || (holds_depth && kind != "atomic")) continue;
          Text text;
          text.instrument = "emission_deg = 30\nsource_analyser_angle_deg = 90\n";
          text.top = "sensitivity_kind = \"" + kind + "\"\nsensitivity_includes = [" + (holds_transmission ? "\"transmission\"" : "") +
                     (holds_transmission && holds_depth ? "," : "") + (holds_depth ? "\"escape-depth\"" : "") + "]\n";
          text.contaminant = "\n";
          text.data = raw ? "transmission = \"raw\"\n" : "";
          text.rest = "[[reference]]\nfilm = \"Si\"\nsubstrate = \"bulk\"\nratio = 0.8\n[contamination]\nlayer = \"carbon\"\nline = \"C\"\nroute = \"sensitivities\"\n";
          Areas areas;
          for (const Emitter& e : emitters) {
            text.lines += line(e.label, e.level, e.from, "sensitivity = " + number(e.sensitivity) + "\ntransmission = " + number(e.transmission));
            const double energy = energy_of(e.level);
            double area = 1e4 * e.sensitivity * atoms(e.material, e.element);
            area *= imfp(e.material, energy);
            if (holds_depth) area /= std::pow(energy, 0.75) / 100.0;  // of an average matrix
            if (raw && !holds_transmission) area *= e.transmission;
            if (kind == "atomic") area *= angular_weight(e.level, 90.0);
            if (kind == "average-matrix") area /= std::pow(energy, 0.75) / 100.0;
            const double attenuation = std::exp(-d / (organic(energy) * c));
            area *= std::string(e.from) == "carbon" ? 1.0 - attenuation : attenuation;
            areas.emplace_back(e.label, area);
          }
          text.lines += line("bulk", "Si 2p", "substrate", "sensitivity = 0.34\ntransmission = 1.15\nlength_nm = { film = 3.0 }");
          areas.emplace_back("bulk", 1e-9);
          const ThicknessResults all = thicknesses(text.toml(), table(areas));
          INFO(kind << ", raw: " << raw << ", S holds T: " << holds_transmission << ", S holds λ: " << holds_depth);
          CHECK(close_to(thickness_at(all, 0).value_nm, d, rel(1e-9)));
          if (kind != "average-matrix") continue;
          // Each part relative to that of the carbon area, 1 %: sensitivities 10 %, assumed; the ratio of densities 10 % each
          // and of IMFPs 4.5 %; the others by their shares of the sum, 1 % of area and 10 % of sensitivity each.
          const double oxygen = atoms("SiO2", "O") * std::exp(-d / (organic(energy_of("O 1s")) * c));
          const double silicon = atoms("SiO2", "Si") * std::exp(-d / (organic(energy_of("Si 2p")) * c));
          const double spread = std::hypot(oxygen, silicon) / (oxygen + silicon);
          const auto part = [&](const char* name) {
            return 0.01 * contribution_nm(thickness_at(all, 0), name) / contribution_nm(thickness_at(all, 0), "film_area");
          };
          CHECK(close_to(part("sensitivity"), 0.1, rel(1e-9)));
          CHECK(close_to(part("reference_ratio"), std::sqrt(0.01 + 0.01 + 0.045 * 0.045), rel(1e-9)));
          CHECK(close_to(part("other_lines"), 0.01 * spread, rel(1e-6)));
          CHECK(close_to(part("other_sensitivities"), 0.1 * spread, rel(1e-6)));
        }
      }
    }
  }
}

TEST_CASE("carbon in atomic per cent against all other lines needs no sensitivities") {
  // Percentages as a homogeneous solid would give them: N λ over the IMFP of an average matrix, E^0.75, attenuated.
  const double d = 1.1, c = cosine_of_deg(45.0);
  const auto share = [&](const char* material, const char* element, const char* level) {
    const double energy = energy_of(level), loss = std::exp(-d / (organic(energy) * c));
    return atoms(material, element) * imfp(material, energy) / std::pow(energy, 0.75) * (std::string(element) == "C" ? 1.0 - loss : loss);
  };
  const double carbon = share("hydrocarbon", "C", "C 1s"), oxygen = share("SiO2", "O", "O 1s"), silicon = share("SiO2", "Si", "Si 2p");
  const double percent = 100.0 / (carbon + oxygen + silicon);
  Text text;
  text.contaminant = "\n";
  text.lines = line("C", "C 1s", "carbon", "") + line("O", "O 1s", "film", "reference_area = 200") + line("Si", "Si 2p", "film", "reference_area = 200");
  text.rest = "[contamination]\nlayer = \"carbon\"\nline = \"C\"\nroute = \"sensitivities\"\n";
  text.options = "method = \"film-line\"\n";
  text.data = "area_unit = \"atomic-percent\"\n";
  const Areas areas = {{"C", carbon * percent}, {"O", oxygen * percent}, {"Si", silicon * percent}};
  CHECK(close_to(thickness_at(thicknesses(text.toml(), table(areas)), 0).value_nm, d, rel(1e-9)));
  // Another line of the contamination itself does not come from below and is no part of the sum.
  Text more = text;
  more.lines += line("C=O", "C 1s", "carbon", "reference_area = 200");
  Areas with_more = areas;
  with_more.emplace_back("C=O", 30.0);
  CHECK(close_to(thickness_at(thicknesses(more.toml(), table(with_more)), 0).value_nm, d, rel(1e-9)));
  // Nor does a second level of an element in one layer: its atoms have been counted.
  more.lines += line("Si 2s", "Si 2s", "film", "reference_area = 200");
  with_more.emplace_back("Si 2s", silicon * percent);
  CHECK(close_to(thickness_at(thicknesses(more.toml(), table(with_more)), 0).value_nm, d, rel(1e-9)));
  // A line that the table leaves out would make the carbon look thicker: no answer, and the reason.
  const ThicknessResults gap = thicknesses(text.toml(), table({areas[0], areas[2]}));
  CHECK(contains(gap.results[0].failure, "no area of line \"O\""));
}

TEST_CASE("sensitivities are not asked of areas that hold them") {
  Text text;
  text.lines = line("oxide", "Si 2p", "film", "sensitivity = 0.3") + line("metal", "Si 2p", "substrate", "sensitivity = 0.3");
  text.data = "area_unit = \"atomic-percent\"\n";
  CHECK(contains(error_of<InputError>([&] { (void)thicknesses(text.toml(), table({{"oxide", 20.0}, {"metal", 10.0}})); }).fact(), "divided by one already"));
}

TEST_CASE("contamination found by any route is taken out of lines of different energy") {
  // Hafnia of 1.7 nm under 0.6 nm of hydrocarbon, 30 degrees. Lengths in hafnia 1.8 (Hf 4f) and 0.9 nm (Si 2p).
  const double d = 0.6, t = 1.7, c = cosine_of_deg(30.0), ratio = 4.0;
  const auto loss = [&](const char* level) { return std::exp(-d / (organic(energy_of(level)) * c)); };
  const double film = 1e4 * ratio * (1.0 - std::exp(-t / (1.8 * c))) * loss("Hf 4f");
  const double substrate = 1e4 * std::exp(-t / (0.9 * c)) * loss("Si 2p");
  const double carbon = 5000.0 * (1.0 - loss("C 1s"));
  CHECK(std::abs(loss("Hf 4f") / loss("Si 2p") - 1.0) > 0.005);  // what would be missed
  Text text;
  text.film = "hfo2";
  text.instrument = "emission_deg = 30\n";
  const std::string lines = line("Hf", "Hf 4f", "film", "length_nm = { film = 1.8 }") + line("Si", "Si 2p", "substrate", "length_nm = { film = 0.9 }");
  const std::string reference = "[[reference]]\nfilm = \"Hf\"\nsubstrate = \"Si\"\nratio = 4.0\n";
  const auto check = [&](const ThicknessResults& all, std::size_t of_film, const char* what) {
    CHECK(close_to(thickness_at(all, of_film).value_nm, t, rel(1e-10), what));
    if (of_film == 1) CHECK(close_to(thickness_at(all, 0).value_nm, d, rel(1e-10), what));
    CHECK(contribution_nm(thickness_at(all, of_film), "contamination_correction") >= 0.0);
  };
  text.contaminant = "thickness_nm = { value = 0.6, sd = 0.1 }";
  text.lines = lines;
  text.rest = reference;
  check(thicknesses(text.toml(), table({{"Hf", film}, {"Si", substrate}})), 0, "stated thickness");
  text.contaminant = "\n";
  text.lines = lines + line("C", "C 1s", "carbon", "reference_area = { value = 5000, sd = 50 }");
  text.rest = reference + "[contamination]\nlayer = \"carbon\"\nline = \"C\"\nroute = \"reference\"\n";
  check(thicknesses(text.toml(), table({{"Hf", film}, {"Si", substrate}, {"C", carbon}})), 1, "reference");
  text.lines = lines + line("C", "C 1s", "carbon", "");
  text.rest = reference + "[contamination]\nlayer = \"carbon\"\nline = \"C\"\nroute = \"atomic-percent\"\n";
  text.data = "area_unit = \"atomic-percent\"\n";
  // What the percentages must be for the formula to give d; film and substrate share the rest as their areas do.
  const double percent = 100.0 * (1.0 - loss("C 1s"));
  check(thicknesses(text.toml(), table({{"Hf", film * 1e-3}, {"Si", substrate * 1e-3}, {"C", percent}})), 1, "atomic per cent");
  // Against the sum of the others, per atom S λ W: the carbon that belongs to d above what film and substrate show.
  text.data.clear();
  text.instrument += "source_analyser_angle_deg = 90\n";
  text.lines = line("Hf", "Hf 4f", "film", "sensitivity = 2.6\nlength_nm = { film = 1.8 }") +
               line("Si", "Si 2p", "substrate", "sensitivity = 0.34\nlength_nm = { film = 0.9 }") + line("C", "C 1s", "carbon", "sensitivity = 0.31");
  text.rest = reference + "[contamination]\nlayer = \"carbon\"\nline = \"C\"\nroute = \"sensitivities\"\n";
  const auto response = [&](double s, const char* material, const char* level) {
    return s * imfp(material, energy_of(level)) * angular_weight(level, 90.0);
  };
  const double shown = film / loss("Hf 4f") / response(2.6, "hfo2", "Hf 4f") + substrate / loss("Si 2p") / response(0.34, "Si", "Si 2p");
  const double area = response(0.31, "hydrocarbon", "C 1s") * atoms("hydrocarbon", "C") * (1.0 - loss("C 1s")) * shown /
                      atoms("hfo2", "Hf");  // of the elements of hafnia only hafnium has a line
  check(thicknesses(text.toml(), table({{"Hf", film}, {"Si", substrate}, {"C", area}})), 1, "sensitivities");
}

TEST_CASE("a line of the film alone is corrected for contamination by its own attenuation") {
  const double d = 0.6, c = cosine_of_deg(45.0);
  const auto loss = [&](const char* level) { return std::exp(-d / (organic(energy_of(level)) * c)); };
  Text text;
  text.contaminant = "\n";
  text.options = "method = \"film-line\"\n";
  text.lines = line("oxide", "Si 2p", "film", "reference_area = 1000\nlength_nm = { film = 2.5 }") +
               line("C", "C 1s", "carbon", "reference_area = { value = 5000, sd = 50 }");
  text.rest = "[contamination]\nlayer = \"carbon\"\nline = \"C\"\nroute = \"reference\"\n";
  const ThicknessResults all = thicknesses(text.toml(), table({{"oxide", 350.0 * loss("Si 2p")}, {"C", 5000.0 * (1.0 - loss("C 1s"))}}));
  REQUIRE(all.results.size() == 2);
  CHECK(close_to(thickness_at(all, 1).value_nm, -2.5 * c * std::log(0.65), rel(1e-10)));
}

}  // TEST_SUITE("contamination")

TEST_SUITE("cone of the analyser in a run") {

TEST_CASE("a film seen through a cone has its own thickness by every method") {
  const double t = 1.5;
  for (const double emission : {0.0, 34.0, 60.0}) {
    for (const double half : {6.0, 15.0}) {
      Text text;
      text.instrument = "emission_deg = " + number(emission) + "\nacceptance_half_angle_deg = " + number(half) + "\n";
      const auto film_signal = [&](double length) { return over_cone(emission, half, [&](double c) { return 1.0 - std::exp(-t / (length * c)); }); };
      const auto substrate_signal = [&](double length) { return over_cone(emission, half, [&](double c) { return std::exp(-t / (length * c)); }); };
      // Midpoint rule of 400 steps: 1e-5 of a signal.
      const auto near = rel(3e-5);
      text.lines = line("oxide", "Si 2p", "film", "") + line("metal", "Si 2p", "substrate", "length_nm = { film = 3.448 }");
      text.rest = "[[reference]]\nfilm = \"oxide\"\nsubstrate = \"metal\"\nratio = 0.8\n";
      const double f = film_signal(3.448), s = substrate_signal(3.448);
      CHECK(close_to(only_thickness_nm(thicknesses(text.toml(), table({{"oxide", 800.0 * f}, {"metal", 1000.0 * s}}))), t, near));
      text.rest.clear();
      text.lines = line("oxide", "Si 2p", "film", "reference_area = 800\nlength_nm = { film = 3.448 }");
      text.options = "method = \"film-line\"\n";
      CHECK(close_to(only_thickness_nm(thicknesses(text.toml(), table({{"oxide", 800.0 * f}}))), t, near));
      text.lines = line("metal", "Si 2p", "substrate", "reference_area = 1000\nlength_nm = { film = 3.448 }");
      text.options = "method = \"substrate-line\"\n";
      CHECK(close_to(only_thickness_nm(thicknesses(text.toml(), table({{"metal", 1000.0 * s}}))), t, near));
      text.options.clear();
      text.film = "hfo2";
      text.lines = line("Hf", "Hf 4f", "film", "length_nm = { film = 3.0 }") + line("Si", "Si 2p", "substrate", "length_nm = { film = 2.2 }");
      text.rest = "[[reference]]\nfilm = \"Hf\"\nsubstrate = \"Si\"\nratio = 4\n";
      CHECK(close_to(only_thickness_nm(thicknesses(text.toml(), table({{"Hf", 4000.0 * film_signal(3.0)}, {"Si", 1000.0 * substrate_signal(2.2)}}))), t, near));
    }
  }
}

}  // TEST_SUITE("cone of the analyser in a run")

TEST_SUITE("bounds") {

TEST_CASE("a film that is not seen is bounded from above") {
  // The bound is the thickness at the 95 % limit of its area, a normal likelihood cut off at zero.
  Text text;
  text.emission_sd = "0";
  text.lines = line("oxide", "Si 2p", "film", "") + line("metal", "Si 2p", "substrate", "length_nm = { film = 2.5 }");
  text.rest = "[[reference]]\nfilm = \"oxide\"\nsubstrate = \"metal\"\nratio = 0.8\n";
  const auto bound = [&](const std::string& areas) {
    const ThicknessResults all = thicknesses(text.toml(), areas);
    REQUIRE(all.results.size() == 1);
    REQUIRE_MESSAGE(all.results[0].bound.has_value(), all.results[0].failure);
    CHECK_FALSE(all.results[0].thickness.has_value());
    CHECK(all.summaries[0].bounds == 1);
    return *all.results[0].bound;
  };
  const auto thickness = [](double film, double substrate) { return 2.5 * cosine_of_deg(45.0) * std::log1p(film / substrate / 0.8); };
  // Half of a normal distribution: 95 % of it lies below 1.959964 standard deviations.
  CHECK(close_to(exceeded_of_truncated_normal(0.0, 1.0, 0.05), 1.959963985, test::abs(1e-6)));
  ThicknessBound b = bound("line,area,area_sd\noxide,nd,10\nmetal,1000,1e-6\n");
  CHECK(b.upper);
  // Nothing but "nd": it may have been anything up to the decision level, 1.645 · 10, with its own spread about that.
  CHECK(close_to(b.at95_nm, thickness(exceeded_of_truncated_normal(16.448536269514722, 10.0, 0.05), 1000.0), rel(1e-6)));
  for (const double area : {-12.0, 4.0, 16.0}) {
    b = bound("line,area,area_sd\noxide," + number(area) + ",10\nmetal,1000,1e-6\n");
    CHECK(b.upper);
    CHECK(close_to(b.at95_nm, thickness(exceeded_of_truncated_normal(area, 10.0, 0.05), 1000.0), rel(1e-6), number(area)));
  }
  // 16.4 of 10 is not detected, 16.5 is: the decision level is 1.645 standard deviations [currie1968].
  (void)bound("line,area,area_sd\noxide,16.4,10\nmetal,1000,1e-6\n");
  CHECK(close_to(only_thickness_nm(thicknesses(text.toml(), "line,area,area_sd\noxide,16.5,10\nmetal,1000,1e-6\n")), thickness(16.5, 1000.0), rel(kRounding)));
  // Counts: no signal over 450 of background spreads by √(2·450) = 30.
  text.data = "area_unit = \"counts\"\n";
  b = bound("line,area,area_sd,background_counts\noxide,nd,,450\nmetal,1000,1e-6,300\n");
  // Decision level 1.645 · 30, and the 2.71 counts that the detection limit adds; without the cut at zero the limit would
  // be 2.71 + 4.65 √450 = 101.4 counts [currie1968].
  const double counts = exceeded_of_truncated_normal(2.71 + 1.6448536269514722 * 30.0, 30.0, 0.05);
  CHECK(close_to(counts, 2.71 + 4.65 * std::sqrt(450.0), rel(0.03)));
  CHECK(close_to(b.at95_nm, thickness(counts, 1000.0), rel(1e-6)));
}

TEST_CASE("a substrate that is not seen bounds the film from below") {
  Text text;
  text.emission_sd = "0";
  text.lines = line("oxide", "Si 2p", "film", "") + line("metal", "Si 2p", "substrate", "length_nm = { film = 2.5 }");
  text.rest = "[[reference]]\nfilm = \"oxide\"\nsubstrate = \"metal\"\nratio = 0.8\n";
  for (const double area : {-12.0, 4.0, 16.0}) {
    const ThicknessResults all = thicknesses(text.toml(), "line,area,area_sd\noxide,1000,1e-6\nmetal," + number(area) + ",10\n");
    REQUIRE(all.results[0].bound.has_value());
    CHECK_FALSE(all.results[0].bound->upper);
    const double limit = exceeded_of_truncated_normal(area, 10.0, 0.05);
    CHECK(close_to(all.results[0].bound->at95_nm, 2.5 * cosine_of_deg(45.0) * std::log1p(1000.0 / limit / 0.8), rel(1e-6)));
  }
  const ThicknessResults neither = thicknesses(text.toml(), "line,area,area_sd\noxide,nd,5\nmetal,nd,10\n");
  CHECK(contains(neither.results[0].failure, "neither"));
}

TEST_CASE("an area beyond its reference bounds the film") {
  // A film line stronger than of a thick film lets 1 − I/I∞ = −0.01 ± 0.02 through, and that is not below zero. A
  // substrate line stronger than bare: x = −ln(I/I∞) = −0.00995 ± 20/1010, and x is not below zero.
  Text text;
  text.emission_sd = "0";
  text.lines = line("oxide", "Si 2p", "film", "reference_area = 1000\nlength_nm = { film = 2.5 }");
  text.options = "method = \"film-line\"\n";
  const ThicknessResults above = thicknesses(text.toml(), "line,area,area_sd\noxide,1010,20\n");
  REQUIRE(above.results[0].bound.has_value());
  CHECK_FALSE(above.results[0].bound->upper);
  CHECK(close_to(above.results[0].bound->at95_nm, -2.5 * cosine_of_deg(45.0) * std::log(exceeded_of_truncated_normal(-0.01, 0.02, 0.05)), rel(1e-6)));
  text.lines = line("metal", "Si 2p", "substrate", "reference_area = 1000\nlength_nm = { film = 2.5 }");
  text.options = "method = \"substrate-line\"\n";
  const ThicknessResults below = thicknesses(text.toml(), "line,area,area_sd\nmetal,1010,20\n");
  REQUIRE(below.results[0].bound.has_value());
  CHECK(below.results[0].bound->upper);
  CHECK(close_to(below.results[0].bound->at95_nm, 2.5 * cosine_of_deg(45.0) * exceeded_of_truncated_normal(-std::log(1.01), 20.0 / 1010.0, 0.05), rel(1e-6)));
  // Nothing left of the substrate: the film is at least as thick as its limit allows.
  const ThicknessResults gone = thicknesses(text.toml(), "line,area,area_sd\nmetal,nd,20\n");
  REQUIRE(gone.results[0].bound.has_value());
  CHECK_FALSE(gone.results[0].bound->upper);
  CHECK(close_to(gone.results[0].bound->at95_nm, -2.5 * cosine_of_deg(45.0) * std::log(exceeded_of_truncated_normal(1.6448536269514722 * 20.0, 20.0, 0.05) / 1000.0), rel(1e-6)));
}

TEST_CASE("a bound holds the uncertainty of length and reference as well") {
  // The 95 % limit of 300000 draws made here: area normal and cut off at zero, length (10 %) and reference ratio (20 %)
  // lognormal. The library adds in quadrature, which is good to a few per cent of what the uncertainties add.
  std::mt19937_64 engine(7);
  const auto uniform = [&] { return (static_cast<double>(engine() >> 11U) + 0.5) * 0x1p-53; };
  const auto normal = [&] { return std::sqrt(-2.0 * std::log(uniform())) * std::cos(2.0 * std::numbers::pi * uniform()); };
  const auto lognormal = [&](double mean, double relative) {
    const double v = std::log1p(relative * relative);
    return mean * std::exp(std::sqrt(v) * normal() - 0.5 * v);
  };
  Text text;
  text.emission_sd = "0";
  text.lines = line("oxide", "Si 2p", "film", "") + line("metal", "Si 2p", "substrate", "length_nm = { film = { value = 2.5, relative_sd = 0.1 } }");
  text.rest = "[[reference]]\nfilm = \"oxide\"\nsubstrate = \"metal\"\nratio = { value = 0.8, relative_sd = 0.2 }\n";
  for (const bool film_lost : {true, false}) {
    std::vector<double> t;
    while (t.size() < 300000) {
      const double lost = 4.0 + 10.0 * normal();
      if (lost < 0.0) continue;
      const double ratio = film_lost ? lost / 1000.0 : 1000.0 / lost;
      t.push_back(lognormal(2.5, 0.1) * cosine_of_deg(45.0) * std::log1p(ratio / lognormal(0.8, 0.2)));
    }
    const auto at = t.begin() + static_cast<std::ptrdiff_t>(film_lost ? 285000 : 15000);
    std::nth_element(t.begin(), at, t.end());
    const ThicknessResults all = thicknesses(text.toml(), film_lost ? "line,area,area_sd\noxide,4,10\nmetal,1000,1e-6\n" : "line,area,area_sd\noxide,1000,1e-6\nmetal,4,10\n");
    REQUIRE(all.results[0].bound.has_value());
    CHECK(all.results[0].bound->upper == film_lost);
    CHECK(close_to(all.results[0].bound->at95_nm, *at, rel(0.02)));
  }
  // A film line as strong as its reference, both uncertain by 2 %: it lets 0 ± 0.02 √2 through. 10 % of the length count
  // one-sidedly, exp(1.645 · 0.1).
  text.rest.clear();
  text.lines = line("oxide", "Si 2p", "film", "reference_area = { value = 1000, sd = 20 }\nlength_nm = { film = { value = 2.5, relative_sd = 0.1 } }");
  text.options = "method = \"film-line\"\n";
  const double thick = -2.5 * cosine_of_deg(45.0) * std::log(exceeded_of_truncated_normal(0.0, 0.02 * std::sqrt(2.0), 0.05));
  CHECK(close_to(thicknesses(text.toml(), "line,area,area_sd\noxide,1000,20\n").results[0].bound->at95_nm, thick * std::exp(-0.16448536269514722), rel(1e-6)));
  text.lines = line("metal", "Si 2p", "substrate", "reference_area = { value = 1000, sd = 20 }\nlength_nm = { film = { value = 2.5, relative_sd = 0.1 } }");
  text.options = "method = \"substrate-line\"\n";
  const double thin = 2.5 * cosine_of_deg(45.0) * exceeded_of_truncated_normal(-std::log(1.001), std::hypot(0.02, 20.0 / 1001.0), 0.05);
  CHECK(close_to(thicknesses(text.toml(), "line,area,area_sd\nmetal,1001,20\n").results[0].bound->at95_nm, thin * std::exp(0.16448536269514722), rel(1e-6)));
}

}  // TEST_SUITE("bounds")
