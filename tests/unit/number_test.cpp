#include "pellicle/base/number.hpp"

#include <limits>
#include <string>
#include <vector>

#include "support/close_to.hpp"

using namespace pellicle;

TEST_SUITE("numbers and text") {

TEST_CASE("a number is read whole or not at all") {
  CHECK(parse_number("1.5") == 1.5);
  CHECK(parse_number("-2e3") == -2000.0);
  CHECK(parse_number("0") == 0.0);
  for (const std::string text :
       {"", " 1", "1 ", "1,5", "1.5 nm", "0x10", "--1", "e5", ".", "nan", "NaN", "inf", "-inf", "1e999", "1.5.2"}) {
    CAPTURE(text);
    CHECK_FALSE(parse_number(text).has_value());
  }
}

TEST_CASE("written numbers read back to the same double") {
  using Limits = std::numeric_limits<double>;
  for (const double value :
       {0.1, 1.0 / 3.0, 3.27429, -1e-300, Limits::denorm_min(), Limits::max(), Limits::epsilon(), 1e22, -0.0}) {
    CAPTURE(value);
    const auto again = parse_number(number_text(value));
    REQUIRE(again.has_value());
    CHECK(test::same_bits(*again, value));
  }
  CHECK(number_text(0.1) == "0.1");  // the shortest text, not all digits
}

TEST_CASE("a value is written to the decimal of its uncertainty") {
  // [jcgm100], 7.2.6: two significant digits of the uncertainty, the estimate to the same decimal.
  CHECK(value_with_uncertainty(3.27429, 0.34462) == "3.27 ± 0.34");
  CHECK(value_with_uncertainty(3.27429, 0.0213) == "3.274 ± 0.021");
  CHECK(value_with_uncertainty(1234.56, 12.3) == "1235 ± 12");
  CHECK(value_with_uncertainty(-0.5, 0.25) == "-0.50 ± 0.25");
}

TEST_CASE("a value without uncertainty gets four significant digits") {
  CHECK(value_with_uncertainty(3.27429, std::nullopt) == "3.274");
  CHECK(value_with_uncertainty(3.27429, 0.0) == "3.274");
  CHECK(value_with_uncertainty(0.0327429, std::nullopt) == "0.03274");
}

TEST_CASE("rounding keeps significant digits and avoids exponents of ordinary sizes") {
  CHECK(rounded_text(1386.9, 4) == "1387");
  CHECK(rounded_text(0.00123456, 3) == "0.00123");
  CHECK(rounded_text(-12.345, 3) == "-12.3");
  CHECK(rounded_text(0.0, 4) == "0");
  CHECK(rounded_text(1.5e-7, 2) == "1.5e-07");
  CHECK(rounded_text(2.5e8, 2) == "2.5e+08");
}

TEST_CASE("an energy is written to a tenth of an electronvolt") {
  CHECK(energy_text(1387.1) == "1387.1");
  CHECK(energy_text(1202.0) == "1202");
  CHECK(energy_text(1386.96) == "1387");
}

}  // TEST_SUITE("numbers and text")
