#pragma once
/// Runs from the text of a run file and of its area table, all the way to thicknesses.

#include <doctest/doctest.h>

#include <cmath>
#include <numbers>
#include <string>

#include "pellicle/io/run_file.hpp"
#include "pellicle/job/thickness_job.hpp"
#include "support/scratch_folder.hpp"

namespace pellicle::test {

inline Run run_from(const std::string& toml, const std::string& areas) {
  const ScratchFolder folder;
  folder.write("areas.csv", areas);
  return parse_run(toml, folder.file("run.toml"));
}

inline ThicknessResults thicknesses(const std::string& toml, const std::string& areas) {
  return run_thickness(run_from(toml, areas));
}

/// The result that must have a thickness; the test ends with its reason where it has none.
inline const Thickness& thickness_at(const ThicknessResults& all, std::size_t result) {
  REQUIRE(result < all.results.size());
  REQUIRE_MESSAGE(all.results[result].thickness.has_value(), all.results[result].failure);
  return *all.results[result].thickness;
}

/// Thickness of the only result.
inline double only_thickness_nm(const ThicknessResults& all) {
  REQUIRE(all.results.size() == 1);
  return thickness_at(all, 0).value_nm;
}

/// Contribution of an input to the uncertainty; −1 when the budget has no such row.
inline double contribution_nm(const Thickness& thickness, const std::string& name) {
  for (const BudgetRow& row : thickness.budget.rows) {
    if (row.name == name) return row.contribution;
  }
  return -1.0;
}

inline double cosine_of_deg(double degrees) { return std::cos(degrees * std::numbers::pi / 180.0); }
inline double sine_of_deg(double degrees) { return std::sin(degrees * std::numbers::pi / 180.0); }

}  // namespace pellicle::test
