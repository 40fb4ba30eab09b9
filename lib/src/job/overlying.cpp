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
    const auto length = [&](std::size_t line) {
      return choose_length(run, run.lines[line], layer.name, run.lines[line].kinetic_energy_ev).length_nm;
    };
    if (route.film_line) above.film_line_length_nm = length(*route.film_line);
    if (route.substrate_line) above.substrate_line_length_nm = length(*route.substrate_line);
    layers.push_back(std::move(above));
  }
  return layers;
}

std::optional<SignalFactor> overlying_correction(const std::vector<OverlyingLayer>& layers, ThicknessMethod method, double emission_deg,
                                                 const std::optional<Quantity>& contamination_nm) {
  const double cosine = std::cos(emission_deg * kRadianPerDegree);
  double exponent = 0.0, variance = 0.0;
  for (std::size_t i = 0; i < layers.size(); ++i) {
    const OverlyingLayer& layer = layers[i];
    const std::optional<Quantity> d = layer.thickness_nm ? layer.thickness_nm : i == 0 ? contamination_nm : std::nullopt;
    if (!d) return std::nullopt;
    const auto reciprocal = [&](const Quantity& length) { return length.value > 0.0 ? 1.0 / (length.value * cosine) : 0.0; };
    const double film = method == ThicknessMethod::substrate_line ? 0.0 : reciprocal(layer.film_line_length_nm);
    const double substrate = method == ThicknessMethod::ratio         ? -reciprocal(layer.substrate_line_length_nm)
                             : method == ThicknessMethod::substrate_line ? reciprocal(layer.substrate_line_length_nm)
                                                                         : 0.0;
    const double slope = film + substrate;
    // One formula predicts both lengths, so an error of theirs scales the whole exponent.
    const Quantity& length = method == ThicknessMethod::substrate_line ? layer.substrate_line_length_nm : layer.film_line_length_nm;
    exponent += d->value * slope;
    variance += std::pow(d->sd() * slope, 2) + std::pow(d->value * slope * length.sd() / length.value, 2);
  }
  const double value = std::exp(exponent);
  return SignalFactor{"contamination_correction", Quantity(value, value * std::sqrt(variance)), 1.0, ContributionKind::repeatability};
}

}  // namespace pellicle::detail
