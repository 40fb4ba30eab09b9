#pragma once
/// What the parts of a report share. One function writes one section; html.cpp calls them in order.

#include <cstddef>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "pellicle/job/run.hpp"
#include "pellicle/job/thickness_job.hpp"
#include "pellicle/report/html.hpp"
#include "report/html_writer.hpp"

namespace pellicle::detail {

using Rows = std::vector<std::vector<Cell>>;

/// Rows that a table shows; a report is read, a table of thousands is not.
inline constexpr std::size_t kMostRows = 200;
/// Names in a sentence.
inline constexpr std::size_t kMostNames = 12;
/// Findings of one severity that are listed.
inline constexpr std::size_t kMostFindings = 60;
inline constexpr const char* kNone = "–";

/// A finding that may stand against many results.
struct FindingCount {
  Finding finding;
  std::size_t results = 0;
};

struct Report {
  const Run& run;
  const ThicknessResults& all;
  const ReportOrigin& origin;
  std::vector<FindingCount> findings;              ///< each sentence once
  std::vector<std::vector<std::size_t>> of_route;  ///< results of each route
};

void write_specimen(const Report& report, HtmlWriter& w);
void write_instrument(const Report& report, HtmlWriter& w);
void write_areas(const Report& report, HtmlWriter& w);
void write_lengths(const Report& report, HtmlWriter& w);
void write_reference(const Report& report, HtmlWriter& w);
void write_densities(const Report& report, HtmlWriter& w);
void write_results(const Report& report, HtmlWriter& w);
void write_budget(const Report& report, HtmlWriter& w);
void write_findings(const Report& report, HtmlWriter& w);

/// What `[record]` says under a key; empty when it says nothing.
[[nodiscard]] std::string record_of(const Run& run, std::string_view key);

/// "3.37 ± 0.35", both numbers with all their digits beneath.
[[nodiscard]] std::string quantity_html(double value, const std::optional<double>& sd);
[[nodiscard]] std::string quantity_html(const Quantity& q);

/// The same for a sentence or a list of facts: says when no uncertainty was given.
[[nodiscard]] std::string stated_html(const Quantity& q, std::string_view unit);

/// "2.69 to 4.06", both numbers with all their digits beneath.
[[nodiscard]] std::string interval_html(const Interval& interval, double sd);

/// "Monte Carlo" or "GUM", whichever the quoted interval is from.
[[nodiscard]] const char* interval_method(const ThicknessResult& result);

/// "a, b, c and 5 more".
[[nodiscard]] std::string joined(const std::vector<std::string>& names, std::size_t most = kMostNames);

[[nodiscard]] bool several_tables(const Run& run);

/// Says below a table that it was cut.
void note_cut(HtmlWriter& w, std::size_t shown, std::size_t all, const char* where = "JSON and CSV");

}  // namespace pellicle::detail
