// Worked examples of uncertainty evaluation: what no single number of reference/published/uncertainty_engine.csv shows.

#include "published/uncertainty_engine.hpp"

#include <set>
#include <string>

#include "support/close_to.hpp"

using namespace pellicle;
using test::CheckRow;
using test::close_to;
using test::engine_example;
using test::RowInputs;

namespace {

const std::string kTable = test::source_folder() + "/reference/published/uncertainty_engine.csv";

/// Whether the interval after the GUM holds, by the shortest interval of the draws as in the examples.
bool validated(const RowInputs& inputs, bool second_order, int digits) {
  const auto& e = engine_example(inputs);
  const Propagation& gum = second_order ? e.second_order : e.gum;
  return compare_intervals(gum.interval, e.draws.shortest, gum.standard_uncertainty, digits).agree;
}

}  // namespace

TEST_SUITE("uncertainty engine") {

TEST_CASE("every row of the worked examples is met and read in full") {
  std::size_t published = 0, rows = 0;
  std::set<std::string> examples;
  for (const CheckRow& row : test::read_check_rows(kTable)) {
    INFO(row.name());
    const auto function = test::uncertainty_engine_functions().find(row.quantity);
    REQUIRE(function != test::uncertainty_engine_functions().end());
    CHECK(close_to(function->second(row.inputs), row.expected, row.tolerance, row.name()));
    examples.insert(row.inputs.text("example"));
    published += row.mark != "generated" ? 1 : 0;
    ++rows;
  }
  CHECK(rows >= 100);
  CHECK(published >= 60);
  CHECK(examples.size() == 13);
}

TEST_CASE("draws validate the guide where the published examples say so and not where they do not") {
  // JCGM 101:2008, 9.2.2, 9.2.4, 9.3 (table 5) and 9.4 [jcgm101]; verdicts from memory.
  CHECK(validated(RowInputs("example=jcgm101-sum;distribution=normal"), false, 2));
  CHECK_FALSE(validated(RowInputs("example=jcgm101-sum;distribution=rectangular;last_sd=10"), false, 2));
  const RowInputs mass("example=jcgm101-mass");
  CHECK_FALSE(validated(mass, false, 1));
  CHECK(validated(mass, true, 1));
  CHECK_FALSE(validated(RowInputs("example=jcgm101-comparison-loss;x1=0.01;correlation=0"), false, 1));
  CHECK_FALSE(validated(RowInputs("example=logarithm"), false, 1));
}

TEST_CASE("the table of differences of the mass calibration is met") {
  // JCGM 101:2008, table 5 [jcgm101], from memory: first order 0.0451 and 0.0430, second order 0.0036 and 0.0015,
  // tolerance 0.005. Ends of the shortest interval are good to 0.0023.
  const auto& e = engine_example(RowInputs("example=jcgm101-mass"));
  const auto first = compare_intervals(e.gum.interval, e.draws.shortest, e.gum.standard_uncertainty, 1);
  CHECK(close_to(first.tolerance, 0.005, test::rel(1e-12)));
  CHECK(close_to(first.low_difference, 0.0451, test::abs(0.0023)));
  CHECK(close_to(first.high_difference, 0.0430, test::abs(0.0023)));
  const auto second =
      compare_intervals(e.second_order.interval, e.draws.shortest, e.second_order.standard_uncertainty, 1);
  CHECK(close_to(second.low_difference, 0.0036, test::abs(0.0023)));
  CHECK(close_to(second.high_difference, 0.0015, test::abs(0.0023)));
}

TEST_CASE("no draw of the worked examples is without a value") {
  for (const CheckRow& row : test::read_check_rows(kTable)) {
    if (row.quantity.starts_with("draws_")) CHECK_MESSAGE(engine_example(row.inputs).draws.rejected == 0, row.name());
  }
}

}  // TEST_SUITE("uncertainty engine")
