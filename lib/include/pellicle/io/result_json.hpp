#pragma once
/// Results as JSON, schema "pellicle.result/1". Every document carries schema, version, command, inputs, and results;
/// a number that does not exist is null. `inputs_sha256` is the digest of `inputs` without blanks: settings of the
/// uncertainty evaluation (seed, draws) are not in it.

#include <string>
#include <vector>

#include "pellicle/job/length_query.hpp"
#include "pellicle/job/thickness_job.hpp"
#include "pellicle/lines/core_level.hpp"

namespace pellicle {

/// Lengths [nm], every model beside the chosen one.
[[nodiscard]] std::string lengths_json(const std::vector<LengthQuery>& queries);
/// Thicknesses [nm] with uncertainty, budget, findings and summary.
[[nodiscard]] std::string thickness_json(const Run& run, const ThicknessResults& results);
/// SHA-256 of the inputs of a run, as thickness_json() states it.
[[nodiscard]] std::string inputs_sha256(const Run& run);
/// Catalogue rows with the source of every number.
[[nodiscard]] std::string materials_json(const std::vector<Material>& materials);
/// @param source nothing: kinetic energies, cross sections and asymmetries are null
[[nodiscard]] std::string lines_json(const std::vector<CoreLevel>& levels, const PhotonSource* source);
/// The sets of calibrated attenuation lengths.
[[nodiscard]] std::string calibrated_lengths_json();
/// The named photon sources.
[[nodiscard]] std::string photon_sources_json();
/// What `pellicle check` says of a run that it accepts.
[[nodiscard]] std::string check_json(const Run& run, const ThicknessResults& results);

/// Thicknesses as CSV, one row per spot, angle and route, with a header; units in the column names.
[[nodiscard]] std::string thickness_csv(const Run& run, const ThicknessResults& results);

}  // namespace pellicle
