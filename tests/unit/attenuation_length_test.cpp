#include "pellicle/transport/attenuation_length.hpp"

#include <algorithm>
#include <cmath>
#include <limits>
#include <map>
#include <optional>
#include <string>
#include <vector>

#include "pellicle/base/error.hpp"
#include "pellicle/transport/calibrated_length.hpp"
#include "support/close_to.hpp"

using namespace pellicle;
using test::close_to;
using test::contains;
using test::error_of;
using test::rel;

namespace {

/// Double against long double over a dozen operations.
constexpr double kArithmetic = 1e-12;

long double spacing(const Material& m) {
  return cbrtl(1e21L * m.formula.molar_mass_g_mol() / (m.density_g_cm3 * 6.02214076e23L * m.formula.atoms()));
}

/// The published equations, written again. Each gives a number without asking for its range.
long double s3(const Material& m, long double e) {  // [seah2012al]
  const long double z = m.formula.mean_atomic_number();
  return (5.8L + 0.0041L * powl(z, 1.7L) + 0.088L * powl(e, 0.93L)) * powl(spacing(m), 1.82L) /
         (powl(z, 0.38L) * (1.0L - 0.02L * m.band_gap_ev.value_or(0.0)));
}
long double cs2(const Material& m, long double e) {  // [cumpson1997]
  const long double z = m.formula.mean_atomic_number();
  return 0.316L * powl(spacing(m), 1.5L) * (e / (powl(z, 0.45L) * (logl(e / 27.0L) + 3.0L)) + 4.0L);
}
long double organic(long double e) { return 0.00837L * powl(e, 0.842L); }  // [seah2011]
long double seah_gilmore(const Material& m, double e) {                    // [seah2001elastic] on the IMFP
  const auto tpp2m = predict_imfp(m, e, ImfpModel::tpp2m).value_nm;
  const auto imfp = tpp2m ? tpp2m : predict_imfp(m, e, ImfpModel::s1).value_nm;
  if (!imfp) return std::nan("");
  return *imfp * (1.0L - 0.028L * sqrtl(m.formula.mean_atomic_number())) * (0.501L + 0.068L * logl(e));
}

/// max(0.10 L, sample standard deviation of the models in range that are not legacy), by hand.
long double expected_sd(const Material& m, double e, long double length) {
  std::vector<long double> values;
  if (e >= 200 && e <= 2000) values.push_back(seah_gilmore(m, e));
  if (e >= 100 && e <= 10000) values.push_back(s3(m, e));
  if (e >= 100 && e <= 6000) values.push_back(cs2(m, e));
  if (m.is_organic() && e >= 200 && e <= 2000) values.push_back(organic(e));
  long double mean = 0.0L, squares = 0.0L;
  for (const long double v : values) mean += v / values.size();
  for (const long double v : values) squares += (v - mean) * (v - mean);
  const long double spread = values.size() < 2 ? 0.0L : sqrtl(squares / (values.size() - 1));
  return std::max(0.10L * length, spread);
}

std::optional<double> value_of(const Material& m, double e, AttenuationModel model) {
  return predict_attenuation_length(m, e, model).value_nm;
}

}  // namespace

TEST_SUITE("attenuation length") {

TEST_CASE("every model is its published equation") {
  for (const std::string id : {"Al", "Cu", "Au", "sio2-thermal", "al2o3-amorphous", "hfo2", "polystyrene", "gaas"}) {
    const Material& m = catalogue_material(id);
    for (const double e : {200.0, 555.0, 1000.0, 1386.9, 2000.0}) {
      CAPTURE(id);
      CAPTURE(e);
      CHECK(close_to(*value_of(m, e, AttenuationModel::s3), static_cast<double>(s3(m, e)), rel(kArithmetic),
                     "seah2012al"));
      CHECK(close_to(*value_of(m, e, AttenuationModel::cs2), static_cast<double>(cs2(m, e)), rel(kArithmetic),
                     "cumpson1997"));
      CHECK(close_to(*value_of(m, e, AttenuationModel::seah_gilmore), static_cast<double>(seah_gilmore(m, e)),
                     rel(kArithmetic), "seah2001elastic"));
      CHECK(close_to(organic_attenuation_length_nm(e), static_cast<double>(organic(e)), rel(kArithmetic), "seah2011"));
      CHECK(value_of(m, e, AttenuationModel::organic).has_value() == m.is_organic());
    }
  }
}

TEST_CASE("elastic scattering shortens every length") {
  // The attenuation length lies 5 to 35 % below the mean free path at the energies of photoelectrons [seah2001elastic].
  for (const Material& m : catalogue()) {
    for (const double e : {500.0, 1000.0, 1486.6}) {
      const double factor = seah_gilmore_factor(m.formula.mean_atomic_number(), e);
      CAPTURE(m.id);
      CHECK(factor < 0.97);
      CHECK(factor > 0.65);
    }
  }
}

TEST_CASE("the curves of 1979 depend on the class of solid alone") {
  // 143, 641, 31 over E² and 0.054, 0.096, 0.087 times √E [seah1979].
  for (const double e : {50.0, 100.0, 500.0, 1000.0, 6000.0}) {
    const long double square = static_cast<long double>(e) * e, root = sqrtl(e);
    CHECK(close_to(seah_dench_length_nm(SolidClass::element, e), static_cast<double>(143.0L / square + 0.054L * root),
                   rel(kArithmetic)));
    CHECK(close_to(seah_dench_length_nm(SolidClass::inorganic, e), static_cast<double>(641.0L / square + 0.096L * root),
                   rel(kArithmetic)));
    CHECK(close_to(seah_dench_length_nm(SolidClass::organic, e), static_cast<double>(31.0L / square + 0.087L * root),
                   rel(kArithmetic)));
  }
  CHECK(value_of(catalogue_material("Al"), 1000, AttenuationModel::seah_dench) ==
        seah_dench_length_nm(SolidClass::element, 1000));
  CHECK(value_of(catalogue_material("SiO2"), 1000, AttenuationModel::seah_dench) ==
        seah_dench_length_nm(SolidClass::inorganic, 1000));
  CHECK(value_of(catalogue_material("polystyrene"), 1000, AttenuationModel::seah_dench) ==
        seah_dench_length_nm(SolidClass::organic, 1000));
}

TEST_CASE("inorganic solids rest on Seah-Gilmore over TPP-2M and organic ones on the power law") {
  for (const std::string id : {"Al", "sio2-thermal", "al2o3-amorphous", "Au", "gaas"}) {
    const AttenuationLength l = attenuation_length(catalogue_material(id), 1000.0);
    CAPTURE(id);
    CHECK(l.model == "Seah-Gilmore");
    CHECK(l.imfp_model == "TPP-2M");
    CHECK(l.value_nm == value_of(catalogue_material(id), 1000.0, AttenuationModel::seah_gilmore));
    CHECK_FALSE(has_finding(l.findings, "length_model_fallback"));
  }
  for (const std::string id : {"polystyrene", "hydrocarbon", "ptfe"}) {
    const AttenuationLength l = attenuation_length(catalogue_material(id), 1000.0);
    CAPTURE(id);
    CHECK(l.model == "organic");
    CHECK(l.imfp_model.empty());
    CHECK(l.value_nm == organic_attenuation_length_nm(1000.0));
  }
}

TEST_CASE("where TPP-2M is refused the length rests on S1 and says so") {
  for (const std::string id : {"diamond", "graphite", "bn-cubic"}) {
    const Material& m = catalogue_material(id);
    const AttenuationLength l = attenuation_length(m, 1000.0);
    CAPTURE(id);
    CHECK(l.model == "Seah-Gilmore");
    CHECK(l.imfp_model == "S1");
    CHECK(has_finding(l.findings, "imfp_fallback"));
    const double imfp = imfp_nm(m, 1000.0, ImfpModel::s1);
    CHECK(close_to(l.value_nm, imfp * seah_gilmore_factor(m.formula.mean_atomic_number(), 1000.0), rel(kArithmetic)));
  }
}

TEST_CASE("beyond the range of the preferred model the next one is used and said") {
  const Material& silica = catalogue_material("SiO2");
  for (const double e : {100.0, 199.9, 2000.1, 10000.0}) {
    const AttenuationLength l = attenuation_length(silica, e);
    CAPTURE(e);
    CHECK(l.model == "S3");
    CHECK(l.imfp_model.empty());
    CHECK(has_finding(l.findings, "length_model_fallback"));
    CHECK(close_to(l.value_nm, static_cast<double>(s3(silica, e)), rel(kArithmetic)));
  }
  // 2 keV is the end of the power law as well as of the elastic factor.
  CHECK(attenuation_length(catalogue_material("polystyrene"), 2500.0).model == "S3");
}

TEST_CASE("beyond all models there is no length") {
  for (const double e : {1e-3, 49.0, 99.9, 10000.1, 1e6}) {
    CAPTURE(e);
    const auto error = error_of<DomainError>([&] { (void)attenuation_length(catalogue_material("SiO2"), e); });
    CHECK(error.where() == "sio2-thermal");
    CHECK(error.hint() == "give the length");
  }
  for (const double e : {0.0, -1.0, std::nan(""), std::numeric_limits<double>::infinity()}) {
    CHECK(error_of<InputError>([&] { (void)attenuation_length(catalogue_material("SiO2"), e); }).where() ==
          "energy_ev");
  }
}

TEST_CASE("ranges of the models include their ends and nothing beyond") {
  const Material& silica = catalogue_material("SiO2");
  for (const AttenuationModel model : attenuation_models()) {
    if (model == AttenuationModel::organic) continue;
    const ModelInfo& info = model_info(model);
    CAPTURE(info.name);
    CHECK(value_of(silica, info.lowest_energy_ev, model).has_value());
    CHECK(value_of(silica, info.highest_energy_ev, model).has_value());
    for (const double e : {std::nextafter(info.lowest_energy_ev, 0.0), std::nextafter(info.highest_energy_ev, 1e9)}) {
      const ModelValue v = predict_attenuation_length(silica, e, model);
      CHECK_FALSE(v.value_nm.has_value());
      CHECK(contains(v.refusal, info.name + " holds from"));
    }
  }
  const ModelValue v = predict_attenuation_length(silica, 1000.0, AttenuationModel::organic);
  CHECK(contains(v.refusal, "organic solids"));
  // As the sources state them: [seah2001elastic], [seah2012al], [cumpson1997], [seah2011], [seah1979].
  CHECK(model_info(AttenuationModel::seah_gilmore).highest_energy_ev == 2000.0);
  CHECK(model_info(AttenuationModel::s3).lowest_energy_ev == 100.0);
  CHECK(model_info(AttenuationModel::s3).highest_energy_ev == 10000.0);
  CHECK(model_info(AttenuationModel::cs2).highest_energy_ev == 6000.0);
}

TEST_CASE("a predicted length is never claimed better than a tenth or than the models agree") {
  std::size_t by_floor = 0, by_spread = 0;
  for (const Material& m : catalogue()) {
    for (const double e : {150.0, 250.0, 700.0, 1386.9, 3000.0, 8000.0}) {
      const AttenuationLength l = attenuation_length(m, e);
      CAPTURE(m.id);
      CAPTURE(e);
      const long double sd = expected_sd(m, e, l.value_nm);
      CHECK(close_to(l.standard_uncertainty_nm, static_cast<double>(sd), rel(1e-10)));  // a difference of like numbers
      (l.standard_uncertainty_nm > 0.1000001 * l.value_nm ? by_spread : by_floor) += 1;
    }
  }
  // Both branches of the rule are met by the catalogue.
  CHECK(by_floor > 10);
  CHECK(by_spread > 10);
}

TEST_CASE("legacy curves are shown but never counted") {
  const AttenuationLength l = attenuation_length(catalogue_material("SiO2"), 1386.9);
  std::map<std::string, ModelValue> models;
  for (const ModelValue& v : l.models) models[v.model] = v;
  CHECK(models.size() == attenuation_models().size());
  CHECK(models.at("Seah-Dench").legacy);
  CHECK(models.at("Seah-Dench").value_nm.has_value());
  for (const AttenuationModel model : attenuation_models()) {
    CHECK(model_info(model).legacy == (model == AttenuationModel::seah_dench));
    CHECK(models.at(model_info(model).name).legacy == model_info(model).legacy);
  }
  REQUIRE(l.imfp.size() == 2);
  CHECK(l.imfp[0].model == "TPP-2M");
  CHECK(l.imfp[1].model == "S1");
}

TEST_CASE("attenuation models are known by their names in any letter case") {
  for (const AttenuationModel model : attenuation_models()) CHECK(attenuation_model(model_info(model).name) == model);
  CHECK(attenuation_model("seah-gilmore") == AttenuationModel::seah_gilmore);
  CHECK(attenuation_model("cs2") == AttenuationModel::cs2);
  CHECK(contains(error_of<InputError>([] { (void)attenuation_model("S4"); }).hint(), "Seah-Dench"));
}

TEST_CASE("a missing band gap is said of the length that needs it") {
  CHECK(has_finding(attenuation_length(make_material("SiO2", 2.2), 1000.0).findings, "band_gap_not_given"));
  CHECK_FALSE(has_finding(attenuation_length(make_material("C8H8", 1.05), 1000.0).findings, "band_gap_not_given"));
}

}  // TEST_SUITE("attenuation length")

TEST_SUITE("calibrated lengths") {

TEST_CASE("each set of silica lengths holds its own pair") {
  // [seah2004]: Al 3.448 and Mg 2.964 nm; [seah2005]: Al 3.485 and Mg 2.996 nm; all recalled.
  const auto length = [](const char* set, const char* source) {
    return calibrated_length(set, "sio2-thermal", "Si 2p", source);
  };
  CHECK(length("sio2-2004", "Al Ka").length_nm.value == 3.448);
  CHECK(length("sio2-2004", "Mg Ka").length_nm.value == 2.964);
  CHECK(length("sio2-2005", "Al Ka").length_nm.value == 3.485);
  CHECK(length("sio2-2005", "Mg Ka").length_nm.value == 2.996);
  CHECK(length("sio2-2004", "Al Ka").source == "seah2004");
  CHECK(length("sio2-2005", "Al Ka").source == "seah2005");
  CHECK_FALSE(length("sio2-2004", "Al Ka").length_nm.standard_uncertainty.has_value());
  CHECK(length("sio2-2005", "Al Ka").length_nm.sd() == 0.022);
}

TEST_CASE("a set that lacks a length is not completed from another") {
  for (const auto& [material, line, source] :
       {std::array{"sio2-thermal", "Si 2p", "Ag La"}, std::array{"sio2-thermal", "O 1s", "Al Ka"},
        std::array{"al2o3-amorphous", "Si 2p", "Al Ka"}}) {
    const auto error = error_of<InputError>([&] { (void)calibrated_length("sio2-2005", material, line, source); });
    CHECK(contains(error.fact(), material));
    CHECK(contains(error.hint(), "sio2-thermal Si 2p Al Ka, sio2-thermal Si 2p Mg Ka"));
  }
}

TEST_CASE("an unknown set is answered with the nearest one") {
  CHECK(contains(
      error_of<InputError>([] { (void)calibrated_length("sio2-2003", "sio2-thermal", "Si 2p", "Al Ka"); }).hint(),
      "sio2-200"));
  CHECK_THROWS_AS((void)calibrated_length("", "sio2-thermal", "Si 2p", "Al Ka"), InputError);
}

TEST_CASE("no set holds the same line twice and every row names its source and mark") {
  const auto rows = calibrated_lengths();
  CHECK(rows.size() >= 4);
  for (const CalibratedLength& row : rows) {
    CHECK(&calibrated_length(row.set, row.material, row.line, row.photon_source) == &row);
    CHECK_FALSE(row.source.empty());
    CHECK_FALSE(row.mark.empty());
    CHECK(row.length_nm.value > 0.0);
    CHECK(catalogue_material(row.material).id == row.material);
  }
}

TEST_CASE("calibrated and predicted lengths of silica agree within the uncertainty that is claimed") {
  for (const CalibratedLength& row : calibrated_lengths()) {
    const AttenuationLength l = attenuation_length(catalogue_material(row.material), row.kinetic_energy_ev);
    CHECK(std::abs(l.value_nm - row.length_nm.value) < 2.0 * l.standard_uncertainty_nm);
  }
}

}  // TEST_SUITE("calibrated lengths")
