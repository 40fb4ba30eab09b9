// Notation: E kinetic energy [eV], Ep plasmon energy [eV], U = Nv rho/M, Z mean atomic number,
// a mean atomic spacing [nm], W band-gap correction of S1.
#include "pellicle/transport/imfp.hpp"

#include <algorithm>
#include <array>
#include <limits>
#include <string>

#include "base/nearest.hpp"
#include "pellicle/base/error.hpp"
#include "pellicle/base/parallel.hpp"
#include "transport/model_choice.hpp"

namespace pellicle {
namespace {

constexpr std::array kModels = {ImfpModel::tpp2m, ImfpModel::s1};

/// U of the solids TPP-2M was tried on lies about here.
constexpr double kLowestU = 0.03;
constexpr double kHighestU = 1.6;

struct Caution {
  std::string selector, kind, action, reason;
};

const std::vector<Caution>& cautions() {
  static const std::vector<Caution> all = [] {
    std::vector<Caution> rows;
    detail::for_each_record("imfp_cautions", [&](const detail::CsvRecord& row) {
      rows.push_back({row.text("selector"), row.text("kind"), row.text("action"), row.text("reason")});
    });
    return rows;
  }();
  return all;
}

/// The caution that a table row states about this solid, or nullptr.
const Caution* caution_for(const Material& material) {
  for (const Caution& caution : cautions()) {
    if (caution.kind == "material" && material.id == caution.selector) return &caution;
    if (caution.kind == "formula" && material.formula.same_composition(Formula::parse(caution.selector))) return &caution;
  }
  return nullptr;
}

bool same_letters(std::string_view a, std::string_view b) { return a.size() == b.size() && detail::edit_distance(a, b) == 0; }

double s1_imfp_nm(const Material& material, double energy_ev) {
  const double z = material.formula.mean_atomic_number();
  const double a = mean_spacing_nm(material);
  return (4.0 + 0.44 * std::sqrt(z) + 0.104 * std::pow(energy_ev, 0.872)) * std::pow(a, 1.7) /
         (std::pow(z, 0.3) * (1.0 - detail::gap_correction(material)));
}

/// What a model needs of a solid, settled once for any number of energies.
struct Prepared {
  std::string refusal;
  Findings findings;
  Tpp2mParameters tpp2m;
};

Prepared prepare(const Material& material, ImfpModel model) {
  Prepared prepared;
  detail::note_missing_gap(material, prepared.findings);
  if (model != ImfpModel::tpp2m) return prepared;
  if (const Caution* caution = caution_for(material)) {
    if (caution->action == "refuse") {
      prepared.refusal = caution->reason;
      return prepared;
    }
    add_finding(prepared.findings, {"imfp_caution", Severity::warning, caution->reason});
  }
  const ValenceElectrons electrons = valence_electrons(material);
  if (!electrons.count) {
    prepared.refusal = electrons.refusal;
    return prepared;
  }
  add_findings(prepared.findings, electrons.findings);
  prepared.tpp2m = tpp2m_parameters(material.density_g_cm3, material.formula.molar_mass_g_mol(), *electrons.count,
                                    material.band_gap_ev.value_or(0.0));
  const double u = prepared.tpp2m.valence_density;
  if (u < kLowestU || u > kHighestU) {
    add_finding(prepared.findings,
                {"imfp_caution", Severity::warning,
                 "the valence-electron density of " + material.id + " lies far outside the solids TPP-2M was tried on", u,
                 u < kLowestU ? kLowestU : kHighestU});
  }
  return prepared;
}

std::optional<double> evaluate(const Material& material, const Prepared& prepared, ImfpModel model, double energy_ev) {
  if (model == ImfpModel::s1) return s1_imfp_nm(material, energy_ev);
  return prepared.tpp2m.imfp_nm(energy_ev);
}

}  // namespace

const ModelInfo& model_info(ImfpModel model) {
  static const ModelInfo tpp2m{"TPP-2M", "shinotsuka2015;tanuma1994", 50.0, 200000.0, false,
                               "relativistic TPP-2M; needs density, valence electrons and band gap"};
  static const ModelInfo s1{"S1", "seah2012imfp", 100.0, 10000.0, false,
                            "S1; needs density, mean atomic number and band gap, no valence electrons"};
  return model == ImfpModel::s1 ? s1 : tpp2m;
}

std::span<const ImfpModel> imfp_models() { return kModels; }

ImfpModel imfp_model(std::string_view name) {
  std::vector<std::string> names;
  for (const ImfpModel model : kModels) {
    if (same_letters(model_info(model).name, name)) return model;
    names.push_back(model_info(model).name);
  }
  throw InputError("", "unknown IMFP model \"" + std::string(name) + "\"", "expected one of: " + detail::join_names(names));
}

std::optional<double> Tpp2mParameters::imfp_nm(double energy_ev) const noexcept {
  // The rest energies stand in the published formula with these digits.
  const double lorentz = 1.0 + energy_ev / 510998.9;
  const double alpha = (1.0 + energy_ev / 1021999.8) / (lorentz * lorentz);
  const double slowed = alpha * energy_ev;
  const double loss = beta_per_ev_nm * std::log(gamma_per_ev * slowed) - c_per_nm / energy_ev +
                      d_ev_per_nm / (energy_ev * energy_ev);
  const double length = slowed / (plasmon_energy_ev * plasmon_energy_ev * loss);
  if (!(length > 0.0) || !std::isfinite(length)) return std::nullopt;
  return length;
}

Tpp2mParameters tpp2m_parameters(double density_g_cm3, double molar_mass_g_mol, double valence_electrons,
                                 double band_gap_ev) {
  if (!(density_g_cm3 > 0.0) || !(molar_mass_g_mol > 0.0) || !(valence_electrons > 0.0) || !(band_gap_ev >= 0.0)) {
    throw InputError("TPP-2M", "density, molar mass and valence electrons must be > 0 and the band gap >= 0");
  }
  const double u = valence_electrons * density_g_cm3 / molar_mass_g_mol;
  Tpp2mParameters p;
  p.valence_density = u;
  p.plasmon_energy_ev = 28.816 * std::sqrt(u);
  p.beta_per_ev_nm = -1.0 + 9.44 / std::hypot(p.plasmon_energy_ev, band_gap_ev) + 0.69 * std::pow(density_g_cm3, 0.1);
  p.gamma_per_ev = 0.191 / std::sqrt(density_g_cm3);
  p.c_per_nm = 19.7 - 9.1 * u;
  p.d_ev_per_nm = 534.0 - 208.0 * u;
  return p;
}

ModelValue predict_imfp(const Material& material, double energy_ev, ImfpModel model) {
  detail::check_energy(energy_ev);
  const ModelInfo& info = model_info(model);
  Prepared prepared = prepare(material, model);
  ModelValue result{info.name, std::nullopt, prepared.refusal, info.legacy, std::move(prepared.findings)};
  if (result.refusal.empty()) result.refusal = detail::range_refusal(info, energy_ev);
  if (!result.refusal.empty()) return result;
  result.value_nm = evaluate(material, prepared, model, energy_ev);
  if (!result.value_nm) result.refusal = info.name + " has no positive value for " + material.id + " at this energy";
  return result;
}

double imfp_nm(const Material& material, double energy_ev, ImfpModel model) {
  const ModelValue result = predict_imfp(material, energy_ev, model);
  if (!result.value_nm) throw DomainError(material.id, result.refusal, "choose another model or give the length");
  return *result.value_nm;
}

void imfp_nm(const Material& material, std::span<const double> energy_ev, ImfpModel model, std::span<double> out,
             std::span<Status> status) {
  if (out.size() != energy_ev.size() || status.size() != energy_ev.size()) {
    throw InputError("imfp_nm", "the output arrays differ in size from energy_ev");
  }
  const ModelInfo& info = model_info(model);
  const Prepared prepared = prepare(material, model);
  for_each_block(energy_ev.size(), [&](std::size_t begin, std::size_t end) {
    for (std::size_t i = begin; i < end; ++i) {
      const double energy = energy_ev[i];
      out[i] = std::numeric_limits<double>::quiet_NaN();
      if (!(energy > 0.0) || !std::isfinite(energy)) {
        status[i] = Status::invalid_input;
      } else if (!prepared.refusal.empty() || energy < info.lowest_energy_ev || energy > info.highest_energy_ev) {
        status[i] = Status::out_of_range;
      } else if (const std::optional<double> value = evaluate(material, prepared, model, energy)) {
        out[i] = *value;
        status[i] = Status::ok;
      } else {
        status[i] = Status::no_solution;
      }
    }
  });
}

}  // namespace pellicle
