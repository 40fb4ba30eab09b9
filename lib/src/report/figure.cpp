#include "pellicle/report/figure.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <cmath>
#include <map>
#include <set>
#include <tuple>

#include "pellicle/base/error.hpp"
#include "pellicle/base/number.hpp"
#include "report/wording.hpp"

namespace pellicle {
namespace {

using detail::counted;
using detail::input_words;
using detail::lines_words;
using detail::route_words;
using detail::spot_words;

/// Results drawn one by one; more would be a blot in which nothing can be read.
constexpr std::size_t kMostPoints = 400;
/// Results with an interval each; more would run into one another.
constexpr std::size_t kMostIntervals = 60;
/// Groups that stand for more results than that.
constexpr std::size_t kGroups = 200;
/// Spots named on the axis; more are counted.
constexpr std::size_t kMostNames = 40;
constexpr double kNormal95 = 1.959963984540054;
/// A ring is an outlier, a cross has no thickness.
constexpr std::array kMarkers = {Marker::disc, Marker::square, Marker::triangle, Marker::diamond};

/// Where every result stands on the horizontal axis.
struct Places {
  bool by_angle = false;
  std::vector<std::size_t> members;  ///< results drawn
  std::vector<double> position;      ///< of each member: the angle, or the count of its measurement from 0
  std::vector<std::string> names;    ///< of the measurements
  std::size_t count = 0;             ///< measurements
};

Places places_of(const Run& run, const ThicknessResults& all, std::optional<std::size_t> route) {
  Places places;
  std::set<double> angles;
  const ThicknessResult* last = nullptr;
  for (std::size_t i = 0; i < all.results.size(); ++i) {
    const ThicknessResult& r = all.results[i];
    if (route && r.route != *route) continue;
    // The results of one measurement by several routes follow one another.
    const bool same = last && last->table == r.table && last->spot == r.spot && last->emission_deg == r.emission_deg;
    if (!same) {
      ++places.count;
      if (places.count <= kMostNames) places.names.push_back(spot_words(run, r));
    }
    last = &r;
    angles.insert(r.emission_deg);
    places.members.push_back(i);
    places.position.push_back(static_cast<double>(places.count - 1));
  }
  places.by_angle = angles.size() > 1;
  if (places.by_angle) {
    for (std::size_t k = 0; k < places.members.size(); ++k) {
      places.position[k] = all.results[places.members[k]].emission_deg;
    }
  }
  return places;
}

/// Series by name, in the order of their first point.
class SeriesSet {
 public:
  PointSeries& get(const std::string& name, Marker marker, Arrow arrow = Arrow::none, double shift = 0.0) {
    const auto [at, fresh] = index_.try_emplace(name, series_.size());
    if (fresh) series_.push_back({name, marker, arrow, {}, shift});
    return series_[at->second];
  }
  /// Thicknesses first, then outliers, bounds and what has no thickness.
  std::vector<PointSeries> take() {
    const auto rank = [](const PointSeries& s) {
      if (s.marker == Marker::cross) return 3;
      return s.arrow != Arrow::none ? 2 : s.marker == Marker::ring ? 1 : 0;
    };
    std::stable_sort(series_.begin(), series_.end(), [&](const auto& a, const auto& b) { return rank(a) < rank(b); });
    return std::move(series_);
  }

 private:
  std::map<std::string, std::size_t> index_;
  std::vector<PointSeries> series_;
};

struct Names {
  std::string thickness, upper, lower, failed, outlier;
};

Names names_for(const std::string& prefix, bool intervals = true) {
  const std::string front = prefix.empty() ? "" : prefix + ": ";
  const char* bars = intervals ? "95 % interval (thick bar: repeatability alone)" : "bar: repeatability alone (95 %)";
  return {(prefix.empty() ? "thickness, " : front) + bars, front + "at most (95 % bound)",
          front + "at least (95 % bound)", front + "no thickness", front + "outlier"};
}

FigurePoint point_of(const ThicknessResult& r, double x, bool intervals) {
  const Thickness& t = *r.thickness;
  const double repeatability = kNormal95 * t.budget.repeatability;
  FigurePoint p{x, t.value_nm, r.interval_nm()};
  if (!(repeatability > 0.0)) return p;
  (intervals ? p.inner : p.interval) = Interval{std::max(0.0, t.value_nm - repeatability), t.value_nm + repeatability};
  return p;
}

/// What one route adds to a picture.
struct Drawn {
  std::size_t route = 0;
  std::string prefix;  ///< in the key, when there are several
  double shift = 0.0;
  std::set<std::size_t> outliers;  ///< positions in ThicknessResults::results
};

/// Sidestep of the member `k` of `n` that stand at one place.
double sidestep(std::size_t k, std::size_t n, double pitch) {
  return pitch * (static_cast<double>(k) - 0.5 * static_cast<double>(n - 1));
}

/// Every result by itself.
void add_each(const Run& run, const ThicknessResults& all, const Places& places, const Drawn& drawn, double foot,
              SeriesSet& series) {
  std::set<std::string> spots;
  for (const std::size_t i : places.members) spots.insert(spot_words(run, all.results[i]));
  const bool by_spot = places.by_angle && spots.size() > 1 && spots.size() <= kMarkers.size();
  const bool intervals = places.members.size() <= kMostIntervals;
  for (std::size_t k = 0; k < places.members.size(); ++k) {
    const std::size_t i = places.members[k];
    const ThicknessResult& r = all.results[i];
    if (r.route != drawn.route) continue;
    std::string front = drawn.prefix;
    std::size_t marker = drawn.route;
    double shift = drawn.shift;
    if (by_spot) {
      const auto spot = static_cast<std::size_t>(std::distance(spots.begin(), spots.find(spot_words(run, r))));
      marker += spot;
      shift += sidestep(spot, spots.size(), 0.011);
      front += (front.empty() ? "spot " : ", spot ") + spot_words(run, r);
    }
    const Names names = names_for(front, intervals);
    const Marker shape = kMarkers[marker % kMarkers.size()];
    const double x = places.position[k];
    if (r.thickness) {
      const bool odd = drawn.outliers.contains(i);
      PointSeries& s =
          series.get(odd ? names.outlier : names.thickness, odd ? Marker::ring : shape, Arrow::none, shift);
      s.points.push_back(point_of(r, x, intervals));
    } else if (r.bound) {
      const bool upper = r.bound->upper;
      PointSeries& s = series.get(upper ? names.upper : names.lower, shape, upper ? Arrow::down : Arrow::up, shift);
      s.points.push_back({x, r.bound->at95_nm});
    } else {
      series.get(names_for(drawn.prefix).failed, Marker::cross, Arrow::none, shift).points.push_back({x, foot});
    }
  }
}

double median(std::vector<double>& values) {
  const auto middle = values.begin() + static_cast<std::ptrdiff_t>(values.size() / 2);
  std::nth_element(values.begin(), middle, values.end());
  return *middle;
}

/// Successive results together: the median, and a bar from the lowest to the highest thickness.
void add_groups(const ThicknessResults& all, const Places& places, const Drawn& drawn, double foot, SeriesSet& series) {
  const std::size_t size = (places.count + kGroups - 1) / kGroups;
  struct Group {
    std::vector<double> values, upper, lower;
    bool failed = false;
  };
  std::map<double, Group> groups;
  for (std::size_t k = 0; k < places.members.size(); ++k) {
    const ThicknessResult& r = all.results[places.members[k]];
    if (r.route != drawn.route) continue;
    const double block = static_cast<double>(size);
    const double x =
        places.by_angle ? places.position[k] : (std::floor(places.position[k] / block) + 0.5) * block - 0.5;
    Group& group = groups[x];
    if (r.thickness) {
      group.values.push_back(r.thickness->value_nm);
    } else if (r.bound) {
      (r.bound->upper ? group.upper : group.lower).push_back(r.bound->at95_nm);
    } else {
      group.failed = true;
    }
  }
  const std::string front = drawn.prefix.empty() ? "" : drawn.prefix + ": ";
  const std::string whole = places.by_angle ? "all results of an angle" : fmt::format("{} successive results", size);
  const Names names = names_for(drawn.prefix);
  const Marker shape = kMarkers[drawn.route % kMarkers.size()];
  for (auto& [x, group] : groups) {
    if (!group.values.empty()) {
      const auto [low, high] = std::minmax_element(group.values.begin(), group.values.end());
      const Interval range{*low, *high};
      series.get(front + "median of " + whole + ", bar from lowest to highest", shape)
          .points.push_back({x, median(group.values), range});
    }
    if (!group.upper.empty()) series.get(names.upper, shape, Arrow::down).points.push_back({x, median(group.upper)});
    if (!group.lower.empty()) series.get(names.lower, shape, Arrow::up).points.push_back({x, median(group.lower)});
    if (group.failed) series.get(names.failed, Marker::cross).points.push_back({x, foot});
  }
  for (std::size_t k = 0, odd = 0; k < places.members.size() && odd < kGroups; ++k) {
    const ThicknessResult& r = all.results[places.members[k]];
    if (r.route != drawn.route || !r.thickness || !drawn.outliers.contains(places.members[k])) continue;
    series.get(names.outlier, Marker::ring).points.push_back({places.position[k], r.thickness->value_nm});
    ++odd;
  }
}

/// Ends of the thickness axis: all that is drawn, with air, and zero where it is not far away.
std::pair<double, double> thickness_range(const ThicknessResults& all, const Places& places, const Figure& figure) {
  double low = 1e300, high = -1e300;
  const auto take = [&](double value) {
    if (!std::isfinite(value)) return;
    low = std::min(low, value);
    high = std::max(high, value);
  };
  const bool intervals = places.members.size() <= kMostIntervals;
  double lowest_bound = 1e300;
  bool failed = false;
  for (const std::size_t i : places.members) {
    const ThicknessResult& r = all.results[i];
    if (r.bound) take(r.bound->at95_nm);
    if (r.bound && r.bound->upper) lowest_bound = std::min(lowest_bound, r.bound->at95_nm);
    failed = failed || (!r.bound && !r.thickness);
    if (!r.thickness) continue;
    take(r.thickness->value_nm);
    if (!intervals) continue;
    take(r.interval_nm().low95);
    take(r.interval_nm().high95);
  }
  for (const FigureBand& band : figure.bands) {
    take(band.low);
    take(band.high);
  }
  if (low > high) return {0.0, 1.0};
  const double air = high > low ? 0.08 * (high - low) : std::max(0.1 * std::abs(high), 0.01);
  low -= air;
  high += air;
  // Thicknesses are told from zero; only a narrow range far from it is enlarged.
  if (low < 0.6 * high) low = 0.0;
  // Room below for the arrow of a bound near zero, and for what has no thickness.
  if (failed || lowest_bound - low < 0.08 * (high - low)) low -= 0.08 * (high - low);
  return {low, high};
}

void add_mean(const ThicknessSummary& s, Figure& figure) {
  if (s.count < 2) return;
  const double scale = kNormal95 * s.scale_nm;
  const bool band = s.scale_stated && scale > 0.0;
  const std::string mean = detail::value_words(s.mean_nm, std::max(s.scale_nm, s.repeatability_of_mean_nm)) + " nm";
  figure.lines.push_back(
      {false, s.mean_nm,
       "mean of " + std::to_string(s.count) + ": " + mean + (s.scale_stated ? "" : " (thickness scale not stated)")});
  if (band) {
    figure.bands.push_back({std::max(0.0, s.mean_nm - scale), s.mean_nm + scale,
                            "thickness scale about the mean (95 %), moves all spots together"});
  }
}

std::string caption_of(const ThicknessResults& all, const Places& places, const Figure& figure) {
  std::size_t values = 0, bounds = 0, failed = 0;
  for (const std::size_t i : places.members) {
    const ThicknessResult& r = all.results[i];
    ++(r.thickness ? values : r.bound ? bounds : failed);
  }
  std::string text =
      counted(values, "thickness", "thicknesses") + " against " + (places.by_angle ? "the emission angle" : "the spot");
  if (bounds > 0) text += ", " + counted(bounds, "bound as an arrow", "bounds as arrows");
  if (failed > 0) text += ", " + counted(failed, "cross without a thickness", "crosses without a thickness");
  text += ".";
  const bool each = places.members.size() <= kMostPoints;
  if (values > 0 && places.members.size() <= kMostIntervals) {
    text +=
        " Thin bars: 95 % interval of each result, thickness scale included. Thick bars: repeatability alone (95 %).";
  } else if (values > 0 && each) {
    text += " Bars: repeatability alone (95 %).";
  }
  if (values > 0 && !each) {
    text +=
        " Too many to draw one by one: each mark is the median of several results, its bar reaches from the lowest "
        "to the highest of them.";
  }
  for (const FigureLine& line : figure.lines) {
    if (!line.vertical) text += " Line: " + line.name + ".";
  }
  for (const FigureBand& band : figure.bands) text += " Band: " + band.name + ".";
  return text;
}

void set_spot_axis(const ThicknessResults& all, const Places& places, Figure& figure) {
  if (places.by_angle) {
    double low = 90.0, high = 0.0;
    for (const std::size_t i : places.members) {
      low = std::min(low, all.results[i].emission_deg);
      high = std::max(high, all.results[i].emission_deg);
    }
    const double air = 0.06 * (high - low);
    figure.x = {"emission angle from the surface normal", "°", low - air, high + air, {}};
    constexpr double kGrazing = 60.0;
    if (high > kGrazing) figure.lines.push_back({true, kGrazing, "60°: above, elastic scattering changes the length"});
    return;
  }
  const double count = static_cast<double>(places.count);
  if (places.count <= kMostNames) {
    figure.x = {"spot", "", -0.6, count - 0.4, places.names};
    return;
  }
  // Counted as people count, from one.
  figure.x = {"spot, by its position in the table", "", 0.0, count + 1.0, {}};
  for (PointSeries& series : figure.points) {
    for (FigurePoint& p : series.points) p.x += 1.0;
  }
}

}  // namespace

std::string FigureAxis::text() const { return unit.empty() ? label : label + " (" + unit + ")"; }

Figure thickness_figure(const Run& run, const ThicknessResults& results, std::optional<std::size_t> route) {
  Figure figure;
  const Places places = places_of(run, results, route);
  const std::string by = places.by_angle ? "against the emission angle" : "by spot";
  figure.title = "Film thickness " + by;
  figure.subtitle = run.title;
  std::vector<std::size_t> routes;
  if (route) {
    routes = {*route};
  } else {
    for (std::size_t p = 0; p < results.routes.size(); ++p) routes.push_back(p);
  }
  if (routes.size() == 1) {
    const ThicknessRoute& only = results.routes[routes[0]];
    figure.title = "Thickness of " + route_words(run, only) + ", " + by;
    for (const ThicknessSummary& s : results.summaries) {
      if (s.route == routes[0]) add_mean(s, figure);
    }
  }
  figure.y.label = "thickness";
  figure.y.unit = "nm";
  std::tie(figure.y.low, figure.y.high) = thickness_range(results, places, figure);

  // What has no thickness stands at the foot of the picture, clear of the axis.
  const double foot = figure.y.low + 0.03 * (figure.y.high - figure.y.low);
  SeriesSet series;
  for (std::size_t n = 0; n < routes.size(); ++n) {
    Drawn drawn;
    drawn.route = routes[n];
    for (const ThicknessSummary& s : results.summaries) {
      if (s.route == drawn.route) drawn.outliers.insert(s.outliers.begin(), s.outliers.end());
    }
    const ThicknessRoute& p = results.routes[drawn.route];
    if (routes.size() > 1) drawn.prefix = p.layer + ", " + lines_words(run, p);
    if (places.members.size() > kMostPoints) {
      add_groups(results, places, drawn, foot, series);
      continue;
    }
    const double places_across = places.by_angle ? 90.0 : static_cast<double>(std::max<std::size_t>(places.count, 1));
    drawn.shift = sidestep(n, routes.size(), places.by_angle ? 0.011 : std::min(0.16 / places_across, 0.03));
    add_each(run, results, places, drawn, foot, series);
  }
  figure.points = series.take();
  set_spot_axis(results, places, figure);
  figure.caption = caption_of(results, places, figure);
  return figure;
}

Figure budget_figure(const Run& run, const ThicknessResults& results, std::size_t result) {
  const ThicknessResult& r = results.results.at(result);
  if (!r.thickness) throw InputError("result", "spot \"" + r.spot + "\" has no thickness, hence no budget");
  const Budget& budget = r.thickness->budget;
  Figure figure;
  figure.title = "Uncertainty budget of " + route_words(run, results.routes[r.route]) + ": spot " + spot_words(run, r) +
                 ", " + detail::angle_words(r.emission_deg) + "° emission";
  figure.subtitle = run.title;
  BarSeries scale{"thickness scale: common to all spots, does not average", Fill::solid, {}};
  BarSeries repeatability{"repeatability: falls with the number of spots", Fill::hatched, {}};
  constexpr double kSmallest = 1e-3;
  std::size_t left_out = 0;
  double lowest = 0.0, highest = 0.0;
  for (const BudgetRow& row : budget.rows) {
    if (!(std::abs(row.share) >= kSmallest)) {
      ++left_out;
      continue;
    }
    const double y = static_cast<double>(figure.y.names.size());
    const double percent = 100.0 * row.share;
    figure.y.names.push_back(input_words(row.name));
    (row.kind == ContributionKind::scale ? scale : repeatability).bars.push_back({y, percent});
    figure.texts.push_back(
        {std::max(percent, 0.0), y, fmt::format("{:.1f} % ({} nm)", percent, rounded_text(row.contribution, 2))});
    lowest = std::min(lowest, percent);
    highest = std::max(highest, percent);
  }
  for (BarSeries* series : {&scale, &repeatability}) {
    if (!series->bars.empty()) figure.bars.push_back(std::move(*series));
  }
  if (figure.y.names.empty()) {
    // Nothing stated an uncertainty; an empty picture would look like a fault.
    figure.y.names.emplace_back("no input");
    figure.texts.push_back({0.0, 0.0, "no input states an uncertainty"});
    highest = 100.0;
  }
  figure.x.label = "share of the variance of the thickness";
  figure.x.unit = "%";
  // Correlated inputs may take away what others add, so a share can lie below zero or above 100 %.
  figure.x.low = lowest < 0.0 ? 1.05 * lowest : 0.0;
  figure.x.high = 1.32 * std::max(highest, 1.0);  // room for the words beside the longest bar
  figure.y.label = "input";
  figure.y.low = static_cast<double>(figure.y.names.size()) - 0.4;
  figure.y.high = -0.6;
  if (lowest < 0.0) figure.lines.push_back({true, 0.0, ""});
  figure.caption = "Share of each input in the variance of the thickness of spot " + spot_words(run, r) +
                   ", standard uncertainty " + rounded_text(budget.standard_uncertainty, 2) +
                   " nm after the GUM; in brackets what the input alone contributes.";
  if (left_out > 0) figure.caption += " " + counted(left_out, "input", "inputs") + " below 0.1 % left out.";
  if (lowest < 0.0) figure.caption += " A share below zero: correlation takes away what other inputs add.";
  return figure;
}

Figure result_figure(const Run& run, const ThicknessResults& results) {
  if (results.results.size() == 1 && results.results[0].thickness) return budget_figure(run, results, 0);
  return thickness_figure(run, results);
}

}  // namespace pellicle
