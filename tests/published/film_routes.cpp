#include "published/film_routes.hpp"

#include <cmath>
#include <numbers>
#include <stdexcept>

#include "pellicle/estimate/thickness.hpp"
#include "pellicle/job/thickness_job.hpp"
#include "pellicle/lines/photoionisation.hpp"
#include "pellicle/signal/overlayer.hpp"
#include "pellicle/transport/attenuation_length.hpp"
#include "pellicle/transport/imfp.hpp"
#include "pellicle/uncertainty/detection.hpp"
#include "support/sample_run.hpp"

namespace pellicle::test {
namespace {

/// A signal as a fraction of that of a thick solid.
FilmMeasurement fraction(ThicknessMethod method, double value, double length_nm, double emission_deg) {
  FilmMeasurement m;
  m.method = method;
  m.factors = {{"fraction", value, 1.0, ContributionKind::repeatability, true}};
  m.film_line_length_nm = length_nm;
  m.emission_deg = emission_deg;
  return m;
}

template <ThicknessMethod method>
double single_line(const RowInputs& in) {
  return thickness_from_factors(fraction(method, in.number("fraction"), in.number("length_nm"), in.number("emission_deg"))).value_nm;
}

double carbon(const RowInputs& in) {
  return thickness_from_factors(fraction(ThicknessMethod::atomic_percent, in.number("percent") / 100.0, in.number("length_nm"),
                                         in.number("emission_deg")))
      .value_nm;
}

double contamination_transmission(const RowInputs& in) {
  return substrate_signal(in.number("thickness_nm"), organic_attenuation_length_nm(in.number("energy_ev")), 0.0);
}

/// Per cent by which the axis alone misjudges a film whose ratio the cone has averaged. The ratio that belongs to the
/// film is found by bisection on the thickness with the cone.
double cone_bias_percent(const RowInputs& in) {
  const double t = in.number("thickness_nm");
  FilmMeasurement m = fraction(ThicknessMethod::ratio, 1.0, in.number("length_nm"), in.number("emission_deg"));
  const auto thickness = [&](double ratio, double half_angle_deg) {
    m.factors[0].quantity = ratio;
    m.acceptance_half_angle_deg = half_angle_deg;
    return thickness_from_factors(m).value_nm;
  };
  double low = -7.0, high = 12.0;  // ln of the ratio
  for (int i = 0; i < 60; ++i) {
    const double middle = 0.5 * (low + high);
    (thickness(std::exp(middle), in.number("half_angle_deg")) > t ? high : low) = middle;
  }
  return 100.0 * (thickness(std::exp(low), 0.0) / t - 1.0);
}

Run pair_run(const std::string& film, const std::string& film_level, const std::string& substrate, const std::string& substrate_level) {
  Run run;
  run.place = "run.toml";
  run.source = photon_source("Al Ka");
  run.emission_deg = 0.0;
  run.sample.layers.push_back({"film", catalogue_material(film)});
  run.sample.substrate = catalogue_material(substrate);
  run.lines = {line(run, "f", film_level, "film"), line(run, "s", substrate_level, "substrate")};
  ReferenceRatio computed;
  computed.film = "f";
  computed.substrate = "s";
  computed.origin = ReferenceOrigin::computed;
  run.references = {computed};
  return run;
}

double computed_ratio(const Run& run) { return thickness_routes(run).at(0).reference_ratio.value().value; }

double computed_reference_ratio(const RowInputs& in) {
  return computed_ratio(pair_run(in.text("film"), in.text("level"), in.text("substrate"), in.text("level")));
}

/// W of a level in a film, from the computed ratio to Si 2p of silicon: all else is divided out, W of Si 2p by the
/// formula written here.
double asymmetry_weight(const RowInputs& in) {
  static const std::map<std::string, std::string> film_of = {
      {"C 1s", "hydrocarbon"}, {"O 1s", "sio2-thermal"}, {"Hf 4f", "hfo2"}, {"Al 2p", "al2o3-amorphous"}};
  const std::string level = in.text("level"), film = film_of.at(level);
  Run run = pair_run(film, level, "Si", "Si 2p");
  run.geometry.source_analyser_angle_deg = in.number("source_analyser_deg");
  const auto signal = [&](const Line& l, const Material& m) {
    return atom_density_per_nm3(m, l.level->element->symbol) * predict_imfp(m, l.kinetic_energy_ev, ImfpModel::tpp2m).value_nm.value() *
           photoionisation_cross_section_barn(*l.level, run.source).value.value();
  };
  const double without = signal(run.lines[0], run.sample.layers[0].material) / signal(run.lines[1], run.sample.substrate);
  const double sine = std::sin(in.number("source_analyser_deg") * std::numbers::pi / 180.0);
  const double beta = asymmetry_parameter(*run.lines[1].level, run.source).value.value();
  return computed_ratio(run) / without * (1.0 + 0.5 * beta * (1.5 * sine * sine - 1.0));
}

/// Reduced thickness of a film whose line, or whose substrate's line, is as strong as its detection limit.
template <ThicknessMethod method>
double detected_x(const RowInputs& in) {
  const double part = detection_limit_counts(in.number("background_counts")) / in.number("thick_counts");
  return thickness_from_factors(fraction(method, part, 1.0, 0.0)).value_nm;
}

/// Thickness [nm] from which on the library warns that a film is thick.
double thickest_film(const RowInputs& in) {
  RatioMeasurement m;
  m.ratio = 1e6;
  m.reference_ratio = 1.0;
  m.film_line_length_nm = attenuation_length(catalogue_material(in.text("film")), in.number("energy_ev")).value_nm;
  for (const Finding& f : thickness_from_ratio(m).findings) {
    if (f.code == "film_thick") return f.limit.value() * m.film_line_length_nm.value;
  }
  throw std::runtime_error("no warning of a thick film");
}

double native_oxide(const RowInputs& in) {
  Run run = pair_run(in.text("film"), in.text("level"), in.text("substrate"), in.text("level"));
  run.tables = {"areas.csv"};
  run.uncertainty.method = IntervalMethod::gum;
  run.areas = {area("1", "f", 1000.0 * in.number("ratio")), area("1", "s", 1000.0)};
  const ThicknessResults all = run_thickness(run);
  if (!all.results.at(0).thickness) throw std::runtime_error(all.results[0].failure);
  return all.results[0].thickness->value_nm;
}

}  // namespace

const std::map<std::string, std::function<double(const RowInputs&)>>& film_route_functions() {
  static const std::map<std::string, std::function<double(const RowInputs&)>> all = {
      {"film_line_thickness_nm", single_line<ThicknessMethod::film_line>},
      {"substrate_line_thickness_nm", single_line<ThicknessMethod::substrate_line>},
      {"carbon_thickness_nm", carbon},
      {"contamination_transmission", contamination_transmission},
      {"cone_bias_percent", cone_bias_percent},
      {"asymmetry_weight", asymmetry_weight},
      {"computed_reference_ratio", computed_reference_ratio},
      {"thinnest_detected_x", detected_x<ThicknessMethod::film_line>},
      {"thickest_detected_x", detected_x<ThicknessMethod::substrate_line>},
      {"thickest_film_nm", thickest_film},
      {"native_oxide_thickness_nm", native_oxide},
  };
  return all;
}

}  // namespace pellicle::test
