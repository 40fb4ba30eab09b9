#include "pellicle/sample/acceptance.hpp"

#include <cmath>
#include <numbers>

#include <boost/math/quadrature/gauss.hpp>

#include "pellicle/base/constants.hpp"
#include "pellicle/base/error.hpp"
#include "pellicle/base/number.hpp"
#include "pellicle/sample/emission.hpp"

namespace pellicle {
namespace {

/// Nodes and weights of Gauss–Legendre on [low, high], handed to `use(position, weight)`.
template <typename Use>
void gauss_nodes(double low, double high, Use&& use) {
  using Rule = boost::math::quadrature::gauss<double, 20>;
  const double half = 0.5 * (high - low);
  const double middle = 0.5 * (high + low);
  for (std::size_t i = 0; i < Rule::abscissa().size(); ++i) {
    const double shift = half * Rule::abscissa()[i];
    const double weight = half * Rule::weights()[i];
    use(middle + shift, weight);
    if (shift != 0.0) use(middle - shift, weight);
  }
}

}  // namespace

std::vector<Ray> acceptance_rays(double emission_deg, double half_angle_deg) {
  check_emission_deg(emission_deg);
  if (!(half_angle_deg >= 0.0 && half_angle_deg < 45.0)) {
    throw InputError("acceptance_half_angle_deg", number_text(half_angle_deg) + " is out of range", "expected 0 <= acceptance_half_angle_deg < 45");
  }
  const double theta = emission_deg * kRadianPerDegree;
  if (half_angle_deg == 0.0) return {{std::cos(theta), 1.0}};
  std::vector<Ray> rays;
  double sum = 0.0;
  gauss_nodes(0.0, half_angle_deg * kRadianPerDegree, [&](double polar, double polar_weight) {
    gauss_nodes(0.0, std::numbers::pi, [&](double azimuth, double azimuth_weight) {
      const double cosine = std::cos(theta) * std::cos(polar) + std::sin(theta) * std::sin(polar) * std::cos(azimuth);
      if (!(cosine > 0.0)) return;
      const double weight = polar_weight * azimuth_weight * std::sin(polar) * cosine;
      rays.push_back({cosine, weight});
      sum += weight;
    });
  });
  for (Ray& ray : rays) ray.weight /= sum;
  return rays;
}

}  // namespace pellicle
