#include "pellicle/signal/area.hpp"

#include <cmath>
#include <string>

#include "pellicle/base/error.hpp"
#include "support/close_to.hpp"

using namespace pellicle;
using test::close_to;
using test::contains;
using test::error_of;
using test::rel;

namespace {

constexpr double kRounding = 1e-14;

CountingConditions conditions(std::optional<double> background, std::optional<double> dwell,
                              std::optional<double> step) {
  return {background, dwell, step};
}

}  // namespace

TEST_SUITE("peak areas") {

TEST_CASE("counted areas spread by the square root of their counts") {
  // Poisson: u² = N + 2B for a background from an equal window [currie1968]. Invented counts.
  CHECK(close_to(*counting_uncertainty(400.0, AreaUnit::counts, {}), 20.0, rel(kRounding)));
  CHECK(close_to(*counting_uncertainty(400.0, AreaUnit::counts, conditions(112.5, {}, {})), 25.0, rel(kRounding)));
}

TEST_CASE("rates and areas over energy are turned back into counts first") {
  // 100 counts/s in 4 s are 400 counts; 40 counts*eV in steps of 0.1 eV are 400 counts; both for the rate over energy.
  CHECK(close_to(*counting_uncertainty(100.0, AreaUnit::counts_per_s, conditions({}, 4.0, {})), 20.0 / 4.0,
                 rel(kRounding)));
  CHECK(
      close_to(*counting_uncertainty(40.0, AreaUnit::counts_ev, conditions({}, {}, 0.1)), 20.0 * 0.1, rel(kRounding)));
  CHECK(close_to(*counting_uncertainty(10.0, AreaUnit::counts_ev_per_s, conditions({}, 4.0, 0.1)), 20.0 * 0.1 / 4.0,
                 rel(kRounding)));
  CHECK(close_to(*counting_uncertainty(10.0, AreaUnit::counts_ev_per_s, conditions(112.5, 4.0, 0.1)), 25.0 * 0.1 / 4.0,
                 rel(kRounding)));
  CHECK(close_to(*counts_per_area(AreaUnit::counts_ev_per_s, conditions({}, 4.0, 0.1)), 40.0, rel(kRounding)));
}

TEST_CASE("without dwell or step there are no counts to reckon with") {
  CHECK_FALSE(counting_uncertainty(100.0, AreaUnit::counts_per_s, {}).has_value());
  CHECK_FALSE(counting_uncertainty(100.0, AreaUnit::counts_ev, conditions({}, 4.0, {})).has_value());
  CHECK_FALSE(counting_uncertainty(100.0, AreaUnit::counts_ev_per_s, conditions({}, 4.0, {})).has_value());
  CHECK_FALSE(counting_uncertainty(100.0, AreaUnit::counts_ev_per_s, conditions({}, {}, 0.1)).has_value());
  CHECK_FALSE(counting_uncertainty(100.0, AreaUnit::arbitrary, conditions(1.0, 4.0, 0.1)).has_value());
  CHECK_FALSE(counting_uncertainty(100.0, AreaUnit::counts_per_s, conditions({}, 0.0, {})).has_value());
}

TEST_CASE("an area of nothing is uncertain by one count") {
  CHECK(*counting_uncertainty(0.0, AreaUnit::counts, {}) == 1.0);
  CHECK(*counting_uncertainty(-5.0, AreaUnit::counts, {}) == 1.0);
  CHECK(close_to(*counting_uncertainty(-5.0, AreaUnit::counts, conditions(50.0, {}, {})), 10.0, rel(kRounding)));
  CHECK(close_to(*counting_uncertainty(0.0, AreaUnit::counts_per_s, conditions({}, 4.0, {})), 0.25, rel(kRounding)));
}

TEST_CASE("units are known by the names of the run file") {
  for (const AreaUnit unit : {AreaUnit::counts, AreaUnit::counts_per_s, AreaUnit::counts_ev, AreaUnit::counts_ev_per_s,
                              AreaUnit::arbitrary}) {
    CHECK(area_unit(area_unit_name(unit)) == unit);
  }
  for (const std::string name : {"", "Counts", "cps", "counts/eV"}) {
    const auto error = error_of<InputError>([&] { (void)area_unit(name); });
    for (const std::string known : {"counts", "counts/s", "counts*eV", "counts*eV/s", "arbitrary"})
      CHECK(contains(error.hint(), known));
  }
}

}  // TEST_SUITE("peak areas")
