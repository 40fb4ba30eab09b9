#include "job/thickness_monte_carlo.hpp"

#include <algorithm>
#include <atomic>
#include <cmath>

#include "pellicle/uncertainty/monte_carlo.hpp"

namespace pellicle::detail {
namespace {

Distribution area_input(const Quantity& q) { return Distribution::truncated_normal(q.value, q.sd()); }

/// Positive quantities keep their sign under any uncertainty.
Distribution positive_input(const Quantity& q) { return Distribution::lognormal(q.value, q.sd()); }

struct Drawn {
  MonteCarlo result;
  std::size_t endless = 0;
};

Drawn draw(const FilmMeasurement& m, const UncertaintyOptions& options, std::uint64_t stream, double coverage_probability) {
  std::vector<ModelInput> inputs;
  const auto add = [&](const std::string& name, const Distribution& distribution) { inputs.push_back({name, distribution}); };
  for (const SignalFactor& f : m.factors) add(f.name, f.is_area ? area_input(f.quantity) : positive_input(f.quantity));
  add(m.substrate_line_length_nm ? kFilmLengthName : kLengthName, positive_input(m.film_line_length_nm));
  if (m.substrate_line_length_nm) add(kSubstrateLengthName, positive_input(*m.substrate_line_length_nm));
  // An angle drawn across the normal is the same angle on its other side; cos does not see the sign.
  add(kEmissionName, Distribution::normal(m.emission_deg.value, m.emission_deg.sd()));

  std::vector<Correlation> correlations;
  const auto position = [&](const std::string& name) {
    return static_cast<std::size_t>(std::find_if(inputs.begin(), inputs.end(), [&](const ModelInput& i) { return i.name == name; }) - inputs.begin());
  };
  for (const NamedCorrelation& c : m.correlations) correlations.push_back({position(c.first), position(c.second), c.coefficient});

  const double cone = m.acceptance_half_angle_deg == 0.0 ? 1.0 : cone_factor(m);
  // Longer than any thickness with an end, so that such draws stand at the end of the order.
  const double endless_nm = 1e6 * m.film_line_length_nm.value;
  std::atomic<std::size_t> endless = 0;
  const BlockModel model = [&](std::span<const std::span<const double>> columns, std::span<double> out) {
    thickness_of_draws(m, columns, cone, out);
    std::size_t endless_here = 0;
    for (double& t : out) {
      if (!std::isinf(t)) continue;
      t = endless_nm;
      ++endless_here;
    }
    endless += endless_here;
  };
  MonteCarloOptions settings;
  settings.draws = options.draws;
  settings.adaptive = options.method == IntervalMethod::adaptive_monte_carlo;
  settings.coverage_probability = coverage_probability;
  settings.seed = options.seed + 0x9E3779B97F4A7C15ULL * stream;  // every result has draws of its own
  return {monte_carlo(model, inputs, correlations, settings), endless};
}

}  // namespace

MonteCarloThickness thickness_by_monte_carlo(const FilmMeasurement& m, const Thickness& gum, const UncertaintyOptions& options,
                                             std::uint64_t stream) {
  const Drawn drawn = draw(m, options, stream, 0.95);
  const MonteCarlo& mc = drawn.result;
  const bool agrees = gum.standard_uncertainty_nm > 0.0 &&
                      compare_intervals({gum.interval_nm.low95, gum.interval_nm.high95}, mc.symmetric, gum.standard_uncertainty_nm, 1).agree;
  MonteCarloThickness result{mc.mean, mc.sd, {mc.symmetric.low, mc.symmetric.high}, mc.draws, mc.rejected, drawn.endless, agrees};
  if (drawn.endless > 0) {
    result.mean_nm = mc.median;
    result.standard_uncertainty_nm = 0.25 * (mc.symmetric.high - mc.symmetric.low);
  }
  return result;
}

double bound_by_monte_carlo(const FilmMeasurement& m, bool upper, const UncertaintyOptions& options, std::uint64_t stream) {
  // 5 % lie beyond either end of a 90 % interval.
  const MonteCarlo mc = draw(m, options, stream, 0.90).result;
  return upper ? mc.symmetric.high : mc.symmetric.low;
}

}  // namespace pellicle::detail
