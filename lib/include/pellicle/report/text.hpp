#pragma once
/// Results for people: tables and sentences on a terminal.

#include <string>
#include <vector>

#include "pellicle/job/length_query.hpp"
#include "pellicle/job/thickness_job.hpp"
#include "pellicle/lines/core_level.hpp"

namespace pellicle {

[[nodiscard]] std::string lengths_text(const std::vector<LengthQuery>& queries);
[[nodiscard]] std::string thickness_text(const Run& run, const ThicknessResults& results);
[[nodiscard]] std::string materials_text(const std::vector<Material>& materials);
[[nodiscard]] std::string lines_text(const std::vector<CoreLevel>& levels, const PhotonSource* source);
[[nodiscard]] std::string check_text(const Run& run, const ThicknessResults& results);

/// Cautions for the laboratory and for the use of a result; brief, in every report.
[[nodiscard]] const std::string& cautions_text();

}  // namespace pellicle
