// Whether stated 95 % intervals hold the truth in 95 of 100 cases. Samples, lengths, reference ratios, angles and counts
// are drawn here with a generator of their own; the program is told only what an analyst would know.
//
// The truth of a scale is drawn from the distribution that is stated for it (lognormal, mean and standard deviation as
// stated), the reduced thickness evenly: then the interval of a right program holds the truth as often as it says.

#include <algorithm>
#include <cmath>
#include <iostream>
#include <numbers>
#include <random>
#include <vector>

#include "pellicle/job/thickness_job.hpp"
#include "support/close_to.hpp"
#include "support/sample_run.hpp"

using namespace pellicle;
using test::area;
using test::line;

namespace {

#if defined(__SANITIZE_ADDRESS__) || defined(__SANITIZE_THREAD__)
constexpr std::size_t kMeasurements = 400;  // instrumented, the full number takes minutes
#else
constexpr std::size_t kMeasurements = 5000;
#endif
constexpr double kFullSlackPercent = 1.0;

class Nature {
 public:
  explicit Nature(unsigned seed) : engine_(seed) {}
  double uniform(double low, double high) {
    return low + (high - low) * (static_cast<double>(engine_() >> 11U) + 0.5) * 0x1p-53;
  }
  double normal() {  // Box and Muller [box1958]
    return std::sqrt(-2.0 * std::log(uniform(0.0, 1.0))) * std::cos(2.0 * std::numbers::pi * uniform(0.0, 1.0));
  }
  /// Mean and standard deviation of the quantity itself.
  double lognormal(double mean, double sd) {
    const double v = std::log1p(sd * sd / (mean * mean));
    return mean * std::exp(std::sqrt(v) * normal() - 0.5 * v);
  }
  /// Net counts: those of peak and background less those of an equal window beside it.
  double net_counts(double net, double background) {
    return static_cast<double>(poisson(net + background)) - static_cast<double>(background > 0.0 ? poisson(background) : 0);
  }

 private:
  long poisson(double mean) { return std::poisson_distribution<long>(mean)(engine_); }
  std::mt19937_64 engine_;
};

/// How often intervals held the truth.
struct Hits {
  std::size_t all = 0, held = 0, below = 0, above = 0;
  void count(double truth, const Interval& interval) {
    ++all;
    held += truth >= interval.low95 && truth <= interval.high95 ? 1 : 0;
    below += truth < interval.low95 ? 1 : 0;
    above += truth > interval.high95 ? 1 : 0;
  }
  /// One per cent for the full number, else three standard deviations of the share that so few cases leave uncertain.
  [[nodiscard]] double slack_percent() const {
    return kMeasurements == 5000 ? kFullSlackPercent : 300.0 * std::sqrt(0.95 * 0.05 / static_cast<double>(all));
  }
  [[nodiscard]] double percent() const { return 100.0 * static_cast<double>(held) / static_cast<double>(all); }
};

std::ostream& operator<<(std::ostream& out, const Hits& h) {
  return out << h.percent() << " % of " << h.all << " (" << h.below << " below, " << h.above << " above)";
}

/// What is stated of a sample, and how its truth is made.
struct Plan {
  double film_length_nm, film_length_sd, substrate_length_nm, substrate_length_sd;  // 0: one line
  double reference_ratio, reference_ratio_sd, emission_deg, emission_sd_deg;
  double bare_counts, film_background, substrate_background;
};

/// Silica on silicon by one line, or hafnia on silicon by two. Invented numbers.
Run stated(const Plan& p) {
  Run run;
  run.place = "run.toml";
  run.tables = {"areas.csv"};
  run.source = photon_source("Al Ka");
  run.emission_deg = p.emission_deg;
  run.emission_sd_deg = p.emission_sd_deg;
  const bool one_line = p.substrate_length_nm == 0.0;
  run.sample.layers.push_back({"film", catalogue_material(one_line ? "SiO2" : "hfo2")});
  run.sample.substrate = catalogue_material("Si");
  run.lines = {line(run, "f", one_line ? "Si 2p" : "Hf 4f", "film"), line(run, "s", "Si 2p", "substrate")};
  run.lines[0].length_nm["film"] = Quantity(p.film_length_nm, p.film_length_sd);
  if (!one_line) run.lines[1].length_nm["film"] = Quantity(p.substrate_length_nm, p.substrate_length_sd);
  run.references = {{"f", "s", Quantity(p.reference_ratio, p.reference_ratio_sd)}};
  run.area_unit = AreaUnit::counts;
  run.uncertainty.method = IntervalMethod::monte_carlo;
  run.uncertainty.draws = 4'000;  // ends good to a twentieth of a standard deviation, which coverage does not feel
  return run;
}

/// Adds one measured spot of a sample that nature makes; returns its true thickness [nm].
double measure(Run& run, const Plan& p, Nature& nature, double reduced_thickness) {
  const double film_length = nature.lognormal(p.film_length_nm, p.film_length_sd);
  const double substrate_length =
      p.substrate_length_nm == 0.0 ? film_length : nature.lognormal(p.substrate_length_nm, p.substrate_length_sd);
  const double reference = nature.lognormal(p.reference_ratio, p.reference_ratio_sd);
  const double cosine = std::cos((p.emission_deg + p.emission_sd_deg * nature.normal()) * std::numbers::pi / 180.0);
  const double t = reduced_thickness * film_length;
  const double film = p.bare_counts * reference * (1.0 - std::exp(-t / (film_length * cosine)));
  const double substrate = p.bare_counts * std::exp(-t / (substrate_length * cosine));
  const std::string spot = std::to_string(run.areas.size() / 2);
  run.areas.push_back(area(spot, "f", nature.net_counts(film, p.film_background)));
  run.areas.push_back(area(spot, "s", nature.net_counts(substrate, p.substrate_background)));
  run.areas[run.areas.size() - 2].counting.background_counts = p.film_background;
  run.areas.back().counting.background_counts = p.substrate_background;
  return t;
}

}  // namespace

TEST_SUITE("coverage of intervals") {

TEST_CASE("ninety-five of a hundred intervals hold the truth by Monte Carlo and by the GUM") {
  Nature nature(20240605);
  Hits gum, drawn;
  const std::vector<Plan> plans = {
      {3.4, 0.34, 0.0, 0.0, 0.93, 0.05, 34.0, 1.0, 20000.0, 3000.0, 3000.0},   // one line, length 10 %
      {2.8, 0.05, 0.0, 0.0, 0.70, 0.10, 0.0, 1.0, 5000.0, 1000.0, 1000.0},     // one line, reference ratio 14 %
      {2.4, 0.24, 1.9, 0.19, 4.0, 0.40, 45.0, 1.0, 200000.0, 5000.0, 5000.0},   // two lines, 10 % each
      {1.6, 0.08, 2.4, 0.12, 1.5, 0.15, 20.0, 2.0, 50000.0, 9000.0, 9000.0}};  // two lines, ϱ below one
  for (const Plan& plan : plans) {
    Run run = stated(plan);
    std::vector<double> truth;
    for (std::size_t i = 0; i < kMeasurements / plans.size(); ++i) truth.push_back(measure(run, plan, nature, nature.uniform(0.3, 2.5)));
    const ThicknessResults all = run_thickness(run);
    REQUIRE(all.results.size() == truth.size());
    Hits gum_here, drawn_here;
    for (std::size_t i = 0; i < truth.size(); ++i) {
      const ThicknessResult& r = all.results[i];
      REQUIRE_MESSAGE(r.thickness.has_value(), r.failure);
      REQUIRE(r.monte_carlo.has_value());
      for (Hits* h : {&gum, &gum_here}) h->count(truth[i], r.thickness->interval_nm);
      for (Hits* h : {&drawn, &drawn_here}) h->count(truth[i], r.monte_carlo->interval_nm);
    }
    std::cout << "  one plan: GUM " << gum_here << ", Monte Carlo " << drawn_here << '\n';
  }
  std::cout << "coverage: GUM " << gum << ", Monte Carlo " << drawn << '\n';
  for (const Hits& hits : {gum, drawn}) {
    CHECK(hits.percent() >= 95.0 - hits.slack_percent());
    CHECK(hits.percent() <= 95.0 + hits.slack_percent());
  }
}

TEST_CASE("intervals of single lines hold the truth") {
  // Reference areas are normal, as stated (2 %); the length 10 %, lognormal. The intervals of the GUM are symmetric and
  // the truth is not: it leaves them above twice as often as below, but as often as it should in all.
  Nature nature(20240607);
  const double length = 2.5, cosine = 0.5 * std::sqrt(3.0);
  for (const bool film : {true, false}) {
    Run run;
    run.place = "run.toml";
    run.tables = {"areas.csv"};
    run.source = photon_source("Al Ka");
    run.emission_deg = 30.0;
    run.emission_sd_deg = 1.0;
    run.method = film ? ThicknessMethod::film_line : ThicknessMethod::substrate_line;
    run.sample.layers.push_back({"film", catalogue_material("SiO2")});
    run.sample.substrate = catalogue_material("Si");
    run.lines = {line(run, "l", "Si 2p", film ? "film" : "substrate")};
    run.lines[0].length_nm["film"] = Quantity(length, 0.1 * length);
    run.lines[0].reference_area = Quantity(40000.0, 800.0);
    run.area_unit = AreaUnit::counts;
    run.uncertainty.method = IntervalMethod::monte_carlo;
    run.uncertainty.draws = 4'000;
    std::vector<double> truth;
    for (std::size_t i = 0; i < kMeasurements / 2; ++i) {
      const double x = nature.uniform(0.3, 2.5), true_length = nature.lognormal(length, 0.1 * length);
      const double true_cosine = std::cos((30.0 + nature.normal()) * std::numbers::pi / 180.0);
      const double rest = std::exp(-x * cosine / true_cosine);
      const double counts = (40000.0 + 800.0 * nature.normal()) * (film ? 1.0 - rest : rest);
      truth.push_back(x * true_length * cosine);
      run.areas.push_back(area(std::to_string(i), "l", nature.net_counts(counts, 3000.0)));
      run.areas.back().counting.background_counts = 3000.0;
    }
    const ThicknessResults all = run_thickness(run);
    Hits gum, drawn;
    for (std::size_t i = 0; i < truth.size(); ++i) {
      const ThicknessResult& r = all.results[i];
      if (r.bound) continue;
      REQUIRE_MESSAGE(r.thickness.has_value(), r.failure);
      gum.count(truth[i], r.thickness->interval_nm);
      drawn.count(truth[i], r.monte_carlo->interval_nm);
    }
    std::cout << (film ? "film" : "substrate") << " line alone: Monte Carlo " << drawn << "; GUM " << gum << '\n';
    for (const Hits& hits : {gum, drawn}) CHECK(std::abs(hits.percent() - 95.0) <= hits.slack_percent());
  }
}

TEST_CASE("intervals and bounds hold the truth near detection") {
  // The area of one line is anything from nothing to three times its detection limit, 2.71 + 4.65 √B counts
  // [currie1968]; the other is strong. A result is a two-sided interval, or a one-sided bound where the line is not
  // seen. The range must begin at nothing: a bound speaks of all that may hide below detection, and would look too
  // tight to one who knows that something strong is there.
  Nature nature(20240606);
  const Plan plan = {3.4, 0.17, 0.0, 0.0, 0.93, 0.05, 0.0, 1.0, 20000.0, 1000.0, 1000.0};
  const double limit = 2.71 + 4.65 * std::sqrt(1000.0);
  for (const bool film : {true, false}) {
    Run run = stated(plan);
    std::vector<double> truth;
    for (std::size_t i = 0; i < kMeasurements / 2; ++i) {
      const double share = nature.uniform(0.0, 3.0) * limit / plan.bare_counts;
      truth.push_back(measure(run, plan, nature, film ? -std::log1p(-share / plan.reference_ratio) : -std::log(share)));
    }
    const ThicknessResults all = run_thickness(run);
    Hits whole, gum, drawn, bounds;
    for (std::size_t i = 0; i < truth.size(); ++i) {
      const ThicknessResult& r = all.results[i];
      if (r.bound) {
        CHECK(r.bound->upper == film);
        const Interval one_sided = film ? Interval{0.0, r.bound->at95_nm} : Interval{r.bound->at95_nm, 1e9};
        bounds.count(truth[i], one_sided);
        whole.count(truth[i], one_sided);
      } else {
        REQUIRE_MESSAGE(r.thickness.has_value(), r.failure);
        gum.count(truth[i], r.thickness->interval_nm);
        drawn.count(truth[i], r.monte_carlo->interval_nm);
        whole.count(truth[i], r.monte_carlo->interval_nm);
      }
    }
    std::cout << "near detection of the " << (film ? "film" : "substrate") << ": all " << whole << "; Monte Carlo " << drawn << "; GUM " << gum
              << "; bounds " << bounds << '\n';
    // Fewer cases fall here, so two per cent of slack. Bounds alone are fewer still, and hold the truth more often where
    // other uncertainties are added to them.
    for (const Hits& hits : {whole, drawn, gum, bounds}) CHECK(hits.percent() >= 94.0 - hits.slack_percent());
  }
}

}  // TEST_SUITE("coverage of intervals")
