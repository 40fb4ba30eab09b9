#include "published/uncertainty_engine.hpp"

#include <array>
#include <cmath>
#include <functional>
#include <numbers>
#include <numeric>
#include <span>
#include <stdexcept>
#include <vector>

#include "pellicle/base/constants.hpp"
#include "pellicle/base/status.hpp"
#include "pellicle/estimate/thickness.hpp"

namespace pellicle::test {
namespace {

using In = std::span<const double>;
using D = Distribution;
constexpr double kInf = std::numeric_limits<double>::infinity();

/// Everything an example needs. Without `block` the draws go through `model` one by one.
struct Example {
  Model model;
  std::vector<ModelInput> inputs;
  std::vector<Correlation> correlations = {};
  double coverage_probability = 0.95;
  BlockModel block = {};
};

ModelInput input(std::string name, Distribution d, double degrees_of_freedom = kInf) {
  return {std::move(name), d, ContributionKind::repeatability, degrees_of_freedom};
}

double number_or(const RowInputs& in, const std::string& name, double otherwise) {
  return in.has(name) ? in.number(name) : otherwise;
}

/// Half width of a rectangular distribution.
D within(double middle, double half_width) { return D::rectangular(middle - half_width, middle + half_width); }

/// t distribution by its scale, as JCGM 101:2008, 6.4.9 writes it.
D t_of_scale(double mean, double scale, double nu) {
  return D::student_t(mean, scale * std::sqrt(nu / (nu - 2.0)), nu);
}

// ---- JCGM 101:2008 [jcgm101]

/// 9.2: sum of four quantities of mean 0; 9.2.2 normal, 9.2.3 rectangular, 9.2.4 the last one ten times as wide.
Example sum_of_four(const RowInputs& in) {
  Example e;
  e.model = [](In x) { return x[0] + x[1] + x[2] + x[3]; };
  const bool is_normal = in.text("distribution") == "normal";
  for (int i = 1; i <= 4; ++i) {
    const double sd = i == 4 ? number_or(in, "last_sd", 1.0) : 1.0;
    e.inputs.push_back(
        input("x" + std::to_string(i), is_normal ? D::normal(0.0, sd) : within(0.0, sd * std::sqrt(3.0))));
  }
  return e;
}

/// 9.3: mass of a weight against a reference weight in air, deviation from 100 g in mg. Densities in kg/m³.
Example mass_calibration() {
  return {[](In x) { return (x[0] + x[1]) * (1.0 + (x[2] - 1.2) * (1.0 / x[3] - 1.0 / x[4])) - 1e5; },
          {input("reference_mass_mg", D::normal(1e5, 0.050)), input("added_mass_mg", D::normal(1.234, 0.020)),
           input("density_air", D::rectangular(1.10, 1.30)), input("density_weight", D::rectangular(7000.0, 9000.0)),
           input("density_reference", D::rectangular(7950.0, 8050.0))}};
}

/// 9.4: comparison loss X1² + X2² in microwave power meter calibration, u = 0.005 both; in millionths.
Example comparison_loss(const RowInputs& in) {
  Example e;
  e.model = [](In x) { return 1e6 * (x[0] * x[0] + x[1] * x[1]); };
  e.inputs = {input("x1", D::normal(in.number("x1"), 0.005)), input("x2", D::normal(0.0, 0.005))};
  if (const double r = in.number("correlation"); r != 0.0) e.correlations = {{0, 1, r}};
  return e;
}

/// 9.5: gauge block, deviation from 50 mm in nm. Limits that are not known exactly: a rectangular distribution between
/// rectangular limits (6.4.3); the cyclic temperature: an arcsine distribution (6.4.6), as the sine of a phase.
Example gauge_block() {
  const auto blurred = [](double limit, double blur, double first, double second) {
    const double low = -limit + blur * first;  // −limit ± blur
    return low - 2.0 * low * second;
  };
  return {[blurred](In x) {
            const double length = x[0], expansion = x[4], temperature = x[5] + 0.5 * std::sin(x[6]);
            const double expansion_difference = blurred(1e-6, 0.1e-6, x[7], x[8]);
            const double temperature_difference = blurred(0.050, 0.025, x[9], x[10]);
            return length + x[1] + x[2] + x[3] -
                   length * (expansion_difference * temperature + expansion * temperature_difference) - 50e6;
          },
          {input("standard_nm", t_of_scale(50000623.0, 25.0, 18.0)),
           input("difference_nm", t_of_scale(215.0, 6.0, 24.0)), input("random_nm", t_of_scale(0.0, 4.0, 5.0)),
           input("systematic_nm", t_of_scale(0.0, 7.0, 8.0)), input("expansion_per_k", within(11.5e-6, 2e-6)),
           input("temperature_k", D::normal(-0.1, 0.2)), input("phase_rad", within(0.0, 0.5 * std::numbers::pi)),
           input("limit_expansion", within(0.0, 1.0)), input("place_expansion", D::rectangular(0.0, 1.0)),
           input("limit_temperature", within(0.0, 1.0)), input("place_temperature", D::rectangular(0.0, 1.0))},
          {},
          0.99};
}

// ---- JCGM 100:2008 [jcgm100]

/// H.1: the same gauge block after the guide, in nm.
Example end_gauge() {
  return {
      [](In x) { return x[0] + x[1] + x[2] + x[3] - x[0] * (x[6] * x[5] + x[4] * x[7]); },
      {input("standard", D::normal(50000623.0, 25.0), 18.0), input("difference", D::normal(215.0, 5.8), 24.0),
       input("random", D::normal(0.0, 3.9), 5.0), input("systematic", D::normal(0.0, 6.7), 8.0),
       input("expansion", within(11.5e-6, 2e-6)), input("temperature", D::normal(-0.1, 0.41)),
       input("expansion_difference", within(0.0, 1e-6), 50.0), input("temperature_difference", within(0.0, 0.05), 2.0)},
      {},
      0.99};
}

/// H.2: resistance, reactance and impedance from five sets of voltage [V], current [mA] and phase [rad]. `of`: R, X, Z
/// or a sum of two of them, from which their correlation follows.
Example impedance(const RowInputs& in) {
  constexpr std::array<std::array<double, 5>, 3> readings = {{{5.007, 4.994, 5.005, 4.990, 4.999},
                                                              {19.663, 19.639, 19.640, 19.685, 19.678},
                                                              {1.0456, 1.0438, 1.0468, 1.0428, 1.0433}}};
  std::array<double, 3> mean{}, sd{};
  const auto covariance = [&](std::size_t i, std::size_t j) {
    double sum = 0.0;
    for (std::size_t k = 0; k < 5; ++k) sum += (readings[i][k] - mean[i]) * (readings[j][k] - mean[j]);
    return sum / 20.0;
  };
  for (std::size_t i = 0; i < 3; ++i) mean[i] = std::accumulate(readings[i].begin(), readings[i].end(), 0.0) / 5.0;
  for (std::size_t i = 0; i < 3; ++i) sd[i] = std::sqrt(covariance(i, i));
  const std::string of = in.text("of");
  Example e;
  e.model = [of](In x) {
    const double z = x[0] / (1e-3 * x[1]);
    double sum = 0.0;
    if (of.find('R') != std::string::npos) sum += z * std::cos(x[2]);
    if (of.find('X') != std::string::npos) sum += z * std::sin(x[2]);
    if (of.find('Z') != std::string::npos) sum += z;
    return sum;
  };
  e.inputs = {input("voltage_v", D::normal(mean[0], sd[0])), input("current_ma", D::normal(mean[1], sd[1])),
              input("phase_rad", D::normal(mean[2], sd[2]))};
  e.correlations = {{0, 1, covariance(0, 1) / (sd[0] * sd[1])},
                    {0, 2, covariance(0, 2) / (sd[0] * sd[2])},
                    {1, 2, covariance(1, 2) / (sd[1] * sd[2])}};
  return e;
}

/// H.3: straight line y1 + y2 (t − 20 °C) through eleven corrections of a thermometer [°C], each with the standard
/// deviation of the residuals. `of`: y1, y2, y1+y2, or b30, the correction at 30 °C.
Example thermometer(const RowInputs& in) {
  static constexpr std::array<double, 11> t = {21.521, 22.012, 22.512, 23.003, 23.507, 23.999,
                                               24.513, 25.002, 25.503, 26.010, 26.511};
  static constexpr std::array<double, 11> b = {-0.171, -0.169, -0.166, -0.159, -0.164, -0.165,
                                               -0.156, -0.157, -0.159, -0.161, -0.160};
  const auto line = [](In y) {  // by least squares
    double st = 0.0, sy = 0.0, stt = 0.0, sty = 0.0;
    for (std::size_t k = 0; k < t.size(); ++k) {
      const double d = t[k] - 20.0;
      st += d, sy += y[k], stt += d * d, sty += d * y[k];
    }
    const double n = static_cast<double>(t.size()), slope = (n * sty - st * sy) / (n * stt - st * st);
    return std::array<double, 2>{(sy - slope * st) / n, slope};
  };
  const auto best = line(b);
  double squares = 0.0;
  for (std::size_t k = 0; k < t.size(); ++k) {
    const double residual = b[k] - best[0] - best[1] * (t[k] - 20.0);
    squares += residual * residual;
  }
  const double s = std::sqrt(squares / 9.0);
  const std::string of = in.text("of");
  Example e;
  e.model = [of, line](In y) {
    const auto [y1, y2] = line(y);
    return of == "y1" ? y1 : of == "y2" ? y2 : of == "y1+y2" ? y1 + y2 : y1 + 10.0 * y2;
  };
  for (std::size_t k = 0; k < t.size(); ++k)
    e.inputs.push_back(input("b" + std::to_string(k + 1), D::normal(b[k], s), 9.0));
  return e;
}

// ---- JCGM 102:2011 [jcgm102]

/// Modulus and phase of a complex number, u = 0.01 for both parts. `of`: modulus or phase.
Example polar(const RowInputs& in) {
  const bool modulus = in.text("of") == "modulus";
  Example e;
  e.model = [modulus](In x) { return modulus ? std::hypot(x[0], x[1]) : std::atan2(x[1], x[0]); };
  e.inputs = {input("real", D::normal(in.number("real"), 0.01)), input("imaginary", D::normal(0.0, 0.01))};
  if (const double r = in.number("correlation"); r != 0.0) e.correlations = {{0, 1, r}};
  return e;
}

// ---- others

/// ln x of a rectangular x between 0.1 and 1.1 [cox2006].
Example logarithm() {
  return {[](In x) { return std::log(x[0]); }, {input("x", D::rectangular(0.1, 1.1))}};
}

/// Viscosity [mPa s] by a falling ball, example E3 of [possolo2015]: densities in kg/m³, times in s.
Example viscometer() {
  return {
      [](In x) { return x[0] * (x[1] - x[2]) / (x[1] - x[3]) * x[5] / x[4]; },
      {input("calibration_mpa_s", D::normal(4.63, 0.0463)), input("density_ball", D::normal(2217.0, 0.5)),
       input("density_sample", D::normal(1180.0, 0.5)), input("density_calibration", D::normal(810.0, 0.5)),
       input("time_calibration_s", D::normal(36.6, 0.15 * 36.6)), input("time_sample_s", D::normal(61.0, 0.1 * 61.0))}};
}

/// Coefficient of linear expansion [1e-6/K] from lengths [m] and temperatures [K] [possolo2015].
Example expansion() {
  return {[](In x) { return 1e6 * (x[1] - x[0]) / (x[0] * (x[3] - x[2])); },
          {input("l0", D::student_t(1.4999, 0.0001, 3.0)), input("l1", D::student_t(1.5021, 0.0002, 3.0)),
           input("t0", D::student_t(288.15, 0.02, 3.0)), input("t1", D::student_t(373.10, 0.05, 3.0))}};
}

/// Step attenuator [dB], S7 of [ea402], example E11 of [possolo2015]: mismatch, leakage and detector have arcsine
/// distributions, given by the sine of a phase.
Example attenuator() {
  const auto arcsine = [](double sd, double phase) { return std::sqrt(2.0) * sd * std::sin(phase); };
  return {
      [arcsine](In x) {
        return x[0] + x[1] + arcsine(0.0011, x[2]) + arcsine(0.0200, x[3]) + arcsine(0.0017, x[4]) + x[5] - x[6] +
               x[7] - x[8];
      },
      {input("readings", D::student_t(30.040, 0.0091, 3.0)), input("standard", within(0.003, 0.0025 * std::sqrt(3.0))),
       input("detector", within(0.0, 0.5 * std::numbers::pi)), input("mismatch", within(0.0, 0.5 * std::numbers::pi)),
       input("leakage", within(0.0, 0.5 * std::numbers::pi)),
       input("resolution_before", within(0.0, 0.0003 * std::sqrt(3.0))),
       input("resolution_after", within(0.0, 0.0003 * std::sqrt(3.0))), input("drift_before", D::normal(0.0, 0.002)),
       input("drift_after", D::normal(0.0, 0.002))}};
}

/// Thickness [nm] of a film by the same line in film and substrate [hill1976], evaluated by thickness_nm(): length
/// [nm], reference ratio, emission angle [deg], and a ratio or two areas in counts.
Example film_thickness(const RowInputs& in) {
  const bool lognormal = in.text("distribution") == "lognormal";
  const auto positive = [&](const std::string& name) {
    const double mean = in.number(name), sd = mean * in.number(name + "_relative_sd");
    return input(name, lognormal ? D::lognormal(mean, sd) : D::normal(mean, sd));
  };
  Example e;
  e.inputs = {positive("length_nm"), positive("reference_ratio"),
              input("emission_deg", D::normal(in.number("emission_deg"), in.number("emission_sd_deg")))};
  const bool counted = in.has("film_area");
  if (counted) {
    for (const char* name : {"film_area", "substrate_area"})
      e.inputs.push_back(input(name, D::normal(in.number(name), std::sqrt(in.number(name)))));
  } else {
    e.inputs.push_back(input("ratio", D::normal(in.number("ratio"), in.number("ratio_sd"))));
    e.inputs.push_back(input("one", D::constant(1.0)));
  }
  e.block = [](std::span<const std::span<const double>> x, std::span<double> y) {
    std::vector<double> ratio(y.size());
    std::vector<Status> status(y.size());
    for (std::size_t k = 0; k < y.size(); ++k) ratio[k] = x[3][k] / x[4][k];
    thickness_nm({.ratio = ratio, .reference_ratio = x[1], .film_line_length_nm = x[0], .emission_deg = x[2]}, y,
                 status);
  };
  e.model = [block = e.block](In x) {
    std::vector<std::span<const double>> columns;
    for (std::size_t i = 0; i < x.size(); ++i) columns.push_back(x.subspan(i, 1));
    double y = 0.0;
    block(columns, {&y, 1});
    return y;
  };
  return e;
}

Example make_example(const RowInputs& in) {
  const std::string name = in.text("example");
  if (name == "jcgm101-sum") return sum_of_four(in);
  if (name == "jcgm101-mass") return mass_calibration();
  if (name == "jcgm101-comparison-loss") return comparison_loss(in);
  if (name == "jcgm101-gauge-block") return gauge_block();
  if (name == "jcgm100-end-gauge") return end_gauge();
  if (name == "jcgm100-impedance") return impedance(in);
  if (name == "jcgm100-thermometer") return thermometer(in);
  if (name == "jcgm102-polar") return polar(in);
  if (name == "logarithm") return logarithm();
  if (name == "viscometer") return viscometer();
  if (name == "expansion") return expansion();
  if (name == "attenuator") return attenuator();
  if (name == "film") return film_thickness(in);
  throw std::runtime_error("no example " + name);
}

EngineExample evaluate(const Example& e) {
  EngineExample result;
  PropagationOptions options;
  options.coverage_probability = e.coverage_probability;
  result.gum = propagate(e.model, e.inputs, e.correlations, options);
  options.second_order = e.correlations.empty();
  result.second_order = propagate(e.model, e.inputs, e.correlations, options);
  MonteCarloOptions draws;
  draws.coverage_probability = e.coverage_probability;
  result.draws = monte_carlo(e.block ? e.block : block_model(e.model), e.inputs, e.correlations, draws);
  return result;
}

/// u of the sum of two outputs tells their correlation coefficient.
double correlation_of(double both, double a, double b) { return (both * both - a * a - b * b) / (2.0 * a * b); }

double output_correlation(const RowInputs& in) {
  const std::string example = in.text("example"), first = in.text("first"), second = in.text("second");
  const auto u = [&](const std::string& of) {
    const Example e = make_example(RowInputs("example=" + example + ";of=" + of));
    return propagate(e.model, e.inputs, e.correlations).standard_uncertainty;
  };
  return correlation_of(u(first + "+" + second), u(first), u(second));
}

/// Contribution of one input to the first-order uncertainty.
double gum_contribution(const RowInputs& in) {
  const std::string name = in.text("input");
  for (const BudgetRow& row : engine_example(in).gum.budget.rows) {
    if (row.name == name) return row.contribution;
  }
  throw std::runtime_error("the budget has no row " + name);
}

}  // namespace

const EngineExample& engine_example(const RowInputs& inputs) {
  static std::map<std::string, EngineExample> known;
  const std::string key = [&] {
    std::string text;
    for (const char* name : {"example", "distribution", "last_sd", "x1", "correlation", "of", "real", "length_nm",
                             "length_nm_relative_sd", "reference_ratio", "reference_ratio_relative_sd", "emission_deg",
                             "emission_sd_deg", "film_area", "substrate_area", "ratio", "ratio_sd"}) {
      if (inputs.has(name)) text += inputs.text(name);
      text += ';';
    }
    return text;
  }();
  const auto found = known.find(key);
  if (found != known.end()) return found->second;
  return known.emplace(key, evaluate(make_example(inputs))).first->second;
}

const std::map<std::string, std::function<double(const RowInputs&)>>& uncertainty_engine_functions() {
  static const std::map<std::string, std::function<double(const RowInputs&)>> all = {
      {"gum_value", [](const RowInputs& in) { return engine_example(in).gum.value; }},
      {"gum_sd", [](const RowInputs& in) { return engine_example(in).gum.standard_uncertainty; }},
      {"gum_low", [](const RowInputs& in) { return engine_example(in).gum.interval.low; }},
      {"gum_high", [](const RowInputs& in) { return engine_example(in).gum.interval.high; }},
      {"gum_half_width",
       [](const RowInputs& in) {
         return engine_example(in).gum.coverage_factor * engine_example(in).gum.standard_uncertainty;
       }},
      {"gum_degrees_of_freedom",
       [](const RowInputs& in) { return engine_example(in).gum.effective_degrees_of_freedom.value(); }},
      {"gum_contribution", gum_contribution},
      {"gum_correlation", output_correlation},
      {"gum_second_order_sd", [](const RowInputs& in) { return engine_example(in).second_order.standard_uncertainty; }},
      {"gum_second_order_low", [](const RowInputs& in) { return engine_example(in).second_order.interval.low; }},
      {"gum_second_order_high", [](const RowInputs& in) { return engine_example(in).second_order.interval.high; }},
      {"draws_mean", [](const RowInputs& in) { return engine_example(in).draws.mean; }},
      {"draws_sd", [](const RowInputs& in) { return engine_example(in).draws.sd; }},
      {"draws_symmetric_low", [](const RowInputs& in) { return engine_example(in).draws.symmetric.low; }},
      {"draws_symmetric_high", [](const RowInputs& in) { return engine_example(in).draws.symmetric.high; }},
      {"draws_shortest_low", [](const RowInputs& in) { return engine_example(in).draws.shortest.low; }},
      {"draws_shortest_high", [](const RowInputs& in) { return engine_example(in).draws.shortest.high; }},
  };
  return all;
}

}  // namespace pellicle::test
