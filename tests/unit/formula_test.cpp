#include "pellicle/matter/formula.hpp"

#include <string>
#include <utility>
#include <vector>

#include "pellicle/base/error.hpp"
#include "support/close_to.hpp"

using namespace pellicle;
using test::close_to;
using test::rel;

namespace {

using Counts = std::vector<std::pair<std::string, double>>;

/// Counts are small products of the decimal numbers written: a few roundings of a double.
constexpr double kRounding = 1e-14;

void check_counts(const std::string& text, const Counts& expected) {
  CAPTURE(text);
  const Formula formula = Formula::parse(text);
  REQUIRE(formula.terms().size() == expected.size());
  for (std::size_t i = 0; i < expected.size(); ++i) {
    CHECK(formula.terms()[i].element->symbol == expected[i].first);
    CHECK(close_to(formula.terms()[i].count, expected[i].second, rel(kRounding), expected[i].first));
    CHECK(formula.count(expected[i].first) == formula.terms()[i].count);
  }
}

}  // namespace

TEST_SUITE("chemical formula") {

TEST_CASE("plain formulas hold the atoms they name in order of appearance") {
  check_counts("Al", {{"Al", 1}});
  check_counts("Al2O3", {{"Al", 2}, {"O", 3}});
  check_counts("CO", {{"C", 1}, {"O", 1}});
  check_counts("Co", {{"Co", 1}});
  check_counts("AlO(OH)", {{"Al", 1}, {"O", 2}, {"H", 1}});
}

TEST_CASE("an element named twice is counted together") {
  check_counts("CH3COOH", {{"C", 2}, {"H", 4}, {"O", 2}});
  check_counts("OHH", {{"O", 1}, {"H", 2}});
}

TEST_CASE("a group multiplies all that it holds however deep it nests") {
  check_counts("Ca10(PO4)6(OH)2", {{"Ca", 10}, {"P", 6}, {"O", 26}, {"H", 2}});
  check_counts("[Co(NH3)6]Cl3", {{"Co", 1}, {"N", 6}, {"H", 18}, {"Cl", 3}});
  check_counts("{[Fe(CN)6]2K3}4", {{"Fe", 8}, {"C", 48}, {"N", 48}, {"K", 12}});
  check_counts("((H2)3O)2", {{"H", 12}, {"O", 2}});
  const std::string deep = std::string(32, '(') + "Si" + std::string(32, ')');
  check_counts(deep, {{"Si", 1}});
}

TEST_CASE("counts may be decimals") {
  check_counts("TiC0.95", {{"Ti", 1}, {"C", 0.95}});
  check_counts("Al0.3Ga0.7As", {{"Al", 0.3}, {"Ga", 0.7}, {"As", 1}});
  check_counts("Fe.947O", {{"Fe", 0.947}, {"O", 1}});
  check_counts("(SiO2)1.5", {{"Si", 1.5}, {"O", 3}});
}

TEST_CASE("a hydrate counts its water by the number in front of it") {
  const Counts vitriol = {{"Cu", 1}, {"S", 1}, {"O", 9}, {"H", 10}};
  check_counts("CuSO4*5H2O", vitriol);
  check_counts("CuSO4\u00B75H2O", vitriol);  // middle dot
  check_counts("CuSO4\u22C55H2O", vitriol);  // dot operator
  check_counts("CuSO4\u20225H2O", vitriol);  // bullet
  check_counts("CaSO4*0.5H2O", {{"Ca", 1}, {"S", 1}, {"O", 4.5}, {"H", 1}});
  check_counts("Mg(OH)2*H2O", {{"Mg", 1}, {"O", 3}, {"H", 4}});
}

TEST_CASE("subscript digits count as digits") {
  check_counts("Al\u2082O\u2083", {{"Al", 2}, {"O", 3}});
  check_counts("Ca\u2081\u2080(PO\u2084)\u2086(OH)\u2082", {{"Ca", 10}, {"P", 6}, {"O", 26}, {"H", 2}});
}

TEST_CASE("the molar mass is the sum of the standard atomic weights") {
  // Abridged weights of [prohaska2022], good to half a unit of the last digit printed.
  struct Row {
    std::string formula;
    double mass, rounding;
  };
  for (const Row& row : {Row{"H2O", 2 * 1.008 + 15.999, 0.0015}, Row{"Al2O3", 2 * 26.982 + 3 * 15.999, 0.0025},
                         Row{"SiO2", 28.085 + 2 * 15.999, 0.0015}, Row{"Fe2O3", 2 * 55.845 + 3 * 15.999, 0.0025},
                         Row{"CuSO4*5H2O", 63.546 + 32.06 + 9 * 15.999 + 10 * 1.008, 0.015}}) {
    CHECK(close_to(Formula::parse(row.formula).molar_mass_g_mol(), row.mass, test::abs(row.rounding), row.formula));
  }
}

TEST_CASE("the mean atomic number is averaged over atoms") {
  CHECK(close_to(Formula::parse("SiO2").mean_atomic_number(), 10.0, rel(kRounding)));
  CHECK(close_to(Formula::parse("Al2O3").mean_atomic_number(), 10.0, rel(kRounding)));
  CHECK(close_to(Formula::parse("CH2").mean_atomic_number(), 8.0 / 3.0, rel(kRounding)));
  CHECK(close_to(Formula::parse("(CH2)500").mean_atomic_number(), 8.0 / 3.0, rel(kRounding)));
  CHECK(Formula::parse("Ca10(PO4)6(OH)2").atoms() == 44.0);
}

TEST_CASE("composition ignores spelling and size of the formula unit but nothing else") {
  const auto same = [](const char* a, const char* b) {
    const bool forth = Formula::parse(a).same_composition(Formula::parse(b));
    CHECK(forth == Formula::parse(b).same_composition(Formula::parse(a)));
    return forth;
  };
  CHECK(same("SiO2", "O2Si"));
  CHECK(same("SiO2", "O4Si2"));
  CHECK(same("AlO(OH)", "HAlO2"));
  CHECK(same("CH2", "C3H6"));
  CHECK_FALSE(same("SiO2", "SiO"));
  CHECK_FALSE(same("SiO2", "Si"));
  CHECK_FALSE(same("SiO2", "TiO2"));
  CHECK_FALSE(same("Fe0.947O", "FeO"));
  CHECK_FALSE(same("Fe0.9999O", "FeO"));
  CHECK_FALSE(same("Al2O3", "Al2O3*H2O"));
}

TEST_CASE("an absent element counts zero atoms") {
  CHECK(Formula::parse("SiO2").count("Al") == 0.0);
  CHECK(Formula::parse("SiO2").count("o") == 0.0);
}

TEST_CASE("the text of a formula is kept as written") {
  CHECK(Formula::parse("Al\u2082O\u2083").text() == "Al\u2082O\u2083");
}

TEST_CASE("every fault of a formula is named with the character where it stands") {
  struct Fault {
    std::string text;
    int position;
    const char* fact;
  };
  const std::string too_deep = std::string(33, '(') + "Si" + std::string(33, ')');
  const std::vector<Fault> faults = {
      {"al2O3", 1, "expected the symbol"},
      {"Al2o3", 4, "cannot stand here"},
      {"Xx2", 1, "unknown element \"Xx\""},
      {"AlXq", 3, "unknown element \"Xq\""},
      {"Al(OH", 3, "never closed"},
      {"Al[(OH)2", 3, "never closed"},
      {"Al(OH]3", 6, "expected \")\""},
      {"Al[OH}3", 6, "expected \"]\""},
      {"Al()2", 3, "empty"},
      {"Al2O0", 5, "greater than zero"},
      {"Al0.0O", 3, "greater than zero"},
      {"Al1000001", 3, "greater than 1e6"},
      {"Al2.3.4", 3, "not a number"},
      {"Al.", 3, "not a number"},
      {"CuSO4*", 7, "nothing follows the dot"},
      {"CuSO4**H2O", 7, "expected the symbol"},
      {"CuSO4*5", 8, "expected the symbol"},
      {")", 1, "expected the symbol"},
      {"Al)", 3, "cannot stand here"},
      {" Al", 1, "expected the symbol"},
      {"Al2 O3", 4, "cannot stand here"},
      {"Al1e5", 4, "cannot stand here"},
      {"Al-2", 3, "cannot stand here"},
      {"Al2O3\n", 6, "cannot stand here"},
      {too_deep, 33, "deeper than 32"},
      // Positions count characters as a person does, not bytes.
      {"Al\u2082O\u2083Xx", 6, "unknown element"},
      {"CuSO4\u00B7\u00B7", 7, "expected the symbol"},
      {"\u2082", 2, "expected the symbol"},
  };
  for (const Fault& fault : faults) {
    CAPTURE(fault.text);
    const auto error = test::error_of<InputError>([&] { (void)Formula::parse(fault.text); });
    CHECK(error.where() == "formula \"" + fault.text + "\", character " + std::to_string(fault.position));
    CHECK_MESSAGE(test::contains(error.fact(), fault.fact), error.fact());
  }
}

TEST_CASE("formulas without any place to point at are refused as a whole") {
  CHECK(test::contains(test::error_of<InputError>([] { (void)Formula::parse(""); }).what(), "the formula is empty"));
  const std::string longest = std::string(400, 'C');
  CHECK(Formula::parse(longest).count("C") == 400.0);
  CHECK(test::contains(test::error_of<InputError>([&] { (void)Formula::parse(longest + "C"); }).what(),
                       "longer than 400"));
  const std::string heaped = "((C1000000)1000000)1000000";
  CHECK(test::contains(test::error_of<InputError>([&] { (void)Formula::parse(heaped); }).what(), "too many atoms"));
}

TEST_CASE("a mistyped element is answered with its nearest neighbour") {
  CHECK(test::error_of<InputError>([] { (void)Formula::parse("Alu2O3"); }).hint() == "did you mean \"Al\"?");
  CHECK(test::error_of<InputError>([] { (void)Formula::parse("Iron"); }).hint() ==
        "expected the symbol of an element from H to U");
}

}  // TEST_SUITE("chemical formula")
