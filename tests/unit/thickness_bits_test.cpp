#include <cmath>
#include <random>
#include <vector>

#include "pellicle/estimate/thickness.hpp"
#include "support/close_to.hpp"

using namespace pellicle;

TEST_SUITE("thickness of arrays") {

TEST_CASE("one measurement and an array of measurements give the same bits") {
  // Invented measurements; the seed is any number.
  std::mt19937_64 engine(20240603);
  const auto draw = [&](double low, double high) { return std::uniform_real_distribution<double>(low, high)(engine); };
  std::size_t different = 0;
  for (int i = 0; i < 2000; ++i) {
    const double ratio = std::pow(10.0, draw(-6.0, 6.0)), reference = draw(0.1, 3.0), film = draw(0.5, 6.0);
    const double substrate = i % 2 == 0 ? film : draw(0.5, 6.0), emission = draw(0.0, 80.0);
    double t = 0.0;
    Status status{};
    const auto one = [](const double& v) { return std::span(&v, 1); };
    thickness_nm({one(ratio), one(reference), one(film), one(substrate), one(emission)}, std::span(&t, 1),
                 std::span(&status, 1));
    RatioMeasurement m;
    m.ratio = ratio;
    m.reference_ratio = reference;
    m.film_line_length_nm = film;
    m.substrate_line_length_nm = substrate;
    m.emission_deg = emission;
    if (!test::same_bits(t, thickness_from_ratio(m).value_nm)) ++different;
  }
  CHECK(different == 0);
}

}  // TEST_SUITE("thickness of arrays")
