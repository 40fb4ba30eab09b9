#pragma once
/// Layers above the film: what they do to the lines, and its correction.

#include <array>
#include <optional>
#include <string>
#include <vector>

#include "pellicle/job/thickness_job.hpp"

namespace pellicle::detail {

/// One layer above the film as the lines of a route see it.
struct OverlyingLayer {
  std::string layer;
  std::optional<Quantity> thickness_nm;   ///< as stated; nothing: taken from the contamination route, or not known
  Quantity film_line_length_nm, substrate_line_length_nm;  ///< attenuation lengths in that layer
  bool one_formula = false;               ///< both lengths are predicted and share their error
};

/// Thickness of the contamination of one spot, with what repeats and what is common to all spots.
struct ContaminationThickness {
  double value_nm = 0.0;
  double repeatability_nm = 0.0;
  double scale_nm = 0.0;
};

/// The layers above the film whose attenuation does not cancel for this route.
[[nodiscard]] std::vector<OverlyingLayer> overlying_layers(const Run& run, const ThicknessRoute& route);

/// The factors that take their attenuation out of r: exp(k_f − k_s) for a ratio, exp(k) for one line,
/// k = d/(L cosθ). The second factor is 1 and holds what repeats: the areas a measured d comes from. Nothing when a
/// thickness is not known. @cite smith2005
[[nodiscard]] std::optional<std::array<SignalFactor, 2>> overlying_correction(const std::vector<OverlyingLayer>& layers,
                                                                              ThicknessMethod method, double emission_deg,
                                                                              const std::optional<ContaminationThickness>& contamination);

}  // namespace pellicle::detail
