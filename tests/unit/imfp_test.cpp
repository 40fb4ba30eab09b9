#include "pellicle/transport/imfp.hpp"

#include <algorithm>
#include <cmath>
#include <limits>
#include <numeric>
#include <random>
#include <set>
#include <string>
#include <vector>

#include "pellicle/base/error.hpp"
#include "pellicle/base/parallel.hpp"
#include "support/close_to.hpp"
#include "support/threads_variable.hpp"

using namespace pellicle;
using test::close_to;
using test::contains;
using test::error_of;
using test::rel;
using test::same_bits;

namespace {

/// Double against long double over a dozen operations, one of them a logarithm that may come near zero.
constexpr double kArithmetic = 1e-12;

/// A solid with everything the formulas ask for, written out so that nothing is taken from the library.
/// Masses from the weights of [prohaska2022]; densities, gaps and valence electrons as in the check tables.
struct Solid {
  std::string formula;
  double density, gap, electrons, mass, mean_z, atoms;
};

const Solid kSolids[] = {
    {"Al", 2.70, 0.0, 3, 26.9815384, 13, 1},
    {"Si", 2.33, 1.1, 4, 28.085, 14, 1},
    {"Cu", 8.96, 0.0, 11, 63.546, 29, 1},
    {"Au", 19.3, 0.0, 11, 196.96657, 79, 1},
    {"SiO2", 2.20, 9.0, 16, 28.085 + 2 * 15.999, 10, 3},
    {"Al2O3", 3.10, 8.0, 24, 2 * 26.9815384 + 3 * 15.999, 10, 5},
    {"HfO2", 9.68, 5.7, 16, 178.486 + 2 * 15.999, (72.0 + 16.0) / 3, 3},
    {"CH2", 0.94, 8.8, 6, 12.011 + 2 * 1.008, 8.0 / 3, 3},
};

/// Relativistic TPP-2M as printed in [shinotsuka2015] with beta of [tanuma1994], in angstrom as printed, then in nm.
long double tpp2m(const Solid& s, long double e) {
  const long double u = static_cast<long double>(s.electrons) * s.density / s.mass;
  const long double ep = 28.816L * sqrtl(u);
  const long double beta =
      -0.10L + 0.944L / sqrtl(ep * ep + static_cast<long double>(s.gap) * s.gap) + 0.069L * powl(s.density, 0.1L);
  const long double gamma = 0.191L * powl(s.density, -0.5L);
  const long double c = 1.97L - 0.91L * u;
  const long double d = 53.4L - 20.8L * u;
  const long double alpha = (1.0L + e / 1021999.8L) / ((1.0L + e / 510998.9L) * (1.0L + e / 510998.9L));
  return 0.1L * alpha * e / (ep * ep * (beta * logl(gamma * alpha * e) - c / e + d / (e * e)));
}

/// S1 of [seah2012imfp] with W = 0.02 per eV of band gap.
long double s1(const Solid& s, long double e) {
  const long double z = s.mean_z;
  const long double a = cbrtl(1e21L * s.mass / (s.density * 6.02214076e23L * s.atoms));
  return (4.0L + 0.44L * sqrtl(z) + 0.104L * powl(e, 0.872L)) * powl(a, 1.7L) /
         (powl(z, 0.3L) * (1.0L - 0.02L * s.gap));
}

/// Energies over and beyond every range, with everything that is not an energy among them.
std::vector<double> many_energies(std::size_t size) {
  std::mt19937_64 random(20240601);  // any seed would do; a fixed one repeats
  std::uniform_real_distribution<double> decades(0.0, 6.0);
  std::vector<double> energies(size);
  for (double& e : energies) e = std::pow(10.0, decades(random));
  const double odd[] = {0.0,   -1.0,    std::nan(""), std::numeric_limits<double>::infinity(), 50.0, 200000.0,
                        100.0, 10000.0, 1e-320};
  std::copy(std::begin(odd), std::end(odd), energies.begin() + 100);
  return energies;
}

}  // namespace

TEST_SUITE("inelastic mean free path") {

TEST_CASE("TPP-2M is the relativistic formula over its whole range of energy") {
  for (const Solid& s : kSolids) {
    const Material m = make_material(s.formula, s.density, s.gap, s.electrons);
    for (const double e : {50.0, 72.3, 100.0, 200.0, 554.0, 1000.0, 1386.9, 5000.0, 10000.0, 30000.0, 200000.0}) {
      const ModelValue v = predict_imfp(m, e, ImfpModel::tpp2m);
      CAPTURE(s.formula);
      CAPTURE(e);
      REQUIRE(v.value_nm.has_value());
      CHECK(close_to(*v.value_nm, static_cast<double>(tpp2m(s, e)), rel(kArithmetic), "shinotsuka2015"));
      CHECK(imfp_nm(m, e) == *v.value_nm);
    }
  }
}

TEST_CASE("S1 is the universal curve over its whole range of energy") {
  for (const Solid& s : kSolids) {
    const Material m = make_material(s.formula, s.density, s.gap, s.electrons);
    for (const double e : {100.0, 200.0, 554.0, 1000.0, 1386.9, 5000.0, 10000.0}) {
      const ModelValue v = predict_imfp(m, e, ImfpModel::s1);
      CAPTURE(s.formula);
      CAPTURE(e);
      REQUIRE(v.value_nm.has_value());
      CHECK(close_to(*v.value_nm, static_cast<double>(s1(s, e)), rel(kArithmetic), "seah2012imfp"));
      CHECK(imfp_nm(m, e, ImfpModel::s1) == *v.value_nm);
    }
  }
}

TEST_CASE("valence electrons summed by the convention and stated outright give the same length") {
  for (const Solid& s : kSolids) {
    CHECK(imfp_nm(make_material(s.formula, s.density, s.gap), 1000.0) ==
          imfp_nm(make_material(s.formula, s.density, s.gap, s.electrons), 1000.0));
  }
}

TEST_CASE("the size of the formula unit does not change a mean free path") {
  for (const ImfpModel model : imfp_models()) {
    CHECK(close_to(imfp_nm(make_material("Al4O6", 3.1, 8.0), 1000.0, model),
                   imfp_nm(make_material("Al2O3", 3.1, 8.0), 1000.0, model), rel(1e-13)));
  }
}

TEST_CASE("the mean free path grows with energy from two hundred electronvolts up") {
  for (const Material& m : catalogue()) {
    for (const ImfpModel model : imfp_models()) {
      double last = 0.0;
      for (double e = 200.0; e <= 10000.0; e *= 1.3) {
        const auto value = predict_imfp(m, e, model).value_nm;
        if (!value) break;
        CAPTURE(m.id);
        CAPTURE(e);
        CHECK(*value > last);
        last = *value;
      }
    }
  }
}

TEST_CASE("a catalogued solid has a mean free path of a tenth to tens of nanometres at one kiloelectronvolt") {
  for (const Material& m : catalogue()) {
    const auto value = predict_imfp(m, 1000.0, ImfpModel::s1).value_nm;
    CAPTURE(m.id);
    REQUIRE(value.has_value());
    CHECK(*value > 0.8);
    CHECK(*value < 8.0);
  }
}

TEST_CASE("outside its range a model gives no number but a reason") {
  const Material silica = catalogue_material("SiO2");
  struct Row {
    ImfpModel model;
    double energy;
    bool inside;
  };
  for (const Row& row :
       {Row{ImfpModel::tpp2m, 50.0, true}, Row{ImfpModel::tpp2m, std::nextafter(50.0, 0.0), false},
        Row{ImfpModel::tpp2m, 200000.0, true}, Row{ImfpModel::tpp2m, std::nextafter(200000.0, 1e6), false},
        Row{ImfpModel::s1, 100.0, true}, Row{ImfpModel::s1, std::nextafter(100.0, 0.0), false},
        Row{ImfpModel::s1, 10000.0, true}, Row{ImfpModel::s1, std::nextafter(10000.0, 1e6), false}}) {
    const ModelValue v = predict_imfp(silica, row.energy, row.model);
    CAPTURE(v.model);
    CAPTURE(row.energy);
    CHECK(v.value_nm.has_value() == row.inside);
    CHECK(v.refusal.empty() == row.inside);
    if (!row.inside) {
      CHECK(contains(v.refusal, v.model + " holds from"));
      const auto error = error_of<DomainError>([&] { (void)imfp_nm(silica, row.energy, row.model); });
      CHECK(error.fact() == v.refusal);
      CHECK(contains(error.hint(), "choose another model or give the length"));
    }
  }
}

TEST_CASE("an energy that is no energy has no mean free path") {
  for (const double e : {0.0, -1000.0, std::nan(""), std::numeric_limits<double>::infinity()}) {
    for (const ImfpModel model : imfp_models()) {
      CHECK_THROWS_AS((void)predict_imfp(catalogue_material("Si"), e, model), InputError);
    }
  }
}

TEST_CASE("solids for which TPP-2M is known to fail are refused with the reason") {
  // Diamond, graphite, caesium [shinotsuka2015]; both boron nitrides [shinotsuka2019].
  for (const std::string id : {"diamond", "graphite", "bn-hexagonal", "bn-cubic"}) {
    const ModelValue v = predict_imfp(catalogue_material(id), 1000.0, ImfpModel::tpp2m);
    CAPTURE(id);
    CHECK_FALSE(v.value_nm.has_value());
    CHECK(contains(v.refusal, "fail"));
    CHECK(predict_imfp(catalogue_material(id), 1000.0, ImfpModel::s1).value_nm.has_value());
  }
  CHECK_FALSE(predict_imfp(make_material("Cs", 1.87, 0.0, 1.0), 1000.0, ImfpModel::tpp2m).value_nm.has_value());
  CHECK_FALSE(predict_imfp(make_material("NB", 2.1, 6.0), 1000.0, ImfpModel::tpp2m).value_nm.has_value());
}

TEST_CASE("solids for which TPP-2M reads high are computed with a caution") {
  for (const std::string formula : {"LiF", "FLi", "Si3N4", "MgF2"}) {  // [shinotsuka2019], and by comparison with S1
    const ModelValue v = predict_imfp(make_material(formula, 3.0, 8.0), 1000.0, ImfpModel::tpp2m);
    CAPTURE(formula);
    CHECK(v.value_nm.has_value());
    CHECK(has_finding(v.findings, "imfp_caution"));
    CHECK_FALSE(
        has_finding(predict_imfp(make_material(formula, 3.0, 8.0), 1000.0, ImfpModel::s1).findings, "imfp_caution"));
  }
  CHECK_FALSE(has_finding(predict_imfp(catalogue_material("SiO2"), 1000.0, ImfpModel::tpp2m).findings, "imfp_caution"));
}

TEST_CASE("a valence-electron density beyond all tried solids raises a caution") {
  // Invented solids; the tried ones lie at U of about 0.03 to 1.6 mol/cm³.
  const auto caution = [](double density, double electrons) {
    const ModelValue v = predict_imfp(make_material("Al", density, 0.0, electrons), 1000.0, ImfpModel::tpp2m);
    return has_finding(v.findings, "imfp_caution");
  };
  CHECK_FALSE(caution(2.7, 3.0));
  CHECK(caution(0.26, 3.0));  // U = 0.0289
  CHECK(caution(2.7, 17.0));  // U = 1.701
  CHECK_FALSE(caution(0.28, 3.0));
  CHECK_FALSE(caution(2.7, 15.5));
}

TEST_CASE("a missing band gap is used as zero and said") {
  const Material without = make_material("SiO2", 2.2);
  const Material metal = make_material("SiO2", 2.2, 0.0);
  for (const ImfpModel model : imfp_models()) {
    const ModelValue v = predict_imfp(without, 1000.0, model);
    CHECK(has_finding(v.findings, "band_gap_not_given"));
    CHECK(v.value_nm == predict_imfp(metal, 1000.0, model).value_nm);
    CHECK_FALSE(has_finding(predict_imfp(metal, 1000.0, model).findings, "band_gap_not_given"));
  }
}

TEST_CASE("undecided valence electrons refuse TPP-2M but not S1") {
  const Material ceria = make_material("CeO2", 7.2, 3.2);
  CHECK(contains(predict_imfp(ceria, 1000.0, ImfpModel::tpp2m).refusal, "electrons of Ce could not be decided"));
  CHECK(predict_imfp(ceria, 1000.0, ImfpModel::s1).value_nm.has_value());
  CHECK(predict_imfp(make_material("CeO2", 7.2, 3.2, 21.0), 1000.0, ImfpModel::tpp2m).value_nm.has_value());
}

TEST_CASE("doubtful valence electrons are said of the mean free path that rests on them") {
  const Material zinc_oxide = make_material("ZnO", 5.68, 3.3);
  CHECK(has_finding(predict_imfp(zinc_oxide, 1000.0, ImfpModel::tpp2m).findings, "valence_electrons_doubtful"));
  CHECK_FALSE(has_finding(predict_imfp(zinc_oxide, 1000.0, ImfpModel::s1).findings, "valence_electrons_doubtful"));
}

TEST_CASE("parameters of TPP-2M need a solid") {
  CHECK_NOTHROW((void)tpp2m_parameters(2.7, 26.98, 3, 0.0));
  for (const double bad : {0.0, -1.0, std::nan("")}) {
    CHECK_THROWS_AS((void)tpp2m_parameters(bad, 26.98, 3, 0.0), InputError);
    CHECK_THROWS_AS((void)tpp2m_parameters(2.7, bad, 3, 0.0), InputError);
    CHECK_THROWS_AS((void)tpp2m_parameters(2.7, 26.98, bad, 0.0), InputError);
  }
  CHECK_THROWS_AS((void)tpp2m_parameters(2.7, 26.98, 3, -0.1), InputError);
  // No value where the energy loss of the formula is not positive: invented parameters, D/E² − C/E < 0 beyond 10 eV.
  Tpp2mParameters lossless = tpp2m_parameters(2.7, 26.98, 3, 0.0);
  lossless.beta_per_ev_nm = 0.0;
  lossless.c_per_nm = 10.0;
  lossless.d_ev_per_nm = 100.0;
  CHECK(lossless.imfp_nm(9.9).has_value());
  CHECK_FALSE(lossless.imfp_nm(10.0).has_value());
  CHECK_FALSE(lossless.imfp_nm(50.0).has_value());
}

TEST_CASE("models are known by their names in any letter case") {
  CHECK(imfp_model("TPP-2M") == ImfpModel::tpp2m);
  CHECK(imfp_model("tpp-2m") == ImfpModel::tpp2m);
  CHECK(imfp_model("s1") == ImfpModel::s1);
  for (const std::string name : {"", "TPP", "TPP2M", "S2"}) {
    const auto error = error_of<InputError>([&] { (void)imfp_model(name); });
    for (const ImfpModel model : imfp_models()) CHECK(contains(error.hint(), model_info(model).name));
  }
  std::set<std::string> names;
  for (const ImfpModel model : imfp_models()) {
    CHECK(imfp_model(model_info(model).name) == model);
    CHECK_FALSE(model_info(model).citation.empty());
    CHECK_FALSE(model_info(model).about.empty());
    names.insert(model_info(model).name);
  }
  CHECK(names.size() == imfp_models().size());
}

TEST_CASE("many energies at once give the bits of one at a time and a status for each") {
  const std::vector<double> energies = many_energies(3 * kBlockSize + 77);
  for (const std::string id : {"sio2-thermal", "Au", "diamond"}) {
    const Material& m = catalogue_material(id);
    for (const ImfpModel model : imfp_models()) {
      CAPTURE(id);
      CAPTURE(model_info(model).name);
      std::vector<double> values(energies.size());
      std::vector<Status> status(energies.size());
      imfp_nm(m, energies, model, values, status);
      std::size_t wrong = 0;
      for (std::size_t i = 0; i < energies.size(); ++i) {
        const bool is_energy = energies[i] > 0.0 && std::isfinite(energies[i]);
        const auto one = is_energy ? predict_imfp(m, energies[i], model).value_nm : std::nullopt;
        const Status expected = !is_energy ? Status::invalid_input : one ? Status::ok : Status::out_of_range;
        if (status[i] != expected) ++wrong;
        const bool same = expected == Status::ok ? same_bits(values[i], one.value_or(0.0)) : std::isnan(values[i]);
        if (!same) ++wrong;
      }
      CHECK(wrong == 0);
    }
  }
}

TEST_CASE("no bit of a mean free path depends on place or chunking or thread count") {
  const std::vector<double> energies = many_energies(5 * kBlockSize + 3);
  const Material& m = catalogue_material("SiO2");
  const auto run = [&](std::span<const double> in) {
    std::vector<double> out(in.size());
    std::vector<Status> status(in.size());
    imfp_nm(m, in, ImfpModel::tpp2m, out, status);
    return out;
  };
  const std::vector<double> reference = run(energies);

  std::vector<std::size_t> order(energies.size());
  std::iota(order.begin(), order.end(), std::size_t{0});
  std::shuffle(order.begin(), order.end(), std::mt19937_64(7));
  std::vector<double> shuffled, expected;
  for (const std::size_t i : order) {
    shuffled.push_back(energies[i]);
    expected.push_back(reference[i]);
  }
  CHECK(same_bits(run(shuffled), expected));

  for (const std::size_t chunk : {std::size_t{1000}, kBlockSize - 1, kBlockSize + 1}) {
    std::vector<double> pieces;
    for (std::size_t begin = 0; begin < energies.size(); begin += chunk) {
      const auto part = run(std::span(energies).subspan(begin, std::min(chunk, energies.size() - begin)));
      pieces.insert(pieces.end(), part.begin(), part.end());
    }
    CHECK(same_bits(pieces, reference));
  }
  for (const std::string threads : {"1", "2", "5"}) {
    const test::ThreadsVariable variable(threads);
    CHECK(same_bits(run(energies), reference));
  }
}

TEST_CASE("arrays of different sizes are refused and empty ones are fine") {
  std::vector<double> three(3, 1000.0), two(2);
  std::vector<Status> status3(3), status2(2);
  const Material& m = catalogue_material("Si");
  CHECK_THROWS_AS(imfp_nm(m, three, ImfpModel::s1, two, status3), InputError);
  CHECK_THROWS_AS(imfp_nm(m, three, ImfpModel::s1, three, status2), InputError);
  CHECK_NOTHROW(imfp_nm(m, std::span<const double>(), ImfpModel::s1, std::span<double>(), std::span<Status>()));
}

}  // TEST_SUITE("inelastic mean free path")
