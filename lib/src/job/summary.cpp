#include "job/summary.hpp"

#include <algorithm>
#include <cmath>
#include <map>
#include <string>
#include <string_view>
#include <tuple>
#include <unordered_map>

#include <boost/math/distributions/chi_squared.hpp>

namespace pellicle::detail {
namespace {

/// χ² of values about their mean with weights 1/sd², and what it exceeds in 5 % of all cases by chance.
struct Scatter {
  double chi_square = 0.0;
  double limit = 0.0;
};

/// @param members value and sd > 0 of each, at least two
Scatter scatter_of(const std::vector<std::pair<double, double>>& members) {
  double weights = 0.0, mean = 0.0;
  for (const auto& [value, sd] : members) {
    weights += 1.0 / (sd * sd);
    mean += value / (sd * sd);
  }
  mean /= weights;
  Scatter scatter;
  for (const auto& [value, sd] : members) scatter.chi_square += std::pow((value - mean) / sd, 2);
  scatter.limit = boost::math::quantile(boost::math::chi_squared(static_cast<double>(members.size() - 1)), 0.95);
  return scatter;
}

/// Part of the budget that differs between angles of one spot: what repeats, and the angle.
double angle_to_angle_sd(const Thickness& t) {
  double variance = t.budget.repeatability * t.budget.repeatability;
  for (const BudgetRow& row : t.budget.rows) {
    if (row.name == kEmissionName) variance += row.contribution * row.contribution;
  }
  return std::sqrt(variance);
}

/// One spot by one route: the mean of its angles.
struct SpotMean {
  std::vector<std::size_t> results;
  double value_nm = 0.0;
  double repeatability_nm = 0.0;
  double scale_nm = 0.0;
};

std::vector<SpotMean> spot_means(const std::vector<ThicknessResult>& results, std::size_t route) {
  std::vector<SpotMean> spots;
  std::unordered_map<std::string, std::size_t> index;
  std::string key;
  // Results of one angle are one for each spot, which need not be looked up.
  const bool one_angle = std::all_of(results.begin(), results.end(), [&](const ThicknessResult& r) { return r.emission_deg == results.front().emission_deg; });
  for (std::size_t i = 0; i < results.size(); ++i) {
    const ThicknessResult& r = results[i];
    if (r.route != route || !r.thickness) continue;
    std::size_t position = spots.size();
    if (!one_angle) {
      key.assign(std::to_string(r.table)).push_back('\0');
      key += r.spot;
      position = index.try_emplace(key, spots.size()).first->second;
    }
    if (position == spots.size()) spots.emplace_back();
    SpotMean& spot = spots[position];
    spot.results.push_back(i);
    spot.value_nm += r.thickness->value_nm;
    spot.repeatability_nm += r.thickness->budget.repeatability * r.thickness->budget.repeatability;
    spot.scale_nm += r.thickness->budget.scale;
  }
  for (SpotMean& spot : spots) {
    const double n = static_cast<double>(spot.results.size());
    spot.value_nm /= n;
    spot.repeatability_nm = std::sqrt(spot.repeatability_nm) / n;
    spot.scale_nm /= n;
  }
  return spots;
}

double median(std::vector<double> v) {
  const auto middle = v.begin() + static_cast<std::ptrdiff_t>(v.size() / 2);
  std::nth_element(v.begin(), middle, v.end());
  if (v.size() % 2 == 1) return *middle;
  return 0.5 * (*middle + *std::max_element(v.begin(), middle));
}

/// Spots far from the rest: by the modified z score, 0.6745 |x − median|/MAD > 3.5 [iglewicz1993], and by more than
/// three times their own repeatability, so that a few spots which happen to agree do not condemn their neighbours.
std::vector<std::size_t> outliers_of(const std::vector<SpotMean>& spots) {
  constexpr std::size_t kFewest = 7;
  constexpr double kMostScore = 3.5, kMostRepeatabilities = 3.0;
  std::vector<std::size_t> outliers;
  if (spots.size() < kFewest) return outliers;
  std::vector<double> values;
  for (const SpotMean& spot : spots) values.push_back(spot.value_nm);
  const double centre = median(values);
  for (double& v : values) v = std::abs(v - centre);
  const double spread = median(values);
  if (!(spread > 0.0)) return outliers;
  for (std::size_t k = 0; k < spots.size(); ++k) {
    const bool far = 0.6745 * values[k] / spread > kMostScore && values[k] > kMostRepeatabilities * spots[k].repeatability_nm;
    if (far) outliers.insert(outliers.end(), spots[k].results.begin(), spots[k].results.end());
  }
  return outliers;
}

void compare_spots(const std::vector<SpotMean>& spots, ThicknessResults& all, FindingPool& pool) {
  std::vector<std::pair<double, double>> members;
  for (const SpotMean& spot : spots) {
    if (!(spot.repeatability_nm > 0.0)) return;
    members.emplace_back(spot.value_nm, spot.repeatability_nm);
  }
  const Scatter scatter = scatter_of(members);
  if (scatter.chi_square <= scatter.limit) return;
  const std::uint32_t finding = pool.add({"spots_differ", Severity::warning,
                                          "the spots scatter more than their repeatability explains: the film differs from spot to spot, so "
                                          "look at them one by one before quoting their mean (value: χ²)",
                                          scatter.chi_square, scatter.limit});
  for (const SpotMean& spot : spots) {
    for (const std::size_t i : spot.results) all.results[i].findings.push_back(finding);
  }
}

}  // namespace

void compare_angles(ThicknessResults& all, FindingPool& pool) {
  const auto other_angle = [&](const ThicknessResult& r) { return r.emission_deg != all.results.front().emission_deg; };
  if (std::none_of(all.results.begin(), all.results.end(), other_angle)) return;
  std::map<std::tuple<std::size_t, std::size_t, std::string_view>, std::vector<std::size_t>> groups;
  for (std::size_t i = 0; i < all.results.size(); ++i) {
    const ThicknessResult& r = all.results[i];
    if (r.thickness) groups[{r.route, r.table, r.spot}].push_back(i);
  }
  for (const auto& [key, members] : groups) {
    std::vector<std::pair<double, double>> angles;
    for (const std::size_t i : members) {
      const Thickness& t = *all.results[i].thickness;
      if (const double sd = angle_to_angle_sd(t); sd > 0.0) angles.emplace_back(t.value_nm, sd);
    }
    if (angles.size() < 2 || angles.size() < members.size()) continue;
    const Scatter scatter = scatter_of(angles);
    if (scatter.chi_square <= scatter.limit) continue;
    const std::uint32_t finding = pool.add({"angles_disagree", Severity::warning,
                                            "the angles of one spot give different thicknesses; islands, roughness, a wrong reference ratio, a swapped "
                                            "angle convention or an angle offset would do that (value: χ²)",
                                            scatter.chi_square, scatter.limit});
    for (const std::size_t i : members) all.results[i].findings.push_back(finding);
  }
}

ThicknessSummary summarise(ThicknessResults& all, std::size_t route, FindingPool& pool) {
  ThicknessSummary summary;
  summary.route = route;
  for (const ThicknessResult& r : all.results) {
    if (r.route != route) continue;
    if (r.bound) ++summary.bounds;
    if (!r.thickness && !r.bound) ++summary.failed;
    if (r.thickness) ++summary.thicknesses;
    summary.scale_stated = summary.scale_stated && (!r.thickness || r.thickness->scale_stated);
  }
  const std::vector<SpotMean> spots = spot_means(all.results, route);
  summary.count = spots.size();
  if (spots.empty()) return summary;
  const double n = static_cast<double>(spots.size());
  double repeatability_squares = 0.0;
  for (const SpotMean& spot : spots) {
    summary.mean_nm += spot.value_nm / n;
    // A common error moves every spot the same way, so it is averaged over spots but not divided by √n.
    summary.scale_nm += spot.scale_nm / n;
    repeatability_squares += spot.repeatability_nm * spot.repeatability_nm;
  }
  summary.repeatability_of_mean_nm = std::sqrt(repeatability_squares) / n;
  if (spots.size() < 2) return summary;
  summary.outliers = outliers_of(spots);
  double squares = 0.0;
  for (const SpotMean& spot : spots) squares += std::pow(spot.value_nm - summary.mean_nm, 2);
  // Equal spots differ by rounding alone.
  const double rounding = 1e-12 * summary.mean_nm;
  summary.standard_deviation_nm = squares > n * rounding * rounding ? std::sqrt(squares / (n - 1.0)) : 0.0;
  // What the spots really do counts more than what counting statistics promises.
  summary.repeatability_of_mean_nm = std::max(summary.repeatability_of_mean_nm, *summary.standard_deviation_nm / std::sqrt(n));
  compare_spots(spots, all, pool);
  return summary;
}

}  // namespace pellicle::detail
