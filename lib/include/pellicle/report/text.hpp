#pragma once
/// Results for people: tables and sentences on a terminal.

#include <string>
#include <vector>

#include "pellicle/job/length_query.hpp"
#include "pellicle/job/thickness_job.hpp"
#include "pellicle/lines/core_level.hpp"

namespace pellicle {

/// Lengths of `pellicle lengths`: the length to use, and every model beside it.
[[nodiscard]] std::string lengths_text(const std::vector<LengthQuery>& queries);
/// Thicknesses with intervals, budget, findings and summary.
[[nodiscard]] std::string thickness_text(const Run& run, const ThicknessResults& results);
/// Catalogue rows: density, band gap and where they come from.
[[nodiscard]] std::string materials_text(const std::vector<Material>& materials);
/// Core levels. @param source nothing: no kinetic energies, cross sections and asymmetries
[[nodiscard]] std::string lines_text(const std::vector<CoreLevel>& levels, const PhotonSource* source);
/// What `pellicle check` says of a run that it accepts.
[[nodiscard]] std::string check_text(const Run& run, const ThicknessResults& results);

/// Cautions for the laboratory and for the use of a result; brief, in every report.
[[nodiscard]] const std::string& cautions_text();

}  // namespace pellicle
