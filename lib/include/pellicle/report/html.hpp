#pragma once
/// A report of thicknesses for people who were not there: one HTML file that needs nothing else, screen or paper.
///
/// The order is that of ISO 13424: result in brief, specimen, instrument, areas, lengths, reference ratio, densities,
/// results, budget, findings, cautions, what was not stated, how to repeat it. @cite iso13424

#include <string>

#include "pellicle/job/run.hpp"
#include "pellicle/job/thickness_job.hpp"

namespace pellicle {

/// What a report says of its origin; run and results do not know it.
struct ReportOrigin {
  std::string inputs_sha256;  ///< digest of the inputs as in the JSON result; empty: not printed
  std::string command;        ///< what to type to get the same numbers; empty: not printed
};

/// The report as a whole HTML document. The same run, results and origin give the same bytes.
/// Tables hold at most 200 results each; JSON and CSV hold all.
[[nodiscard]] std::string thickness_html(const Run& run, const ThicknessResults& results,
                                         const ReportOrigin& origin = {});

}  // namespace pellicle
