#pragma once
/// The area table put together: for every spot and angle the area of every line, with uncertainty and limits.

#include <optional>
#include <string>
#include <vector>

#include "pellicle/job/run.hpp"

namespace pellicle::detail {

/// 95 % of a normal distribution lie below this many standard deviations above its mean.
inline constexpr double kOneSided95 = 1.6448536269514722;
/// Counts that the detection limit adds to twice the decision level, 1.645² [currie1968].
inline constexpr double kCurrieCounts = 2.71;

/// Area of one line at one spot and angle: the weighted sum of its components.
struct LineArea {
  double value = 0.0;
  double sd = 0.0;
  bool not_detected_stated = false;       ///< all components are "nd"; one alone adds 0 ± what it may be
  std::optional<double> sd_at_zero;       ///< standard uncertainty of a signal of zero; nothing: not known
  std::optional<double> one_count;        ///< area of one count, when counts are known
  bool sd_assumed = false;
  bool background_missing = false;        ///< counted without the background

  /// Decision level 1.645 u(0): 2.33 √B where the background is known. @cite currie1968
  [[nodiscard]] std::optional<double> decision_level() const;
  /// Detection limit: decision level twice, plus 2.71 counts where counts are known. @cite currie1968
  [[nodiscard]] std::optional<double> detection_limit() const;
  [[nodiscard]] bool detected() const;
};

/// Correlation of the areas of two lines, from that of their components.
struct LineCorrelation {
  std::size_t first, second;  ///< positions in Run::lines
  double coefficient;
};

struct Measurement {
  std::size_t table = 0;
  std::string spot;
  double emission_deg = 0.0;
  std::vector<std::optional<LineArea>> lines;  ///< by position in Run::lines; nothing: a component has no row
  std::vector<std::string> missing;            ///< why, by position; empty when every line is there
  std::vector<LineCorrelation> correlations = {};
};

/// In the order in which spots first appear. @throws InputError for an undeclared line, a doubled row or a row
/// without an angle
[[nodiscard]] std::vector<Measurement> collect_measurements(const Run& run);

}  // namespace pellicle::detail
