#pragma once
/// Which attenuation length a line gets in a layer: given, from a calibrated set, or predicted.

#include <string>

#include "pellicle/job/thickness_job.hpp"

namespace pellicle::detail {

/// @throws InputError when the set of the run holds no such length; DomainError when none can be predicted
[[nodiscard]] LengthUsed choose_length(const Run& run, const Line& line, const std::string& layer, double energy_ev);

}  // namespace pellicle::detail
