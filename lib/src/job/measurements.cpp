#include "job/measurements.hpp"

#include <algorithm>
#include <cmath>
#include <functional>
#include <set>
#include <unordered_map>

#include "base/nearest.hpp"
#include "pellicle/base/error.hpp"
#include "pellicle/base/number.hpp"

namespace pellicle::detail {
namespace {

/// Area of one component with its uncertainty: stated, counted, or assumed.
struct ComponentArea {
  LineArea area;
  std::string problem;  ///< why it cannot be used
};

ComponentArea component_area(const Run& run, const AreaRow& row) {
  const AreaUnit unit = run.area_unit;
  ComponentArea c;
  c.area.value = row.area.value_or(0.0);
  c.area.not_detected_stated = !row.area.has_value();
  const std::optional<double> factor = counts_per_area(unit, row.counting);
  if (factor && *factor > 0.0) c.area.one_count = 1.0 / *factor;
  if (c.area.one_count && row.counting.background_counts) {
    c.area.sd_at_zero = std::sqrt(2.0 * *row.counting.background_counts) * *c.area.one_count;
  } else if (row.area_sd) {
    c.area.sd_at_zero = row.area_sd;
  }
  if (row.area_sd) {
    c.area.sd = *row.area_sd;
  } else if (!row.area && c.area.sd_at_zero) {
    c.area.sd = std::max(*c.area.sd_at_zero, c.area.one_count.value_or(0.0));
  } else if (!row.area) {
    c.problem = "\"" + row.line + "\" is not detected, and neither area_sd nor background_counts say how weak it may be";
  } else if (const std::optional<double> sd = counting_uncertainty(*row.area, unit, row.counting)) {
    c.area.sd = *sd;
    c.area.background_missing = !row.counting.background_counts;
  } else {
    c.area.sd = assumed_value("area_relative_sd") * std::abs(*row.area);
    c.area.sd_assumed = true;
  }
  // A background-subtracted area may fall below zero by its noise, not by more.
  if (row.area && *row.area < 0.0 && (c.area.sd_assumed || *row.area < -3.0 * c.area.sd)) {
    throw InputError(run.place_of(row) + ": area", number_text(*row.area) + " is a negative area" + (c.area.sd_assumed ? "" : ", more than 3 standard uncertainties below zero"),
                     "a net area is >= 0 within 3 standard uncertainties; check the background");
  }
  return c;
}

struct Key {
  std::size_t table;
  std::string_view spot;
  double emission_deg;
  bool operator==(const Key&) const = default;
};

struct KeyHash {
  std::size_t operator()(const Key& k) const noexcept {
    return std::hash<std::string_view>{}(k.spot) ^ (std::hash<double>{}(k.emission_deg) * 31U) ^ (k.table * 0x9E3779B97F4A7C15ULL);
  }
};

/// Correlation of two components: 1 with itself, else as stated.
double correlation_of(const Run& run, const std::string& a, const std::string& b) {
  if (a == b) return 1.0;
  for (const AreaCorrelation& c : run.area_correlations) {
    if ((c.first == a && c.second == b) || (c.first == b && c.second == a)) return c.coefficient;
  }
  return 0.0;
}

/// What is kept of a component for the correlation of lines.
struct Part {
  const Component* component;
  double sd;
};

/// Correlations of all pairs of lines of one spot. @param parts by line
std::vector<LineCorrelation> line_correlations(const Run& run, const std::vector<std::vector<Part>>& parts, const std::vector<std::optional<LineArea>>& lines) {
  std::vector<LineCorrelation> all;
  for (std::size_t a = 0; a < lines.size(); ++a) {
    for (std::size_t b = a + 1; b < lines.size(); ++b) {
      if (!lines[a] || !lines[b] || !(lines[a]->sd > 0.0) || !(lines[b]->sd > 0.0)) continue;
      double covariance = 0.0;
      for (const Part& i : parts[a]) {
        for (const Part& j : parts[b]) {
          covariance += i.component->weight * j.component->weight * correlation_of(run, i.component->label, j.component->label) * i.sd * j.sd;
        }
      }
      if (covariance != 0.0) all.push_back({a, b, std::clamp(covariance / (lines[a]->sd * lines[b]->sd), -1.0, 1.0)});
    }
  }
  return all;
}

/// True when areas of different lines can be correlated at all.
bool lines_may_correlate(const Run& run) {
  if (!run.area_correlations.empty()) return true;
  std::set<std::string> seen;
  for (const Line& line : run.lines) {
    for (const Component& part : line.components) {
      if (!seen.insert(part.label).second) return true;
    }
  }
  return false;
}

/// Sum of the components of one line. The correlations of a run are between component labels.
LineArea sum_components(const Run& run, const std::vector<const Component*>& parts, const std::vector<ComponentArea>& areas) {
  LineArea sum;
  sum.not_detected_stated = true;
  double variance = 0.0, zero_variance = 0.0;
  bool zero_known = true, counts_known = true;
  for (std::size_t i = 0; i < parts.size(); ++i) {
    const double w = parts[i]->weight;
    const LineArea& a = areas[i].area;
    sum.value += w * a.value;
    variance += w * w * a.sd * a.sd;
    if (a.sd_at_zero) zero_variance += w * w * *a.sd_at_zero * *a.sd_at_zero;
    zero_known = zero_known && a.sd_at_zero.has_value();
    counts_known = counts_known && a.one_count.has_value();
    if (a.one_count) sum.one_count = std::max(sum.one_count.value_or(0.0), w * *a.one_count);
    sum.not_detected_stated = sum.not_detected_stated && a.not_detected_stated;
    sum.sd_assumed = sum.sd_assumed || a.sd_assumed;
    sum.background_missing = sum.background_missing || a.background_missing;
    for (std::size_t j = 0; j < i; ++j) {
      variance += 2.0 * correlation_of(run, parts[i]->label, parts[j]->label) * w * parts[j]->weight * a.sd * areas[j].area.sd;
    }
  }
  sum.sd = std::sqrt(std::max(variance, 0.0));
  if (zero_known) sum.sd_at_zero = std::sqrt(zero_variance);
  if (!counts_known) sum.one_count.reset();
  return sum;
}

}  // namespace

std::optional<double> LineArea::decision_level() const {
  if (!sd_at_zero) return std::nullopt;
  return kOneSided95 * *sd_at_zero;
}

std::optional<double> LineArea::detection_limit() const {
  if (!sd_at_zero) return std::nullopt;
  return kCurrieCounts * one_count.value_or(0.0) + 2.0 * kOneSided95 * *sd_at_zero;
}

bool LineArea::detected() const {
  if (not_detected_stated) return false;
  const std::optional<double> level = decision_level();
  return value > level.value_or(0.0);
}

std::vector<Measurement> collect_measurements(const Run& run) {
  // Component labels of all lines, each once.
  std::vector<std::string> labels;
  std::unordered_map<std::string_view, std::size_t> label_index;
  for (const Line& line : run.lines) {
    for (const Component& part : line.components) {
      if (std::find(labels.begin(), labels.end(), part.label) == labels.end()) labels.push_back(part.label);
    }
  }
  for (std::size_t i = 0; i < labels.size(); ++i) label_index.emplace(labels[i], i);

  struct Group {
    std::size_t table;
    std::string_view spot;
    double emission_deg;
  };
  std::vector<Group> groups;
  std::vector<const AreaRow*> slots;  // by group, then by component
  std::unordered_map<Key, std::size_t, KeyHash> index;
  std::size_t last = 0;
  for (const AreaRow& row : run.areas) {
    const auto label = label_index.find(row.line);
    if (label == label_index.end()) {
      throw InputError(run.place_of(row), "line \"" + row.line + "\" is not declared", name_hint(row.line, labels));
    }
    if (!row.emission_deg && !run.emission_deg) {
      throw InputError(run.place_of(row), "the row states no emission angle", "add a column emission_deg, or emission_deg under [instrument]");
    }
    const double emission = row.emission_deg ? *row.emission_deg : *run.emission_deg;
    // Rows of one spot mostly follow each other.
    const bool same = !groups.empty() && groups[last].table == row.table && groups[last].emission_deg == emission && groups[last].spot == row.spot;
    if (!same) {
      const auto [found, fresh] = index.try_emplace({row.table, row.spot, emission}, groups.size());
      last = found->second;
      if (fresh) {
        groups.push_back({row.table, row.spot, emission});
        slots.resize(slots.size() + labels.size(), nullptr);
      }
    }
    const AreaRow*& slot = slots[last * labels.size() + label->second];
    if (slot) {
      throw InputError(run.place_of(row), "spot \"" + row.spot + "\" has line \"" + row.line + "\" twice at " + number_text(emission) + " deg emission",
                       "give repeated measurements spots of their own");
    }
    slot = &row;
  }
  if (groups.empty()) throw InputError(run.place, "the run holds no areas", "give [data] areas");

  std::vector<Measurement> all;
  all.reserve(groups.size());
  std::vector<const Component*> parts;
  std::vector<ComponentArea> areas;
  const bool may_correlate = lines_may_correlate(run);
  std::vector<std::vector<Part>> parts_of_lines(run.lines.size());
  std::vector<std::vector<std::size_t>> components(run.lines.size());
  for (std::size_t l = 0; l < run.lines.size(); ++l) {
    for (const Component& part : run.lines[l].components) components[l].push_back(label_index.at(part.label));
  }
  for (std::size_t g = 0; g < groups.size(); ++g) {
    const Group& group = groups[g];
    Measurement m{group.table, std::string(group.spot), group.emission_deg, {}, {}};
    m.lines.resize(run.lines.size());
    const auto miss = [&](std::size_t line, std::string why) {
      m.missing.resize(run.lines.size());
      m.missing[line] = std::move(why);
    };
    for (std::size_t l = 0; l < run.lines.size(); ++l) {
      parts.clear();
      areas.clear();
      bool complete = true;
      for (std::size_t c = 0; c < components[l].size() && complete; ++c) {
        const Component& part = run.lines[l].components[c];
        const AreaRow* row = slots[g * labels.size() + components[l][c]];
        if (!row) {
          miss(l, "spot \"" + m.spot + "\" has no area of line \"" + part.label + "\"");
          complete = false;
          continue;
        }
        parts.push_back(&part);
        areas.push_back(component_area(run, *row));
        if (!areas.back().problem.empty()) {
          miss(l, "spot \"" + m.spot + "\": " + areas.back().problem);
          complete = false;
        }
      }
      if (complete) m.lines[l] = sum_components(run, parts, areas);
      if (!may_correlate) continue;
      parts_of_lines[l].clear();
      for (std::size_t i = 0; i < areas.size(); ++i) parts_of_lines[l].push_back({parts[i], areas[i].area.sd});
    }
    if (may_correlate) m.correlations = line_correlations(run, parts_of_lines, m.lines);
    all.push_back(std::move(m));
  }
  return all;
}

}  // namespace pellicle::detail
