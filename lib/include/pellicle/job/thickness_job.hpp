#pragma once
/// From a Run to thicknesses: which lines pair up, which length and reference ratio each pair uses, and
/// one result per spot and angle.

#include <optional>
#include <string>
#include <vector>

#include "pellicle/base/finding.hpp"
#include "pellicle/estimate/thickness.hpp"
#include "pellicle/job/run.hpp"
#include "pellicle/transport/attenuation_length.hpp"

namespace pellicle {

/// An attenuation length and where it comes from.
struct LengthUsed {
  Quantity length_nm;
  std::string origin;           ///< "given", "set sio2-2004", "predicted: Seah-Gilmore on TPP-2M"
  std::string material;         ///< id of the material that attenuates
  double energy_ev = 0.0;       ///< kinetic energy of the electrons
  Findings findings;
};

/// A pair of lines that gives a thickness, with everything that all its spots share.
struct ThicknessPair {
  std::string layer;            ///< the film
  std::string film_line, substrate_line;
  Quantity reference_ratio;     ///< from a stated ratio or the quotient of two reference areas
  std::string reference_origin; ///< "given" or "reference areas"
  std::optional<Quantity> reference_film_area, reference_substrate_area;
  LengthUsed film_length;                      ///< of the film's line in the film
  std::optional<LengthUsed> substrate_length;  ///< nothing: the same line, hence the same length
  Findings findings;
};

/// One spot at one angle.
struct ThicknessResult {
  std::string spot;
  double emission_deg = 0.0;
  std::size_t pair = 0;                ///< position in ThicknessResults::pairs
  Quantity film_area, substrate_area;
  std::optional<Thickness> thickness;  ///< nothing: failed
  std::string failure;                 ///< the reason, one sentence
};

/// Over all spots that gave a thickness, for one pair.
struct ThicknessSummary {
  std::size_t pair = 0;
  std::size_t count = 0;                 ///< results
  std::size_t failed = 0;
  double mean_nm = 0.0;
  std::optional<double> standard_deviation_nm;  ///< between results; nothing for fewer than two
  double repeatability_of_mean_nm = 0.0; ///< falls with the number of results
  double scale_nm = 0.0;                 ///< common to all results, does not average
  bool scale_stated = true;
};

struct ThicknessResults {
  std::vector<ThicknessPair> pairs;
  std::vector<ThicknessResult> results;
  std::vector<ThicknessSummary> summaries;
};

/// The pairs a run asks for: those of its reference ratios and those of its reference areas.
/// @throws InputError naming what is missing: no reference, a film line from the substrate, an element the
///         layer does not hold, a layer between film and substrate, a doublet against half of one
/// @throws DomainError when no length can be predicted
[[nodiscard]] std::vector<ThicknessPair> thickness_pairs(const Run& run);

/// All thicknesses of a run. A spot without one of its lines, or without an answer, is a failed result and
/// not an exception.
/// @throws as thickness_pairs(); InputError for a row whose line is not declared or a doubled row
[[nodiscard]] ThicknessResults run_thickness(const Run& run);

}  // namespace pellicle
