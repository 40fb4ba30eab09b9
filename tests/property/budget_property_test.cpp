#include <algorithm>
#include <cmath>
#include <string>
#include <vector>

#include "pellicle/signal/area.hpp"
#include "pellicle/uncertainty/budget.hpp"
#include "property/generators.hpp"
#include "support/close_to.hpp"

using namespace pellicle;
using test::close_to;
using test::holds;
using test::log_uniform;
using test::rel;
using test::uniform;

namespace {

std::vector<UncertainInput> any_inputs() {
  const auto size = *rc::gen::inRange<std::size_t>(1, 8).as("inputs");
  std::vector<UncertainInput> inputs;
  for (std::size_t i = 0; i < size; ++i) {
    const double sign = *rc::gen::element(-1.0, 1.0);
    inputs.push_back({"x" + std::to_string(i), 1.0, *log_uniform(1e-3, 1e3), sign * *log_uniform(1e-3, 1e3),
                      *rc::gen::element(ContributionKind::repeatability, ContributionKind::scale)});
  }
  return inputs;
}

}  // namespace

TEST_SUITE("uncertainty budget") {

TEST_CASE("the order of the inputs does not matter") {
  holds("permutation", [] {
    std::vector<UncertainInput> inputs = any_inputs();
    const Budget b = combine(inputs);
    std::reverse(inputs.begin(), inputs.end());
    const Budget r = combine(inputs);
    RC_ASSERT(static_cast<bool>(close_to(r.standard_uncertainty, b.standard_uncertainty, rel(1e-13))));
    double shares = 0.0;
    for (const BudgetRow& row : b.rows) {
      RC_ASSERT(row.share >= 0.0);
      shares += row.share;
    }
    RC_ASSERT(static_cast<bool>(close_to(shares, 1.0, rel(1e-12))));
    RC_ASSERT(std::is_sorted(b.rows.begin(), b.rows.end(),
                             [](const BudgetRow& x, const BudgetRow& y) { return x.share > y.share; }));
  });
}

TEST_CASE("one more uncertain input never makes a result more certain") {
  holds("monotone", [] {
    std::vector<UncertainInput> inputs = any_inputs();
    const double before = combine(inputs).standard_uncertainty;
    inputs.push_back({"more", 1.0, *log_uniform(1e-6, 1e3), *log_uniform(1e-6, 1e3)});
    RC_ASSERT(combine(inputs).standard_uncertainty >= before);
  });
}

TEST_CASE("two correlated inputs lie between their difference and their sum") {
  holds("cosine rule", [] {
    const double a = *log_uniform(1e-3, 1e3), b = *log_uniform(1e-3, 1e3), r = *uniform(-1.0, 1.0);
    const double u = combine({{"a", 1.0, a, 1.0}, {"b", 1.0, b, 1.0}}, {{0, 1, r}}).standard_uncertainty;
    RC_ASSERT(u <= (a + b) * (1.0 + 1e-12));
    RC_ASSERT(u >= std::abs(a - b) - 1e-7 * (a + b));  // a root of a difference loses half of the digits
  });
}

TEST_CASE("more counts are relatively more certain") {
  holds("Poisson", [] {
    const double counts = *log_uniform(1.0, 1e9), more = counts * *log_uniform(1.001, 100.0);
    const double dwell = *log_uniform(1e-3, 1e3), step = *log_uniform(1e-3, 1.0);
    const CountingConditions c{*uniform(0.0, 1e6), dwell, step};
    for (const AreaUnit unit :
         {AreaUnit::counts, AreaUnit::counts_per_s, AreaUnit::counts_ev, AreaUnit::counts_ev_per_s}) {
      const double per = *counts_per_area(unit, c);
      RC_ASSERT(*counting_uncertainty(more / per, unit, c) / more <
                *counting_uncertainty(counts / per, unit, c) / counts);
      // Whatever the unit, it is the same counts.
      RC_ASSERT(static_cast<bool>(close_to(*counting_uncertainty(counts / per, unit, c) * per,
                                           *counting_uncertainty(counts, AreaUnit::counts, c), rel(1e-12))));
    }
  });
}

}  // TEST_SUITE("uncertainty budget")
