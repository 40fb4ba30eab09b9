// Thickness from two lines, from the text of a run file to the result. Every expectation is arithmetic written here;
// atomic data (densities, cross sections, IMFPs) come from the library's tables, which have checks of their own. All
// areas, sensitivities and transmissions are invented.

#include <cmath>
#include <string>
#include <utility>

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
using test::run_from;
using test::thickness_at;
using test::thicknesses;

namespace {

/// A handful of products, one logarithm, one root good to 1e-13.
constexpr double kRounding = 1e-12;

/// Film of hafnia on silicon. What a case changes goes between the parts.
struct Text {
  std::string top, instrument, film_line, substrate_line, rest, data;

  [[nodiscard]] std::string hafnia() const {
    return top + "\n[instrument]\nsource = \"Al Ka\"\nemission_sd_deg = 1.0\n" + instrument +
           "\n[sample]\nsubstrate = \"Si\"\n[[sample.layer]]\nname = \"film\"\nmaterial = \"hfo2\"\n"
           "[[line]]\nlabel = \"Hf\"\nlevel = \"Hf 4f\"\nfrom = \"film\"\n" +
           film_line + "\n[[line]]\nlabel = \"Si\"\nlevel = \"Si 2p\"\nfrom = \"substrate\"\n" + substrate_line + "\n" +
           rest + "\n[thickness]\ninterval = \"gum\"\n[data]\nareas = \"areas.csv\"\n" + data;
  }

  [[nodiscard]] std::string silica() const {
    return top + "\n[instrument]\nsource = \"Al Ka\"\nemission_sd_deg = 1.0\n" + instrument +
           "\n[sample]\nsubstrate = \"Si\"\n[[sample.layer]]\nname = \"film\"\nmaterial = \"SiO2\"\n"
           "[[line]]\nlabel = \"oxide\"\nlevel = \"Si 2p\"\nfrom = \"film\"\nlength_nm = { film = { value = 3.0, sd = 0.3 } }\n" +
           film_line + "\n[[line]]\nlabel = \"metal\"\nlevel = \"Si 2p\"\nfrom = \"substrate\"\n" + substrate_line +
           "\n" + rest + "\n[thickness]\ninterval = \"gum\"\n[data]\nareas = \"areas.csv\"\n" + data;
  }
};

const std::string kHafniaRatio = "[[reference]]\nfilm = \"Hf\"\nsubstrate = \"Si\"\nratio = ";
const std::string kSilicaRatio = "[[reference]]\nfilm = \"oxide\"\nsubstrate = \"metal\"\nratio = ";

std::string pair_of_areas(const std::string& film, double film_area, const std::string& substrate, double substrate_area) {
  std::ostringstream text;
  text.precision(17);
  text << "line,area,area_sd\n" << film << ',' << film_area << ",10\n" << substrate << ',' << substrate_area << ",10\n";
  return text.str();
}

std::string hafnia_areas(double ratio) { return pair_of_areas("Hf", 1000.0 * ratio, "Si", 1000.0); }
std::string silica_areas(double ratio) { return pair_of_areas("oxide", 1000.0 * ratio, "metal", 1000.0); }

/// The reference ratio that a run of hafnia or silica arrives at, and the thickness that belongs to it.
double reference_ratio_of(const ThicknessResults& all) {
  REQUIRE(all.routes.size() == 1);
  REQUIRE(all.routes[0].reference_ratio.has_value());
  return all.routes[0].reference_ratio->value;
}

/// IMFP [nm] as computed signals use it.
double imfp(const char* material, double energy_ev) {
  return *predict_imfp(catalogue_material(material), energy_ev, ImfpModel::tpp2m).value_nm;
}

double atoms(const char* material, const char* element) {
  return atom_density_per_nm3(catalogue_material(material), element);
}

double cross_section(const char* level) {
  return *photoionisation_cross_section_barn(core_level(level), photon_source("Al Ka")).value;
}

double energy_of(const char* level) { return kinetic_energy_ev(core_level(level), photon_source("Al Ka")); }

/// 1 + (β/2)(3/2 sin²γ − 1) [reilman1976].
double angular_weight(const char* level, double source_analyser_deg) {
  const double s = test::sine_of_deg(source_analyser_deg);
  return 1.0 + 0.5 * *asymmetry_parameter(core_level(level), photon_source("Al Ka")).value * (1.5 * s * s - 1.0);
}

/// A ratio of 2 against this reference ratio, silica of length 3.0 nm at normal emission.
void check_silica(const ThicknessResults& all, double reference_ratio, const std::string& what) {
  CHECK(close_to(reference_ratio_of(all), reference_ratio, rel(kRounding), what));
  CHECK(close_to(only_thickness_nm(all), 3.0 * std::log(1.0 + 2.0 / reference_ratio), rel(kRounding), what));
}

/// A ratio of 2 of hafnia whose lines have lengths 2 and 1 nm (ϱ = 2): x = ln[(1 + √(1 + 4r))/2].
void check_hafnia(const ThicknessResults& all, double reference_ratio, const std::string& what) {
  CHECK(close_to(reference_ratio_of(all), reference_ratio, rel(kRounding), what));
  const double r = 2.0 / reference_ratio;
  CHECK(close_to(only_thickness_nm(all), 2.0 * std::log(0.5 * (1.0 + std::sqrt(1.0 + 4.0 * r))), rel(kRounding), what));
}

const std::string kHafniaFilmLength = "length_nm = { film = 2.0 }\n", kHafniaSubstrateLength = "length_nm = { film = 1.0 }\n";

}  // namespace

TEST_SUITE("routes of two lines") {

TEST_CASE("two kinetic energies take the length of each line from its own place") {
  // R/R₀ = [1 − exp(−x)] exp(ϱx). ϱ = L_f/L_s = ½: x = 2 asinh(r/2); ϱ = 2: x = ln[(1 + √(1 + 4r))/2].
  for (const double emission : {0.0, 34.0, 60.0}) {
    Text text;
    text.instrument = "emission_deg = " + std::to_string(emission);
    text.rest = kHafniaRatio + "{ value = 4.0, sd = 0.4 }";
    text.film_line = "length_nm = { film = 1.5 }";
    text.substrate_line = "length_nm = { film = 3.0 }";
    for (const double r : {0.1, 1.0, 10.0}) {
      const double half = 1.5 * cosine_of_deg(emission) * 2.0 * std::asinh(0.5 * r);
      CHECK(close_to(only_thickness_nm(thicknesses(text.hafnia(), hafnia_areas(4.0 * r))), half, rel(kRounding)));
    }
    text.substrate_line = "length_nm = { film = 0.75 }";
    for (const double r : {0.1, 1.0, 10.0}) {
      const double two = 1.5 * cosine_of_deg(emission) * std::log(0.5 * (1.0 + std::sqrt(1.0 + 4.0 * r)));
      CHECK(close_to(only_thickness_nm(thicknesses(text.hafnia(), hafnia_areas(4.0 * r))), two, rel(kRounding)));
    }
  }
  // Lengths 3.0 and 2.4 nm, 2.5 nm at 45 degrees: r = [1 − exp(−2.5/(3 cos 45))] exp(2.5/(2.4 cos 45)).
  Text text;
  text.instrument = "emission_deg = 45";
  text.rest = kHafniaRatio + "1.0";
  text.film_line = "length_nm = { film = 3.0 }";
  text.substrate_line = "length_nm = { film = 2.4 }";
  CHECK(close_to(only_thickness_nm(thicknesses(text.hafnia(), hafnia_areas(3.02028282))), 2.5, test::abs(1e-7)));
}

TEST_CASE("reference areas may be measured at angles of their own") {
  Text text;
  text.instrument = "emission_deg = 0\nsource_analyser_angle_deg = 54.7\ntilt_direction = \"toward-source\"\n";
  text.film_line = "reference_area = { value = 700, sd = 7, emission_deg = 20 }";
  text.substrate_line = "reference_area = { value = 1000, sd = 20, emission_deg = 40 }";
  // The analyser sees one and the same patch: the angle of a thick solid does not matter.
  check_silica(thicknesses(text.silica(), silica_areas(2.0)), 0.7, "analyser");
  // A small X-ray spot: rate of a thick solid ∝ cosθ/cos(ψ − θ), so each area is first carried to a common angle.
  text.instrument += "signal_area = \"x-ray-spot\"\n";
  const auto rate = [](double emission) { return cosine_of_deg(emission) / cosine_of_deg(54.7 - emission); };
  const double carried = (700.0 / rate(20.0)) / (1000.0 / rate(40.0));
  CHECK(std::abs(carried / 0.7 - 1.0) > 0.2);
  const ThicknessResults all = thicknesses(text.silica(), silica_areas(2.0));
  CHECK(close_to(only_thickness_nm(all), 3.0 * std::log(1.0 + 2.0 / carried), rel(kRounding)));
  // Uncertainty of both: L r/(1 + r) times 1 % and 2 %.
  const double r = 2.0 / carried;
  CHECK(close_to(contribution_nm(thickness_at(all, 0), "reference_film_area"), 0.01 * 3.0 * r / (1.0 + r), rel(1e-9)));
  CHECK(close_to(contribution_nm(thickness_at(all, 0), "reference_substrate_area"), 0.02 * 3.0 * r / (1.0 + r), rel(1e-9)));
  text.substrate_line = "reference_area = { value = 1000, sd = 20 }";
  CHECK(contains(error_of<InputError>([&] { (void)thicknesses(text.silica(), silica_areas(2.0)); }).fact(), "emission_deg"));
}

TEST_CASE("a ratio of the table is that of silica on silicon and of nothing else") {
  Text text;
  text.instrument = "emission_deg = 0";
  text.rest = kSilicaRatio + "\"table:sio2-si\"";
  const ThicknessResults all = thicknesses(text.silica(), silica_areas(2.0));
  check_silica(all, 0.9329, "seah2004, recalled");  // [seah2004], from memory
  CHECK(all.routes[0].reference_origin == "table:sio2-si");
  CHECK(has_finding(all.findings, "reference_from_memory"));
  text.rest = kHafniaRatio + "\"table:sio2-si\"";
  CHECK(contains(error_of<InputError>([&] { (void)thicknesses(text.hafnia(), hafnia_areas(2.0)); }).hint(), "Hf"));
  text.rest = kSilicaRatio + "\"table:sio2-sj\"";
  CHECK(contains(error_of<InputError>([&] { (void)thicknesses(text.silica(), silica_areas(2.0)); }).hint(), "sio2-si"));
}

TEST_CASE("a computed ratio of one line is atom densities times IMFPs") {
  Text text;
  text.instrument = "emission_deg = 0";
  text.rest = kSilicaRatio + "\"computed\"";
  const ThicknessResults all = thicknesses(text.silica(), silica_areas(2.0));
  const double energy = energy_of("Si 2p");
  check_silica(all, atoms("SiO2", "Si") * imfp("SiO2", energy) / (atoms("Si", "Si") * imfp("Si", energy)), "N λ");
  CHECK(has_finding(all.findings, "reference_computed"));
  // Silicon atoms: ρ/M of oxide and silicon, 2.20/60.083 over 2.33/28.085 (atomic weights [prohaska2022]).
  CHECK(close_to(reference_ratio_of(all) * imfp("Si", energy) / imfp("SiO2", energy),
                 (2.20 / 60.083) / (2.33 / 28.085), rel(2e-4)));
}

TEST_CASE("a computed ratio of two lines holds cross section and asymmetry and transmission") {
  Text text;
  text.film_line = kHafniaFilmLength;
  text.substrate_line = kHafniaSubstrateLength;
  text.rest = kHafniaRatio + "\"computed\"";
  const double density = atoms("hfo2", "Hf") / atoms("Si", "Si");
  const double lengths = imfp("hfo2", energy_of("Hf 4f")) / imfp("Si", energy_of("Si 2p"));
  const double sections = cross_section("Hf 4f") / cross_section("Si 2p");
  for (const double angle : {45.0, 54.7356, 90.0}) {
    text.instrument = "emission_deg = 0\nsource_analyser_angle_deg = " + std::to_string(angle);
    const double weights = angular_weight("Hf 4f", angle) / angular_weight("Si 2p", angle);
    check_hafnia(thicknesses(text.hafnia(), hafnia_areas(2.0)), density * lengths * sections * weights, "N λ σ W");
  }
  // Raw areas hold the transmission, corrected ones do not.
  text.film_line += "transmission = 0.9\nmain_peak_fraction = 0.8\n";
  text.substrate_line += "transmission = 1.2\nmain_peak_fraction = 0.95\n";
  const double weights = angular_weight("Hf 4f", 90.0) / angular_weight("Si 2p", 90.0);
  const double corrected = density * lengths * sections * weights * 0.8 / 0.95;
  check_hafnia(thicknesses(text.hafnia(), hafnia_areas(2.0)), corrected, "corrected");
  text.data = "transmission = \"corrected\"\n";
  check_hafnia(thicknesses(text.hafnia(), hafnia_areas(2.0)), corrected, "corrected, said");
  text.data = "transmission = \"raw\"\n";
  check_hafnia(thicknesses(text.hafnia(), hafnia_areas(2.0)), corrected * 0.9 / 1.2, "raw");
  text.substrate_line = kHafniaSubstrateLength;
  CHECK(contains(error_of<InputError>([&] { (void)thicknesses(text.hafnia(), hafnia_areas(2.0)); }).fact(), "transmission"));
  // In atomic per cent cross section, asymmetry, transmission and E^0.75 are out of the areas already.
  const double depths = std::pow(energy_of("Hf 4f") / energy_of("Si 2p"), -0.75);
  text.film_line = kHafniaFilmLength;
  text.data = "area_unit = \"atomic-percent\"\n";
  check_hafnia(thicknesses(text.hafnia(), hafnia_areas(2.0)), density * lengths * depths, "atomic per cent");
}

TEST_CASE("each kind of sensitivity makes the ratio it stands for") {
  const double film_energy = energy_of("Hf 4f"), substrate_energy = energy_of("Si 2p");
  const double density = atoms("hfo2", "Hf") / atoms("Si", "Si");
  const double lengths = imfp("hfo2", film_energy) / imfp("Si", substrate_energy);
  Text text;
  text.instrument = "emission_deg = 0\nsource_analyser_angle_deg = 90";
  const std::string film = kHafniaFilmLength + "sensitivity = { value = 2.6, sd = 0.1 }\n";
  const std::string substrate = kHafniaSubstrateLength + "sensitivity = { value = 0.34, sd = 0.02 }\n";
  const double s = 2.6 / 0.34, t = 0.9 / 1.2;
  const double weights = angular_weight("Hf 4f", 90.0) / angular_weight("Si 2p", 90.0);
  text.film_line = film + "transmission = 0.9\n";
  text.substrate_line = substrate + "transmission = 1.2\n";
  const auto ratio = [&](const std::string& top, const std::string& data) {
    text.top = top;
    text.data = data;
    return thicknesses(text.hafnia(), hafnia_areas(2.0));
  };
  const std::string raw = "transmission = \"raw\"\n";
  // Per atom: S N λ W, times T where the areas hold it and S does not.
  check_hafnia(ratio("", ""), s * density * lengths * weights, "atomic");
  check_hafnia(ratio("sensitivity_kind = \"atomic\"\n", raw), s * density * lengths * weights * t, "atomic, raw");
  check_hafnia(ratio("sensitivity_includes = [\"transmission\"]\n", raw), s * density * lengths * weights, "S holds T");
  // An escape depth in S is that of an average matrix, E^0.75.
  const double depths = std::pow(energy_of("Hf 4f") / energy_of("Si 2p"), -0.75);
  check_hafnia(ratio("sensitivity_includes = [\"escape-depth\"]\n", ""), s * density * lengths * depths * weights, "S holds λ");
  check_hafnia(ratio("sensitivity_includes = [\"escape-depth\", \"transmission\"]\n", raw), s * density * lengths * depths * weights, "S holds both");
  check_hafnia(ratio("sensitivity_includes = [\"asymmetry\"]\n", ""), s * density * lengths, "S holds W");
  CHECK(contains(error_of<InputError>([&] { (void)ratio("sensitivity_includes = [\"transmission\"]\n", ""); }).fact(), "corrected"));
  // Pure element: S (N λ)/(N λ of hafnium, of silicon).
  const double pure = atoms("Hf", "Hf") * imfp("Hf", film_energy) / (atoms("Si", "Si") * imfp("Si", substrate_energy));
  const std::string elemental = "sensitivity_kind = \"elemental\"\n";
  check_hafnia(ratio(elemental, ""), s * density * lengths / pure, "elemental");
  check_hafnia(ratio(elemental, raw), s * density * lengths / pure * t, "elemental, raw");
  check_hafnia(ratio(elemental + "sensitivity_includes = [\"transmission\"]\n", raw), s * density * lengths / pure, "elemental with T");
  // Average matrix: its density is the same for both lines, its IMFP rises as E^0.75.
  const double average = std::pow(film_energy / substrate_energy, 0.75);
  const std::string matrix = "sensitivity_kind = \"average-matrix\"\n";
  check_hafnia(ratio(matrix, ""), s * density * lengths / average, "average matrix");
  check_hafnia(ratio(matrix, raw), s * density * lengths / average * t, "average matrix, raw");
  check_hafnia(ratio(matrix + "sensitivity_includes = [\"transmission\"]\n", raw), s * density * lengths / average, "average matrix with T");
  for (const std::string& kind : {elemental, matrix}) {
    CHECK(contains(error_of<InputError>([&] { (void)ratio(kind + "sensitivity_includes = [\"escape-depth\"]\n", ""); }).fact(), "escape depth"));
  }
  // The uncertainty of each factor: L_f κ times the relative one, κ = 1/(ϱ + 1/(eˣ − 1)).
  const ThicknessResults all = ratio(matrix, "");
  const double x = only_thickness_nm(all) / 2.0, slope = 2.0 / (2.0 + 1.0 / std::expm1(x));
  CHECK(close_to(contribution_nm(thickness_at(all, 0), "sensitivity_film"), slope * 0.1 / 2.6, rel(1e-9)));
  CHECK(close_to(contribution_nm(thickness_at(all, 0), "sensitivity_substrate"), slope * 0.02 / 0.34, rel(1e-9)));
}

TEST_CASE("sensitivities of one line cancel and leave densities and IMFPs") {
  Text text;
  text.instrument = "emission_deg = 0\nsource_analyser_angle_deg = 90";
  text.film_line = text.substrate_line = "sensitivity = 0.34";
  const double energy = energy_of("Si 2p");
  const double expected = atoms("SiO2", "Si") * imfp("SiO2", energy) / (atoms("Si", "Si") * imfp("Si", energy));
  for (const std::string kind : {"atomic", "elemental", "average-matrix"}) {
    text.top = "sensitivity_kind = \"" + kind + "\"\n";
    check_silica(thicknesses(text.silica(), silica_areas(2.0)), expected, kind);
  }
}

TEST_CASE("lines that mix their scales are refused with a list of which has which") {
  Text text;
  text.instrument = "emission_deg = 0";
  text.film_line = "sensitivity = 0.34";
  text.substrate_line = "reference_area = 1000";
  const auto error = error_of<InputError>([&] { (void)thicknesses(text.silica(), silica_areas(2.0)); });
  CHECK(contains(error.fact(), "reference_area on \"metal\""));
  CHECK(contains(error.fact(), "sensitivity on \"oxide\""));
}

TEST_CASE("components are summed by weight and their errors with them") {
  // Suboxides counted in part: 900 + 0.75·200 + 0.5·100 = 1100 over 500, reference ratio 0.8.
  Text text;
  text.instrument = "emission_deg = 0";
  text.film_line = "components = [\"Si4\", { label = \"Si3\", weight = 0.75 }, { label = \"Si2\", weight = 0.5 }]";
  text.rest = kSilicaRatio + "{ value = 0.8, sd = 0.04 }";
  const std::string areas = "line,area,area_sd\nSi4,900,9\nSi3,200,8\nSi2,100,6\nmetal,500,5\n";
  const ThicknessResults all = thicknesses(text.silica(), areas);
  CHECK(close_to(only_thickness_nm(all), 3.0 * std::log(1.0 + 1100.0 / 500.0 / 0.8), rel(kRounding)));
  CHECK(close_to(all.results[0].film_area->sd(), std::sqrt(81.0 + 36.0 + 9.0), rel(1e-14)));
  // Fitted components of one peak push each other: their errors are against each other.
  text.data = "[[data.correlation]]\nlines = [\"Si4\", \"Si3\"]\nr = -0.5\n";
  CHECK(close_to(thicknesses(text.silica(), areas).results[0].film_area->sd(),
                 std::sqrt(81.0 + 36.0 + 9.0 - 2.0 * 0.5 * 9.0 * 6.0), rel(1e-14)));
}

TEST_CASE("correlated areas of film and substrate share their error in the ratio") {
  // ∂t/∂ln R = L r/(1 + r); u²(ln R) = u_f² + u_s² − 2 c u_f u_s, all relative.
  Text text;
  text.instrument = "emission_deg = 0";
  text.rest = kSilicaRatio + "0.8";
  const auto area_part = [&](const std::string& areas) { return thickness_at(thicknesses(text.silica(), areas), 0).budget.repeatability; };
  const double slope = 3.0 * 2.75 / 3.75;  // r = 2.2/0.8
  const std::string plain = "line,area,area_sd\noxide,1100,33\nmetal,500,10\n";
  for (const double c : {-0.9, -0.4, 0.0, 0.6}) {
    text.data = "[[data.correlation]]\nlines = [\"metal\", \"oxide\"]\nr = " + std::to_string(c) + "\n";
    CHECK(close_to(area_part(plain), slope * std::sqrt(9e-4 + 4e-4 - 2.0 * c * 6e-4), rel(1e-9)));
  }
  // The same where the film is a sum: covariance −0.4·12·10 of the second component alone, weight 0.5.
  text.film_line = "components = [\"a\", { label = \"b\", weight = 0.5 }]";
  text.data = "[[data.correlation]]\nlines = [\"b\", \"metal\"]\nr = -0.4\n";
  const double film = std::hypot(30.0, 6.0) / 1100.0, covariance = -0.4 * 0.5 * 12.0 * 10.0 / (1100.0 * 500.0);
  CHECK(close_to(area_part("line,area,area_sd\na,1000,30\nb,200,12\nmetal,500,10\n"),
                 slope * std::sqrt(film * film + 4e-4 - 2.0 * covariance), rel(1e-9)));
  // A component that stands in both lines is one measurement: 300 of it in each, so that they share 18².
  text.data.clear();
  text.film_line = "components = [\"a\", \"shared\"]";
  text.substrate_line = "components = [\"b\", \"shared\"]";
  const double f = std::hypot(24.0, 18.0) / 1100.0, s = std::hypot(4.0, 18.0) / 500.0;
  CHECK(close_to(area_part("line,area,area_sd\na,800,24\nshared,300,18\nb,200,4\n"),
                 slope * std::sqrt(f * f + s * s - 2.0 * 18.0 * 18.0 / (1100.0 * 500.0)), rel(1e-9)));
}

TEST_CASE("a doublet against half of one is refused in the run file with the factor between them") {
  Text text;
  text.instrument = "emission_deg = 0";
  text.rest = kSilicaRatio + "0.8";
  std::string toml = text.silica();
  toml.replace(toml.find("level = \"Si 2p\""), 15, "level = \"Si 2p3/2\"");
  const auto error = error_of<InputError>([&] { (void)thicknesses(toml, silica_areas(2.0)); });
  CHECK(contains(error.fact(), "1.50"));  // six electrons of 2p against four of 2p3/2
  CHECK(contains(error.fact(), "Si 2p3/2"));
  CHECK(contains(error.where(), "run.toml"));
}

TEST_CASE("every area unit gives the thickness of the same counts and its own uncertainty") {
  // 20000 and 10000 counts, background 5000 and 4000 in an equal window: u² = N + 2B [currie1968].
  Text text;
  text.instrument = "emission_deg = 0";
  text.rest = kSilicaRatio + "0.8";
  const double dwell = 4.0, step = 0.1, t = 3.0 * std::log(1.0 + 2.0 / 0.8);
  const auto check = [&](const std::string& unit, double per_area, const std::string& columns, const std::string& values) {
    text.data = "area_unit = \"" + unit + "\"\n";
    std::ostringstream areas;
    areas.precision(17);
    areas << "line,area" << columns << "\noxide," << 20000.0 / per_area << (values.empty() ? "" : ",5000" + values) << "\nmetal,"
          << 10000.0 / per_area << (values.empty() ? "" : ",4000" + values) << '\n';
    const ThicknessResults all = thicknesses(text.silica(), areas.str());
    CHECK(close_to(only_thickness_nm(all), t, rel(kRounding), unit));
    const bool counted = !values.empty();
    CHECK(close_to(all.results[0].film_area->sd() * per_area, counted ? std::sqrt(30000.0) : 400.0, rel(1e-12), unit));
    CHECK(close_to(all.results[0].substrate_area->sd() * per_area, counted ? std::sqrt(18000.0) : 200.0, rel(1e-12), unit));
    const auto assumed = [](const Finding& f) { return f.code == "assumed" && contains(f.text, "of the areas"); };
    CHECK(std::any_of(all.findings.begin(), all.findings.end(), assumed) == !counted);
  };
  check("counts", 1.0, ",background_counts,dwell_s,step_ev", ",4,0.1");
  check("counts/s", dwell, ",background_counts,dwell_s,step_ev", ",4,0.1");
  check("counts*eV", 1.0 / step, ",background_counts,dwell_s,step_ev", ",4,0.1");
  check("counts*eV/s", dwell / step, ",background_counts,dwell_s,step_ev", ",4,0.1");
  // What is not counts spreads by 2 %, common practice, no source.
  check("arbitrary", 7.0, "", "");
  check("atomic-percent", 1000.0, "", "");
}

TEST_CASE("a wide table and renamed columns say the same as a long one") {
  Text text;
  text.rest = kSilicaRatio + "0.8";
  const auto values = [](const ThicknessResults& all) {
    std::vector<double> v;
    for (const ThicknessResult& r : all.results) {
      REQUIRE_MESSAGE(r.thickness.has_value(), r.failure);
      v.insert(v.end(), {r.emission_deg, r.thickness->value_nm, r.thickness->standard_uncertainty_nm});
    }
    return v;
  };
  const auto one = [&](double emission, double ratio) { return 3.0 * cosine_of_deg(emission) * std::log(1.0 + ratio / 0.8); };
  const std::vector<double> in_long = values(thicknesses(
      text.silica(), "spot,emission_deg,line,area,area_sd\nA,30,oxide,1000,20\nA,30,metal,500,5\nB,40,metal,600,6\nB,40,oxide,900,9\n"));
  REQUIRE(in_long.size() == 6);
  CHECK(close_to(in_long[1], one(30.0, 2.0), rel(kRounding)));
  CHECK(close_to(in_long[4], one(40.0, 1.5), rel(kRounding)));
  text.data = "layout = \"wide\"\n";
  CHECK(values(thicknesses(text.silica(), "metal,spot,emission_deg,metal sd,oxide sd,oxide\n500,A,30,5,20,1000\n600,B,40,6,9,900\n")) == in_long);
  CHECK(values(thicknesses(text.silica(), "spot;takeoff_deg;oxide;oxide sd;metal;metal sd\nA;60;1000;20;500;5\nB;50;900;9;600;6\n")) == in_long);
  text.data = "layout = \"wide\"\ncolumns = { spot = \"Point\", oxide = \"Si 2p (A)\", metal = \"Si 2p (B)\", \"oxide sd\" = \"u(A)\", \"metal sd\" = \"u(B)\", emission_deg = \"angle\" }\n";
  CHECK(values(thicknesses(text.silica(), "Point,angle,Si 2p (A),u(A),Si 2p (B),u(B)\nA,30,1000,20,500,5\nB,40,900,9,600,6\n")) == in_long);
  text.data = "columns = { spot = \"Point\", line = \"Name\", area = \"Peak area\", area_sd = \"StDev\", takeoff_deg = \"TOA\" }\n";
  CHECK(values(thicknesses(text.silica(), "Name,Peak area,StDev,Point,TOA\noxide,1000,20,A,60\nmetal,500,5,A,60\nmetal,600,6,B,50\noxide,900,9,B,50\n")) == in_long);
  // An empty cell of a wide table: that spot has no such line, the others stand.
  text.data = "layout = \"wide\"\n";
  const ThicknessResults gap = thicknesses(text.silica(), "spot,emission_deg,oxide,metal\nA,30,,500\nB,40,900,600\n");
  CHECK(contains(gap.results[0].failure, "oxide"));
  CHECK(close_to(thickness_at(gap, 1).value_nm, one(40.0, 1.5), rel(kRounding)));
}

TEST_CASE("a predicted length and a computed ratio share the error of their formula") {
  // ln t moves with ln L by 1 and with ln R₀ by −k, k = y/[(1 + y) ln(1 + y)], y = R/R₀; R₀ ∝ N_f λ_f/(N_s λ_s).
  // Independent: densities 10 and 2 %, the ratio itself 40 %. Of one formula: λ_f, λ_s 10 % each and L, correlated by 0.9.
  Text text;
  text.instrument = "emission_deg = 0";
  text.rest = kSilicaRatio + "\"computed\"";
  std::string toml = text.silica();
  const std::string given = "length_nm = { film = { value = 3.0, sd = 0.3 } }\n";
  toml.erase(toml.find(given), given.size());
  const ThicknessResults all = thicknesses(toml, "line,area,area_sd\noxide,2000,0.001\nmetal,1000,0.001\n");
  const double y = 2.0 / reference_ratio_of(all), k = y / ((1.0 + y) * std::log1p(y));
  const double length = all.routes[0].film_length.length_nm.sd() / all.routes[0].film_length.length_nm.value;
  const double a = -0.1 * k, b = 0.1 * k, c = length;  // λ_f, λ_s, L
  const double shared = a * a + b * b + c * c + 1.8 * (a * b + a * c + b * c);
  const double alone = k * k * (0.01 + 0.0004 + 0.16);
  const Thickness& t = thickness_at(all, 0);
  CHECK(close_to(t.standard_uncertainty_nm / t.value_nm, std::sqrt(shared + alone), rel(1e-6)));
}

TEST_CASE("Monte Carlo of the worked example has the interval of an independent draw") {
  // Length 3.448 nm (10 %) and reference ratio 0.9329 (5 %) lognormal, 34 ± 1 degrees, Poisson areas: 95 % from 2.653 to
  // 4.004 nm, mean 3.277, sd 0.345, by a million draws made apart from this library. Constants [seah2004], recalled.
  Text text;
  text.instrument = "emission_deg = 34";
  text.rest = kSilicaRatio + "{ value = 0.9329, relative_sd = 0.05 }";
  text.data = "area_unit = \"counts\"\n";
  std::string toml = text.silica();
  toml.replace(toml.find("value = 3.0, sd = 0.3"), 21, "value = 3.448, relative_sd = 0.1");
  toml.replace(toml.find("interval = \"gum\""), 16, "interval = \"monte-carlo\"\ndraws = 400000");
  const ThicknessResults all = thicknesses(toml, "line,area\noxide,20000\nmetal,10000\n");
  REQUIRE(all.results[0].monte_carlo.has_value());
  const MonteCarloThickness& drawn = *all.results[0].monte_carlo;
  CHECK(close_to(thickness_at(all, 0).value_nm, 3.27429, test::abs(5e-6)));
  CHECK(close_to(thickness_at(all, 0).standard_uncertainty_nm, 0.34462, test::abs(5e-6)));
  CHECK(close_to(drawn.mean_nm, 3.277, test::abs(0.003)));
  CHECK(close_to(drawn.standard_uncertainty_nm, 0.345, test::abs(0.002)));
  CHECK(close_to(drawn.interval_nm.low95, 2.653, test::abs(0.01)));
  CHECK(close_to(drawn.interval_nm.high95, 4.004, test::abs(0.01)));
}

}  // TEST_SUITE("routes of two lines")
