#include "job/overlying.hpp"

#include <cmath>

#include "job/length_choice.hpp"
#include "pellicle/base/constants.hpp"

namespace pellicle::detail {

std::vector<OverlyingLayer> overlying_layers(const Run& run, const ThicknessRoute& route) {
  std::vector<OverlyingLayer> layers;
  const bool cancels = route.method == ThicknessMethod::ratio && !route.substrate_length;
  if (cancels || route.contamination) return layers;
  const std::size_t film = run.sample.position(route.layer);
  for (std::size_t i = 0; i < film; ++i) {
    const Layer& layer = run.sample.layers[i];
    OverlyingLayer above{layer.name, layer.thickness_nm, 0.0, 0.0};
    std::string film_formula, substrate_formula;
    const auto length = [&](std::size_t line, std::string& formula) {
      const LengthUsed used = choose_length(run, run.lines[line], layer.name, run.lines[line].kinetic_energy_ev);
      formula = used.formula;
      return used.length_nm;
    };
    if (route.film_line) above.film_line_length_nm = length(*route.film_line, film_formula);
    if (route.substrate_line) above.substrate_line_length_nm = length(*route.substrate_line, substrate_formula);
    above.one_formula = !film_formula.empty() && film_formula == substrate_formula;
    layers.push_back(std::move(above));
  }
  return layers;
}

std::optional<std::array<SignalFactor, 2>> overlying_correction(const std::vector<OverlyingLayer>& layers, ThicknessMethod method,
                                                                double emission_deg,
                                                                const std::optional<ContaminationThickness>& contamination) {
  const double cosine = std::cos(emission_deg * kRadianPerDegree);
  double exponent = 0.0, scale_variance = 0.0, repeat_variance = 0.0;
  for (std::size_t i = 0; i < layers.size(); ++i) {
    const OverlyingLayer& layer = layers[i];
    const bool measured = !layer.thickness_nm && i == 0 && contamination;
    if (!layer.thickness_nm && !measured) return std::nullopt;
    const double d = measured ? contamination->value_nm : layer.thickness_nm->value;
    const double d_scale = measured ? contamination->scale_nm : layer.thickness_nm->sd();
    const auto reciprocal = [&](const Quantity& length) { return length.value > 0.0 ? 1.0 / (length.value * cosine) : 0.0; };
    const double film = method == ThicknessMethod::substrate_line ? 0.0 : reciprocal(layer.film_line_length_nm);
    const double substrate = method == ThicknessMethod::ratio         ? -reciprocal(layer.substrate_line_length_nm)
                             : method == ThicknessMethod::substrate_line ? reciprocal(layer.substrate_line_length_nm)
                                                                         : 0.0;
    const double slope = film + substrate;
    exponent += d * slope;
    scale_variance += std::pow(d_scale * slope, 2);
    if (measured) repeat_variance += std::pow(contamination->repeatability_nm * slope, 2);
    const auto relative = [](const Quantity& length) { return length.value > 0.0 ? length.sd() / length.value : 0.0; };
    const double by_film = d * film * relative(layer.film_line_length_nm);
    const double by_substrate = d * substrate * relative(layer.substrate_line_length_nm);
    // One formula for both lengths: an error of it moves both together and mostly cancels.
    scale_variance += layer.one_formula ? std::pow(by_film + by_substrate, 2) : by_film * by_film + by_substrate * by_substrate;
  }
  const double value = std::exp(exponent);
  return std::array<SignalFactor, 2>{{
      {"contamination_correction", Quantity(value, value * std::sqrt(scale_variance)), 1.0, ContributionKind::scale},
      {"contamination_of_spot", Quantity(1.0, std::sqrt(repeat_variance)), 1.0, ContributionKind::repeatability},
  }};
}

}  // namespace pellicle::detail
