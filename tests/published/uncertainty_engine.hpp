#pragma once
/// Published worked examples of uncertainty evaluation, computed with pellicle's own engine: the quantities of
/// reference/published/uncertainty_engine.csv.

#include <functional>
#include <map>
#include <string>

#include "pellicle/uncertainty/monte_carlo.hpp"
#include "support/check_rows.hpp"

namespace pellicle::test {

/// Quantity to the function that computes it from the inputs of a row. Input `example` names one of the examples of
/// uncertainty_engine.cpp, which holds its model; other inputs choose a variant of it.
[[nodiscard]] const std::map<std::string, std::function<double(const RowInputs&)>>& uncertainty_engine_functions();

/// A worked example, evaluated in every way.
struct EngineExample {
  Propagation gum;
  Propagation second_order;  ///< as gum for correlated inputs
  MonteCarlo draws;
};

/// Evaluates an example, once for all rows that ask for it.
[[nodiscard]] const EngineExample& engine_example(const RowInputs& inputs);

}  // namespace pellicle::test
