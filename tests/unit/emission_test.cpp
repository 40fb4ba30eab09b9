#include "pellicle/sample/emission.hpp"

#include <cmath>
#include <limits>

#include "pellicle/base/error.hpp"
#include "pellicle/sample/stack.hpp"
#include "support/close_to.hpp"

using namespace pellicle;
using test::contains;
using test::error_of;

namespace {
constexpr double kNan = std::numeric_limits<double>::quiet_NaN();
constexpr double kInf = std::numeric_limits<double>::infinity();
}  // namespace

TEST_SUITE("emission angle") {

TEST_CASE("take-off and emission angles add up to a right angle") {
  // Emission from the normal, take-off from the surface [iso18115].
  CHECK(emission_deg_from_takeoff(90.0) == 0.0);
  CHECK(emission_deg_from_takeoff(56.0) == 34.0);
  CHECK(emission_deg_from_takeoff(45.0) == 45.0);
  CHECK(emission_deg_from_takeoff(0.5) == 89.5);
  for (const double takeoff : {0.0, -1.0, 90.1, 180.0, kNan, kInf, -kInf}) {
    CHECK(error_of<InputError>([&] { (void)emission_deg_from_takeoff(takeoff); }).where() == "takeoff_deg");
  }
}

TEST_CASE("only angles from the normal to short of the surface emit") {
  for (const double angle : {0.0, -0.0, 34.0, 89.999999}) CHECK_NOTHROW(check_emission_deg(angle));
  for (const double angle : {90.0, -1e-9, 120.0, kNan, kInf, -kInf}) {
    CHECK(error_of<InputError>([&] { check_emission_deg(angle); }).where() == "emission_deg");
  }
}

TEST_CASE("grazing emission is noted above fifty and warned of above sixty and refused trust above eighty degrees") {
  // Limits of a constant attenuation length [cumpson1997].
  const auto severity = [](double angle) {
    const Findings f = emission_findings(angle);
    REQUIRE(f.size() == 1);
    CHECK(f.front().code == "emission_angle");
    CHECK(f.front().value == angle);
    return f.front().severity;
  };
  CHECK(emission_findings(0.0).empty());
  CHECK(emission_findings(50.0).empty());
  CHECK(severity(50.001) == Severity::note);
  CHECK(severity(60.0) == Severity::note);
  CHECK(severity(60.001) == Severity::warning);
  CHECK(severity(80.0) == Severity::warning);
  CHECK(severity(80.001) == Severity::error);
  CHECK(emission_findings(80.001).front().limit == 80.0);
  CHECK(emission_findings(70.0).front().limit == 60.0);
  CHECK(emission_findings(55.0).front().limit == 50.0);
}

TEST_CASE("a length given for its angle needs no remark about the angle") {
  CHECK(emission_findings(85.0, true).empty());
}

}  // TEST_SUITE("emission angle")

TEST_SUITE("sample") {

TEST_CASE("layers are counted from the outermost down to the substrate") {
  const Stack stack{{{"contamination", catalogue_material("hydrocarbon")}, {"oxide", catalogue_material("SiO2")}},
                    catalogue_material("Si")};
  CHECK(stack.position("contamination") == 0);
  CHECK(stack.position("oxide") == 1);
  CHECK(stack.position("substrate") == 2);
  CHECK(stack.material("oxide").id == "sio2-thermal");
  CHECK(stack.material("substrate").id == "Si");
  CHECK(contains(error_of<InputError>([&] { (void)stack.position("oxid"); }).hint(), "oxide"));
  CHECK(contains(error_of<InputError>([&] { (void)stack.material("xyzzy"); }).hint(), "substrate"));
}

}  // TEST_SUITE("sample")
