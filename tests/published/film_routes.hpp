#pragma once
/// The quantities of reference/published/routes.csv: thickness by one line, of contamination, through a cone, with
/// computed reference ratios, at the limits of detection.

#include <functional>
#include <map>
#include <string>

#include "support/check_rows.hpp"

namespace pellicle::test {

/// Quantity to the function that computes it from the inputs of a row.
[[nodiscard]] const std::map<std::string, std::function<double(const RowInputs&)>>& film_route_functions();

}  // namespace pellicle::test
