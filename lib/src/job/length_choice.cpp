#include "job/length_choice.hpp"

#include <algorithm>
#include <cmath>

#include "pellicle/base/number.hpp"
#include "pellicle/transport/calibrated_length.hpp"

namespace pellicle::detail {
namespace {

/// d ln L/d ln ρ of the model in use, over one per cent of density.
double density_exponent(const Material& material, double energy_ev, const AttenuationLength& length) {
  constexpr double kStep = 1.01;
  Material denser = material;
  denser.density_g_cm3 = std::min(material.density_g_cm3 * kStep, 30.0);
  const ModelValue moved = predict_attenuation_length(denser, energy_ev, attenuation_model(length.model));
  if (!moved.value_nm || denser.density_g_cm3 == material.density_g_cm3) return 0.0;
  return std::log(*moved.value_nm / length.value_nm) / std::log(denser.density_g_cm3 / material.density_g_cm3);
}

}  // namespace

LengthUsed choose_length(const Run& run, const Line& line, const std::string& layer, double energy_ev) {
  const Material& material = run.sample.material(layer);
  LengthUsed used;
  used.material = material.id;
  used.energy_ev = energy_ev;
  if (const auto given = line.length_nm.find(layer); given != line.length_nm.end()) {
    used.length_nm = given->second;
    used.origin = "given";
    return used;
  }
  if (!run.length_set.empty() && line.level && !material.is_organic()) {
    const CalibratedLength& row = calibrated_length(run.length_set, material.id, line.level->name, run.source.name);
    used.length_nm = row.length_nm;
    used.origin = used.formula = "set " + row.set;
    if (row.mark != "published") {
      add_finding(used.findings, {"length_from_memory", Severity::note,
                                  "the length set " + row.set + " (" + row.source + ") is " + row.mark +
                                      "; verify it against your copy of the source"});
    }
    return used;
  }
  const AttenuationLength predicted = attenuation_length(material, energy_ev);
  used.length_nm = Quantity(predicted.value_nm, predicted.standard_uncertainty_nm);
  used.origin = "predicted: " + predicted.model + (predicted.imfp_model.empty() ? "" : " on " + predicted.imfp_model);
  used.predicted = true;
  used.formula = predicted.imfp_model.empty() ? predicted.model : predicted.imfp_model;
  used.density_exponent = density_exponent(material, energy_ev, predicted);
  used.findings = predicted.findings;
  add_finding(used.findings, {"length_predicted", Severity::note,
                              "the attenuation length in " + material.id + " at " + energy_text(energy_ev) +
                                  " eV is predicted (" + predicted.model + "), not measured",
                              predicted.value_nm});
  return used;
}

}  // namespace pellicle::detail
