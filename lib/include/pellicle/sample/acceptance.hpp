#pragma once
/// The cone of directions an analyser takes in.

#include <vector>

namespace pellicle {

/// One direction within the cone.
struct Ray {
  double cos_emission = 1.0;  ///< > 0
  double weight = 1.0;        ///< all weights of a cone sum to 1
};

/// Directions of a circular cone around `emission_deg`, uniform in solid angle, each weighted by cosθ′ (all rays see
/// one patch, and a patch of a thick solid radiates ∝ cosθ′). Rays beyond the horizon give nothing. Gauss–Legendre
/// in both angles; thickness errors from the quadrature stay below 1e-8 for half angles up to 20° and emission up to
/// 60°. A half angle of 0 gives the axis alone.
/// @param half_angle_deg 0 <= … < 45 @throws InputError outside. @cite generated
[[nodiscard]] std::vector<Ray> acceptance_rays(double emission_deg, double half_angle_deg);

}  // namespace pellicle
