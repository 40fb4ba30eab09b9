#include <algorithm>
#include <bit>
#include <cmath>
#include <string>
#include <utility>
#include <vector>

#include "base/nearest.hpp"
#include "pellicle/base/error.hpp"
#include "pellicle/base/number.hpp"
#include "pellicle/io/area_table.hpp"
#include "pellicle/io/run_file.hpp"
#include "pellicle/lines/core_level.hpp"
#include "pellicle/matter/material.hpp"
#include "property/generators.hpp"
#include "support/close_to.hpp"

using namespace pellicle;
using test::close_to;
using test::holds;
using test::rel;

namespace {

/// Texts that come near to what a reader expects, so that its branches are reached.
rc::Gen<std::string> text_of(const std::string& letters) {
  return rc::gen::container<std::string>(rc::gen::elementOf(letters));
}

std::string written(const std::vector<std::pair<int, int>>& parts) {
  std::string text;
  for (const auto& [z, count] : parts) text += element(z).symbol + std::to_string(count);
  return text;
}

/// Runs a reader; anything but its result or a located input error is a fault.
template <typename Reader>
void reads_or_refuses(Reader&& reader) {
  try {
    reader();
  } catch (const InputError& e) {
    RC_ASSERT(!e.fact().empty());
    RC_ASSERT(std::string(e.what()).find('\n') == std::string::npos);
  } catch (const DomainError& e) {
    RC_ASSERT(!e.fact().empty());
  }
}

}  // namespace

TEST_SUITE("texts") {

TEST_CASE("the order in which a formula is spelled does not matter") {
  holds("spelling order", [] {
    auto parts = *rc::gen::nonEmpty(rc::gen::container<std::vector<std::pair<int, int>>>(
                                        rc::gen::pair(rc::gen::inRange(1, 93), rc::gen::inRange(1, 1000))))
                      .as("elements and counts");
    RC_PRE(parts.size() < 40U);
    const Formula formula = Formula::parse(written(parts));
    std::reverse(parts.begin(), parts.end());
    const Formula backward = Formula::parse(written(parts));
    std::rotate(parts.begin(), parts.begin() + static_cast<std::ptrdiff_t>(parts.size() / 2), parts.end());
    const Formula rotated = Formula::parse(written(parts));
    for (const Formula* other : {&backward, &rotated}) {
      RC_ASSERT(formula.same_composition(*other));
      RC_ASSERT(static_cast<bool>(close_to(other->molar_mass_g_mol(), formula.molar_mass_g_mol(), rel(1e-13))));
      RC_ASSERT(static_cast<bool>(close_to(other->mean_atomic_number(), formula.mean_atomic_number(), rel(1e-13))));
    }
  });
}

TEST_CASE("a bracketed formula with a count is that many formulas") {
  holds("grouping", [] {
    const auto parts = *rc::gen::nonEmpty(rc::gen::container<std::vector<std::pair<int, int>>>(
                                              rc::gen::pair(rc::gen::inRange(1, 93), rc::gen::inRange(1, 100))))
                            .as("elements and counts");
    RC_PRE(parts.size() < 40U);
    const int times = *rc::gen::inRange(1, 1000).as("count of the group");
    const Formula one = Formula::parse(written(parts));
    const Formula many = Formula::parse("(" + written(parts) + ")" + std::to_string(times));
    RC_ASSERT(one.same_composition(many));
    RC_ASSERT(static_cast<bool>(close_to(many.atoms(), times * one.atoms(), rel(1e-13))));
  });
}

TEST_CASE("any text is a formula or refused in one line") {
  holds("formula reader", [] {
    const auto text = *rc::gen::oneOf(text_of("AlOHCaSi()[]{}*.0123456789"),
                                      text_of("Al2O3\xE2\x82\x80\xB7\xC2 \n\t\""), rc::gen::arbitrary<std::string>());
    reads_or_refuses([&] {
      const Formula f = Formula::parse(text);
      RC_ASSERT(f.atoms() > 0.0);
      RC_ASSERT(std::isfinite(f.molar_mass_g_mol()));
      RC_ASSERT(f.molar_mass_g_mol() > 0.0);
    });
    reads_or_refuses([&] { (void)catalogue_material(text); });
    reads_or_refuses([&] { (void)core_level(text); });
    reads_or_refuses([&] { (void)photon_source(text); });
  });
}

TEST_CASE("any text is an area table or refused in one line") {
  holds("table reader", [] {
    const std::string head = *rc::gen::element<std::string>("line,area\n", "spot,emission_deg,line,area,area_sd\n",
                                                            "takeoff_deg,area,line,dwell_s\n", "");
    const auto body =
        *rc::gen::oneOf(text_of("a,1.5-e\n\""), text_of("0123456789,.\n-+"), rc::gen::arbitrary<std::string>());
    reads_or_refuses([&] {
      for (const AreaRow& row : read_area_table(head + body, "t.csv").rows) {
        RC_ASSERT(!row.area || std::isfinite(*row.area));
        RC_ASSERT(!row.line.empty());
        RC_ASSERT(!row.emission_deg || (*row.emission_deg >= 0.0 && *row.emission_deg < 90.0));
        RC_ASSERT(!row.area_sd || *row.area_sd > 0.0);
      }
    });
  });
}

TEST_CASE("any text is refused as a run in one line") {
  holds("run reader", [] {
    const std::string head = *rc::gen::element<std::string>("", "[instrument]\nsource = \"Al Ka\"\n", "title = 1\n",
                                                            "[sample]\nsubstrate = ");
    const auto body = *rc::gen::oneOf(text_of("[]=\"{}. \nabs1,#"), rc::gen::arbitrary<std::string>());
    bool refused = false;
    try {
      (void)parse_run(head + body, "run.toml");
    } catch (const InputError& e) {
      refused = true;
      RC_ASSERT(std::string(e.what()).find('\n') == std::string::npos);
      RC_ASSERT(std::string(e.what()).starts_with("run.toml"));
    }
    RC_ASSERT(refused);
  });
}

TEST_CASE("every finite number is read back as it was written") {
  holds("numbers", [] {
    const double value = std::bit_cast<double>(*rc::gen::arbitrary<std::uint64_t>().as("bits"));
    RC_PRE(std::isfinite(value));
    const auto again = parse_number(number_text(value));
    RC_ASSERT(again.has_value());
    RC_ASSERT(test::same_bits(*again, value));
    RC_ASSERT(!rounded_text(value, 4).empty());
    RC_ASSERT(!value_with_uncertainty(value, std::abs(value)).empty());
  });
}

TEST_CASE("the edit distance is a distance") {
  holds("triangle", [] {
    const auto word = [] { return text_of("abAB_"); };
    const std::string a = *word(), b = *word(), c = *word();
    using detail::edit_distance;
    RC_ASSERT(edit_distance(a, a) == 0U);
    RC_ASSERT(edit_distance(a, b) == edit_distance(b, a));
    RC_ASSERT(edit_distance(a, c) <= edit_distance(a, b) + edit_distance(b, c));
    RC_ASSERT(edit_distance(a, b) <= std::max(a.size(), b.size()));
  });
}

}  // TEST_SUITE("texts")
