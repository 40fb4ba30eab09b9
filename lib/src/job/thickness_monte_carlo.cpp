#include "job/thickness_monte_carlo.hpp"

#include <algorithm>
#include <array>
#include <limits>

#include "pellicle/uncertainty/monte_carlo.hpp"

namespace pellicle::detail {
namespace {

/// More inputs than any route has.
constexpr std::size_t kMostInputs = 32;

RandomInput area_input(const Quantity& q) { return {q.value, q.sd(), Shape::truncated_normal}; }

/// Positive quantities keep their sign under any uncertainty.
RandomInput positive_input(const Quantity& q) { return {q.value, q.sd(), Shape::lognormal}; }

}  // namespace

MonteCarloThickness thickness_by_monte_carlo(const FilmMeasurement& m, const Thickness& gum, const UncertaintyOptions& options,
                                             std::uint64_t stream) {
  std::vector<RandomInput> inputs;
  std::vector<std::string> names;
  for (const SignalFactor& f : m.factors) {
    inputs.push_back(f.is_area ? area_input(f.quantity) : positive_input(f.quantity));
    names.push_back(f.name);
  }
  inputs.push_back(positive_input(m.film_line_length_nm));
  names.emplace_back(m.substrate_line_length_nm ? kFilmLengthName : kLengthName);
  if (m.substrate_line_length_nm) {
    inputs.push_back(positive_input(*m.substrate_line_length_nm));
    names.emplace_back(kSubstrateLengthName);
  }
  inputs.push_back({m.emission_deg.value, m.emission_deg.sd(), Shape::normal});
  names.emplace_back(kEmissionName);

  std::vector<Correlation> correlations;
  const auto position = [&](const std::string& name) { return static_cast<std::size_t>(std::find(names.begin(), names.end(), name) - names.begin()); };
  for (const NamedCorrelation& c : m.correlations) correlations.push_back({position(c.first), position(c.second), c.coefficient});

  const double cone = m.acceptance_half_angle_deg == 0.0 ? 1.0 : cone_factor(m);
  const BlockModel model = [&](std::span<const std::span<const double>> columns, std::span<double> out) {
    std::array<double, kMostInputs> draw;
    const std::span<const double> values(draw.data(), columns.size());
    for (std::size_t i = 0; i < out.size(); ++i) {
      for (std::size_t k = 0; k < columns.size(); ++k) draw[k] = columns[k][i];
      out[i] = thickness_of_draw(m, values, cone).value_or(std::numeric_limits<double>::quiet_NaN());
    }
  };
  MonteCarloOptions settings{options.draws, options.seed, stream, options.method == IntervalMethod::adaptive_monte_carlo, false};
  if (settings.adaptive) settings.draws = std::min<std::size_t>(settings.draws, 10'000);
  const MonteCarloResult drawn = propagate_by_monte_carlo(inputs, correlations, model, settings);
  // An angle drawn across the normal is the same angle on its other side; cos does not see the sign.
  return {drawn.mean, drawn.standard_deviation, drawn.symmetric, drawn.draws, drawn.rejected,
          intervals_agree(gum.interval_nm, drawn.symmetric, gum.standard_uncertainty_nm)};
}

}  // namespace pellicle::detail
