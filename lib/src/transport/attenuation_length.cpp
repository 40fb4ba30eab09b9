// Notation: E kinetic energy [eV], Z mean atomic number, a mean atomic spacing [nm], W band-gap
// correction, lambda IMFP [nm], L attenuation length [nm].
#include "pellicle/transport/attenuation_length.hpp"

#include <algorithm>
#include <array>

#include "base/nearest.hpp"
#include "pellicle/base/error.hpp"
#include "transport/model_choice.hpp"

namespace pellicle {
namespace {

constexpr std::array kModels = {AttenuationModel::seah_gilmore, AttenuationModel::s3, AttenuationModel::cs2,
                                AttenuationModel::organic, AttenuationModel::seah_dench};

/// A predicted length is never claimed better than this.
constexpr double kLeastRelativeUncertainty = 0.10;

double s3_nm(const Material& material, double energy_ev) {
  const double z = material.formula.mean_atomic_number();
  const double a = mean_spacing_nm(material);
  return (5.8 + 0.0041 * std::pow(z, 1.7) + 0.088 * std::pow(energy_ev, 0.93)) * std::pow(a, 1.82) /
         (std::pow(z, 0.38) * (1.0 - detail::gap_correction(material)));
}

double cs2_nm(const Material& material, double energy_ev) {
  const double z = material.formula.mean_atomic_number();
  const double a = mean_spacing_nm(material);
  return 0.316 * std::pow(a, 1.5) * (energy_ev / (std::pow(z, 0.45) * (std::log(energy_ev / 27.0) + 3.0)) + 4.0);
}

SolidClass solid_class(const Material& material) {
  if (material.is_organic()) return SolidClass::organic;
  return material.formula.terms().size() == 1 ? SolidClass::element : SolidClass::inorganic;
}

/// The IMFP a length rests on: TPP-2M, or S1 where TPP-2M is refused for this solid.
ModelValue primary_imfp(const Material& material, double energy_ev) {
  ModelValue first = predict_imfp(material, energy_ev, ImfpModel::tpp2m);
  if (first.value_nm) return first;
  ModelValue second = predict_imfp(material, energy_ev, ImfpModel::s1);
  if (!second.value_nm) return first;
  add_finding(second.findings, {"imfp_fallback", Severity::warning,
                                "the length rests on the IMFP of S1 instead of TPP-2M: " + first.refusal});
  return second;
}

/// Sample standard deviation of the in-range, non-legacy models.
double spread_nm(const std::vector<ModelValue>& models) {
  double sum = 0.0;
  int count = 0;
  for (const ModelValue& m : models) {
    if (m.value_nm && !m.legacy) {
      sum += *m.value_nm;
      ++count;
    }
  }
  if (count < 2) return 0.0;
  const double mean = sum / count;
  double squares = 0.0;
  for (const ModelValue& m : models) {
    if (m.value_nm && !m.legacy) squares += (*m.value_nm - mean) * (*m.value_nm - mean);
  }
  return std::sqrt(squares / (count - 1));
}

}  // namespace

const ModelInfo& model_info(AttenuationModel model) {
  static const std::array<ModelInfo, kModels.size()> infos = {{
      {"Seah-Gilmore", "seah2001elastic", 200.0, 2000.0, false,
       "IMFP times a factor for elastic scattering; used in the range where the factor was tried"},
      {"S3", "seah2012al", 100.0, 10000.0, false, "attenuation length from density, mean atomic number and band gap"},
      {"CS2", "cumpson1997", 100.0, 6000.0, false, "attenuation length from density and mean atomic number"},
      {"organic", "seah2011", 200.0, 2000.0, false, "power law of organic solids"},
      {"Seah-Dench", "seah1979", 50.0, 6000.0, true, "curves of 1979, by class of solid; legacy, for comparison only"},
  }};
  return infos[static_cast<std::size_t>(model)];
}

std::span<const AttenuationModel> attenuation_models() { return kModels; }

AttenuationModel attenuation_model(std::string_view name) {
  std::vector<std::string> names;
  for (const AttenuationModel model : kModels) {
    const std::string& known = model_info(model).name;
    if (known.size() == name.size() && detail::edit_distance(known, name) == 0) return model;
    names.push_back(known);
  }
  throw InputError("", "unknown attenuation-length model \"" + std::string(name) + "\"",
                   "expected one of: " + detail::join_names(names));
}

double seah_gilmore_factor(double mean_atomic_number, double energy_ev) noexcept {
  return (1.0 - 0.028 * std::sqrt(mean_atomic_number)) * (0.501 + 0.068 * std::log(energy_ev));
}

double organic_attenuation_length_nm(double energy_ev) noexcept { return 0.00837 * std::pow(energy_ev, 0.842); }

double seah_dench_length_nm(SolidClass solid_class, double energy_ev) noexcept {
  const double square = energy_ev * energy_ev;
  const double root = std::sqrt(energy_ev);
  switch (solid_class) {
    case SolidClass::element: return 143.0 / square + 0.054 * root;
    case SolidClass::inorganic: return 641.0 / square + 0.096 * root;
    case SolidClass::organic: break;
  }
  return 31.0 / square + 0.087 * root;
}

ModelValue predict_attenuation_length(const Material& material, double energy_ev, AttenuationModel model) {
  const ModelInfo& info = model_info(model);
  ModelValue result{info.name, std::nullopt, detail::range_refusal(info, energy_ev), info.legacy, {}};
  if (model == AttenuationModel::organic && !material.is_organic()) {
    result.refusal = "the power law is for organic solids, which " + material.id + " is not";
  }
  if (!result.refusal.empty()) return result;
  switch (model) {
    case AttenuationModel::seah_gilmore: {
      ModelValue imfp = primary_imfp(material, energy_ev);
      if (!imfp.value_nm) {
        result.refusal = imfp.refusal;
        return result;
      }
      result.findings = std::move(imfp.findings);
      result.value_nm = *imfp.value_nm * seah_gilmore_factor(material.formula.mean_atomic_number(), energy_ev);
      break;
    }
    case AttenuationModel::s3:
      detail::note_missing_gap(material, result.findings);
      result.value_nm = s3_nm(material, energy_ev);
      break;
    case AttenuationModel::cs2: result.value_nm = cs2_nm(material, energy_ev); break;
    case AttenuationModel::organic: result.value_nm = organic_attenuation_length_nm(energy_ev); break;
    case AttenuationModel::seah_dench: result.value_nm = seah_dench_length_nm(solid_class(material), energy_ev); break;
  }
  return result;
}

AttenuationLength survey_lengths(const Material& material, double energy_ev) {
  detail::check_energy(energy_ev);
  AttenuationLength length;
  for (const ImfpModel model : imfp_models()) length.imfp.push_back(predict_imfp(material, energy_ev, model));
  for (const AttenuationModel model : kModels) length.models.push_back(predict_attenuation_length(material, energy_ev, model));

  std::vector<AttenuationModel> preference = {AttenuationModel::seah_gilmore, AttenuationModel::s3, AttenuationModel::cs2};
  if (material.is_organic()) preference.insert(preference.begin(), AttenuationModel::organic);
  for (const AttenuationModel model : preference) {
    const ModelValue& candidate = length.models[static_cast<std::size_t>(model)];
    if (!candidate.value_nm) continue;
    length.value_nm = *candidate.value_nm;
    length.model = candidate.model;
    add_findings(length.findings, candidate.findings);
    if (model == AttenuationModel::seah_gilmore) {
      length.imfp_model = length.imfp.front().value_nm ? length.imfp.front().model : length.imfp.back().model;
    }
    if (model != preference.front()) {
      add_finding(length.findings,
                  {"length_model_fallback", Severity::warning,
                   "the length is from " + candidate.model + " because " +
                       length.models[static_cast<std::size_t>(preference.front())].refusal,
                   energy_ev});
    }
    break;
  }
  if (!length.model.empty()) {
    length.standard_uncertainty_nm = std::max(kLeastRelativeUncertainty * length.value_nm, spread_nm(length.models));
  }
  return length;
}

AttenuationLength attenuation_length(const Material& material, double energy_ev) {
  AttenuationLength length = survey_lengths(material, energy_ev);
  if (length.model.empty()) {
    throw DomainError(material.id, "no attenuation-length model holds at " + energy_text(energy_ev) + " eV",
                      "give the length");
  }
  return length;
}

}  // namespace pellicle
