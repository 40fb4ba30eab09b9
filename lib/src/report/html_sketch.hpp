#pragma once

#include <string>

#include "pellicle/sample/stack.hpp"

namespace pellicle::detail {

/// SVG of the layers and of the two ways to count the angle of the electrons. Not to scale.
[[nodiscard]] std::string geometry_sketch(const Stack& sample);

}  // namespace pellicle::detail
