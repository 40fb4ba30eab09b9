#include "pellicle/matter/element.hpp"

#include <map>
#include <set>
#include <string>

#include "pellicle/base/error.hpp"
#include "support/close_to.hpp"

using namespace pellicle;
using test::close_to;

TEST_SUITE("elements") {

TEST_CASE("the table holds hydrogen to uranium once each") {
  const auto all = elements();
  REQUIRE(all.size() == 92);
  std::set<std::string> symbols, names;
  for (std::size_t i = 0; i < all.size(); ++i) {
    CHECK(all[i].z == static_cast<int>(i) + 1);
    symbols.insert(all[i].symbol);
    names.insert(all[i].name);
  }
  CHECK(symbols.size() == 92);
  CHECK(names.size() == 92);
  CHECK(all.front().symbol == "H");
  CHECK(all.back().symbol == "U");
}

TEST_CASE("atomic weights are the standard ones") {
  // Abridged standard weights of [prohaska2022]; the tolerance is half a unit of the last digit printed.
  struct Row {
    std::string symbol;
    double weight, rounding;
  };
  for (const Row& row :
       {Row{"H", 1.008, 5e-4},   Row{"C", 12.011, 5e-4},  Row{"N", 14.007, 5e-4},  Row{"O", 15.999, 5e-4},
        Row{"F", 18.998, 5e-4},  Row{"Al", 26.982, 5e-4}, Row{"Si", 28.085, 5e-4}, Row{"Ti", 47.867, 5e-4},
        Row{"Cr", 51.996, 5e-4}, Row{"Fe", 55.845, 5e-4}, Row{"Ni", 58.693, 5e-4}, Row{"Cu", 63.546, 5e-4},
        Row{"Zr", 91.224, 5e-4}, Row{"Ag", 107.87, 5e-3}, Row{"Hf", 178.49, 5e-3}, Row{"Ta", 180.95, 5e-3},
        Row{"W", 183.84, 5e-3},  Row{"Au", 196.97, 5e-3}, Row{"Pb", 207.2, 5e-2},  Row{"U", 238.03, 5e-3}}) {
    CHECK(close_to(element(row.symbol).atomic_weight_g_mol, row.weight, test::abs(row.rounding), row.symbol));
  }
}

TEST_CASE("atomic weights rise with atomic number but for the known inversions") {
  // Ar-K, Co-Ni, Te-I, Th-Pa: heavier isotopes prevail in the first of each pair.
  const std::set<int> inversions = {18, 27, 52, 90};
  const auto all = elements();
  for (std::size_t i = 0; i + 1 < all.size(); ++i) {
    CAPTURE(all[i].symbol);
    CHECK((all[i + 1].atomic_weight_g_mol < all[i].atomic_weight_g_mol) == inversions.contains(all[i].z));
  }
}

TEST_CASE("symbols are found by their exact letters") {
  REQUIRE(find_element("Al") != nullptr);
  CHECK(find_element("Al")->z == 13);
  CHECK(find_element("AL") == nullptr);
  CHECK(find_element("al") == nullptr);
  CHECK(find_element("") == nullptr);
  CHECK(&element("Si") == find_element("Si"));
  CHECK(element(14).symbol == "Si");
}

TEST_CASE("an unknown element is refused with its nearest neighbour or the range") {
  CHECK(test::contains(test::error_of<InputError>([] { (void)element("AL"); }).hint(), "did you mean \"Al\"?"));
  CHECK(test::contains(test::error_of<InputError>([] { (void)element("Silicon"); }).hint(), "H to U"));
  for (const int z : {0, -1, 93}) {
    CHECK(test::contains(test::error_of<InputError>([&] { (void)element(z); }).hint(), "1 to 92"));
  }
}

TEST_CASE("every element with a decided valence counts at least one electron and no more than twelve") {
  // Outer s and p, or s and d, electrons: 1 to 12 [tanuma1994].
  for (const Element& e : elements()) {
    CAPTURE(e.symbol);
    CHECK(e.valence_electrons >= 1);
    CHECK(e.valence_electrons <= 12);
  }
}

}  // TEST_SUITE("elements")
