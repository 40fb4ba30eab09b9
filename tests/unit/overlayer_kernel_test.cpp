// The vector code of the two-energy equation, once per instruction set that this processor can run.
#include "estimate/overlayer_kernel.hpp"

#include <algorithm>
#include <cmath>
#include <limits>
#include <numeric>
#include <random>
#include <string>
#include <vector>

#include "pellicle/base/parallel.hpp"
#include "pellicle/estimate/thickness.hpp"
#include "support/close_to.hpp"
#include "support/threads_variable.hpp"

using namespace pellicle;
using detail::KernelInput;
using detail::overlayer_kernels;
using detail::OverlayerKernelSet;
using test::close_to;
using test::rel;
using test::same_bits;

namespace {

constexpr double kNan = std::numeric_limits<double>::quiet_NaN();
constexpr double kInf = std::numeric_limits<double>::infinity();
constexpr double kDenormal = std::numeric_limits<double>::denorm_min();
/// Stated in thickness.hpp for x from 1e-6 to 50 and length ratios from 0.2 to 5.
constexpr double kStated = 1e-13;
/// What the vector code itself is built for: its last step ends within 3e-15, then come a few roundings.
constexpr double kVector = 6e-15;

/// ln r of the forward model in long double.
long double log_ratio(long double x, long double rho) { return std::log(-std::expm1(-x)) + rho * x; }

/// Root by bisection in ln x; slow and plain, and nothing in common with the kernel.
double root_by_bisection(double reduced_ratio, double rho) {
  const long double target = std::log(static_cast<long double>(reduced_ratio));
  long double low = -800.0L, high = 800.0L;
  for (int i = 0; i < 90; ++i) {
    const long double middle = (low + high) / 2.0L;
    (log_ratio(std::exp(middle), rho) < target ? low : high) = middle;
  }
  return static_cast<double>(std::exp((low + high) / 2.0L));
}

/// Columns of invented numbers inside the box of the kernel.
struct Columns {
  std::vector<double> ratio, reference, film, substrate, unit;

  static Columns random(std::size_t size) {
    std::mt19937_64 engine(20240607);  // any seed would do; a fixed one repeats
    const auto draw = [&](double low, double high) {
      return std::uniform_real_distribution<double>(low, high)(engine);
    };
    Columns c;
    for (std::size_t i = 0; i < size; ++i) {
      c.ratio.push_back(std::pow(10.0, draw(-7.0, 9.0)));
      c.reference.push_back(draw(0.1, 3.0));
      c.film.push_back(draw(1.0, 4.0));
      // Some lines of equal energy among the others.
      c.substrate.push_back(i % 7 == 3 ? c.film.back() : draw(1.0, 4.0));
      c.unit.push_back(draw(0.2, 5.0));
    }
    return c;
  }

  [[nodiscard]] KernelInput from(std::size_t begin) const {
    return {{&ratio[begin], 1}, {&reference[begin], 1}, {&film[begin], 1}, {&substrate[begin], 1}, {&unit[begin], 1}};
  }

  [[nodiscard]] Columns picked(const std::vector<std::size_t>& order) const {
    Columns c;
    for (const std::size_t i : order) {
      c.ratio.push_back(ratio[i]);
      c.reference.push_back(reference[i]);
      c.film.push_back(film[i]);
      c.substrate.push_back(substrate[i]);
      c.unit.push_back(unit[i]);
    }
    return c;
  }
};

struct Result {
  std::vector<double> values;
  std::vector<Status> status;
  std::size_t left = 0;
};

Result solve(const OverlayerKernelSet& kernel, const KernelInput& input, std::size_t size) {
  Result r{std::vector<double>(size, -1.0), std::vector<Status>(size, Status::out_of_range)};
  r.left = kernel.solve(input, size, r.values.data(), r.status.data());
  return r;
}

/// One element, every input a single value.
Result solve_one(const OverlayerKernelSet& kernel, double ratio, double reference, double film, double substrate,
                 double unit) {
  return solve(kernel, {{&ratio, 0}, {&reference, 0}, {&film, 0}, {&substrate, 0}, {&unit, 0}}, 1);
}

}  // namespace

TEST_SUITE("overlayer kernel") {

TEST_CASE("the kernel in use is one of those that can run here") {
  const auto all = overlayer_kernels();
  REQUIRE(!all.empty());
  CHECK(std::any_of(all.begin(), all.end(), [](const OverlayerKernelSet& k) {
    return &k == &detail::overlayer_kernel();
  }));
}

TEST_CASE("the kernel finds the root that bisection in long double finds") {
  std::mt19937_64 engine(20240608);
  const auto draw = [&](double low, double high) { return std::uniform_real_distribution<double>(low, high)(engine); };
  std::vector<double> ratio, film, expected;
  for (int i = 0; i < 6000; ++i) {
    // Half of them spread over all magnitudes of x, half where films are measured.
    const double x = i % 2 == 0 ? std::pow(10.0, draw(-6.0, std::log10(50.0))) : draw(0.01, 5.0);
    const double rho = i % 3 == 0 ? draw(0.2, 5.0) : std::pow(5.0, draw(-1.0, 1.0));
    const double r = static_cast<double>(std::exp(log_ratio(x, rho)));
    if (!(r <= 0x1p100)) continue;  // left to scalar code, tested below
    ratio.push_back(r);
    film.push_back(rho);
    expected.push_back(root_by_bisection(r, rho));
  }
  const double one = 1.0;
  for (const OverlayerKernelSet& kernel : overlayer_kernels()) {
    CAPTURE(kernel.instruction_set);
    const KernelInput input{{ratio.data(), 1}, {&one, 0}, {film.data(), 1}, {&one, 0}, {&one, 0}};
    const Result r = solve(kernel, input, ratio.size());
    CHECK(r.left == 0);
    double worst = 0.0;
    for (std::size_t i = 0; i < ratio.size(); ++i) {
      CHECK_MESSAGE(close_to(r.values[i], expected[i], rel(kVector)), "r " << ratio[i] << ", rho " << film[i]);
      worst = std::max(worst, std::abs(r.values[i] / expected[i] - 1.0));
    }
    MESSAGE(kernel.instruction_set << ": largest relative error " << worst << " of " << ratio.size());
  }
}

TEST_CASE("the ends of the length ratios converge as well") {
  for (const OverlayerKernelSet& kernel : overlayer_kernels()) {
    CAPTURE(kernel.instruction_set);
    for (const double rho : {0.2, 0.21, 0.25, 0.3, 4.0, 4.8, 5.0}) {
      std::vector<double> ratio;
      for (double exponent = -29.0; exponent < 29.0; exponent += 0.37) ratio.push_back(std::pow(10.0, exponent));
      const double one = 1.0;
      const Result r =
          solve(kernel, {{ratio.data(), 1}, {&one, 0}, {&rho, 0}, {&one, 0}, {&one, 0}}, ratio.size());
      CHECK(r.left == 0);
      for (std::size_t i = 0; i < ratio.size(); ++i)
        CHECK_MESSAGE(close_to(r.values[i], root_by_bisection(ratio[i], rho), rel(kVector)), ratio[i] << " " << rho);
    }
  }
}

TEST_CASE("equal lengths give the logarithm whichever way they are said") {
  const Columns c = Columns::random(301);
  const double length = 2.7;
  for (const OverlayerKernelSet& kernel : overlayer_kernels()) {
    CAPTURE(kernel.instruction_set);
    KernelInput said = c.from(0);
    said.equal_lengths = true;
    KernelInput arrays = c.from(0);
    arrays.substrate_length = arrays.film_length;
    KernelInput singles = c.from(0);
    singles.film_length = singles.substrate_length = {&length, 0};
    const Result expected = solve(kernel, said, 301);
    CHECK(expected.left == 0);
    CHECK(same_bits(solve(kernel, arrays, 301).values, expected.values));
    CHECK(same_bits(solve(kernel, singles, 301).values, expected.values));
    for (std::size_t i = 0; i < 301; ++i)
      CHECK(close_to(expected.values[i], c.unit[i] * std::log1p(c.ratio[i] / c.reference[i]), rel(1e-15)));
  }
}

TEST_CASE("no bit of a root depends on its place in the array or on the length of the array") {
  const std::size_t size = 2 * kBlockSize + 77;
  const Columns c = Columns::random(size);
  for (const OverlayerKernelSet& kernel : overlayer_kernels()) {
    CAPTURE(kernel.instruction_set);
    const Result whole = solve(kernel, c.from(0), size);
    CHECK(whole.left == 0);

    std::vector<std::size_t> order(size);
    std::iota(order.begin(), order.end(), std::size_t{0});
    std::shuffle(order.begin(), order.end(), std::mt19937_64(12));
    std::vector<double> expected;
    for (const std::size_t i : order) expected.push_back(whole.values[i]);
    CHECK(same_bits(solve(kernel, c.picked(order).from(0), size).values, expected));

    std::vector<double> pieces;
    for (std::size_t begin = 0, chunk = 1; begin < size; begin += chunk, chunk = chunk % 71 + 1) {
      chunk = std::min(chunk, size - begin);
      const Result part = solve(kernel, c.from(begin), chunk);
      pieces.insert(pieces.end(), part.values.begin(), part.values.end());
    }
    CHECK(same_bits(pieces, whole.values));
  }
}

TEST_CASE("a neighbour outside the box changes no bit") {
  Columns c = Columns::random(640);
  for (const OverlayerKernelSet& kernel : overlayer_kernels()) {
    CAPTURE(kernel.instruction_set);
    const Result clean = solve(kernel, c.from(0), 640);
    Columns spoilt = c;
    std::size_t spoilt_count = 0;
    for (std::size_t i = 0; i < 640; i += 5, ++spoilt_count) {
      if (i % 2 == 0) spoilt.ratio[i] = i % 4 == 0 ? kNan : 1e300;
      if (i % 2 == 1) spoilt.film[i] = 1000.0;
    }
    const Result r = solve(kernel, spoilt.from(0), 640);
    CHECK(r.left == spoilt_count);
    for (std::size_t i = 0; i < 640; ++i) {
      CHECK((r.status[i] == Status::ok) == (i % 5 != 0));
      if (i % 5 != 0) CHECK(same_bits(r.values[i], clean.values[i]));
    }
  }
}

TEST_CASE("a single value for all elements gives the bits of an array filled with it") {
  const Columns c = Columns::random(203);
  const double reference = 0.9329, film = 3.448, substrate = 2.91, unit = 2.858;
  const std::vector<double> references(203, reference), films(203, film), substrates(203, substrate), units(203, unit);
  for (const OverlayerKernelSet& kernel : overlayer_kernels()) {
    CAPTURE(kernel.instruction_set);
    const Result expected = solve(
        kernel, {{c.ratio.data(), 1}, {references.data(), 1}, {films.data(), 1}, {substrates.data(), 1}, {units.data(), 1}},
        203);
    for (int single = 0; single < 16; ++single) {
      const auto column = [&](int bit, const std::vector<double>& many, const double& one) {
        return (single >> bit & 1) != 0 ? detail::KernelColumn{&one, 0} : detail::KernelColumn{many.data(), 1};
      };
      const KernelInput input{{c.ratio.data(), 1},
                              column(0, references, reference),
                              column(1, films, film),
                              column(2, substrates, substrate),
                              column(3, units, unit)};
      CHECK(same_bits(solve(kernel, input, 203).values, expected.values));
    }
    for (std::size_t i = 0; i < 203; ++i)
      CHECK(same_bits(solve_one(kernel, c.ratio[i], reference, film, substrate, unit).values[0], expected.values[i]));
  }
}

TEST_CASE("elements outside the box are left and counted") {
  struct Row {
    double ratio, reference, film, substrate, unit;
    bool inside;
  };
  const std::vector<Row> rows = {
      {2.0, 1.0, 3.0, 2.0, 1.0, true},
      {0x1p-99, 1.0, 3.0, 2.0, 1.0, true},
      {0x1p99, 1.0, 3.0, 2.0, 1.0, true},
      {kNan, 1.0, 3.0, 2.0, 1.0, false},
      {kInf, 1.0, 3.0, 2.0, 1.0, false},
      {-2.0, 1.0, 3.0, 2.0, 1.0, false},
      {0.0, 1.0, 3.0, 2.0, 1.0, false},
      {kDenormal, 1.0, 3.0, 2.0, 1.0, false},
      {0x1p-102, 1.0, 3.0, 2.0, 1.0, false},
      {0x1p102, 1.0, 3.0, 2.0, 1.0, false},
      {2.0, 0.0, 3.0, 2.0, 1.0, false},
      {-2.0, -1.0, 3.0, 2.0, 1.0, false},
      {2.0, kNan, 3.0, 2.0, 1.0, false},
      {kInf, kInf, 3.0, 2.0, 1.0, false},
      {kDenormal, kDenormal, 3.0, 2.0, 1.0, false},
      {1e308, 1e308, 3.0, 2.0, 1.0, false},
      {2.0, 1.0, 3.0, 20.0, 1.0, false},
      {2.0, 1.0, 30.0, 2.0, 1.0, false},
      {2.0, 1.0, kNan, 2.0, 1.0, false},
      {2.0, 1.0, 3.0, 0.0, 1.0, false},
      {2.0, 1.0, 3.0, kInf, 1.0, false},
      {2.0, 1.0, 3.0, 2.0, kNan, false},
      {2.0, 1.0, 3.0, 2.0, 0.0, false},
      {2.0, 1.0, -3.0, -2.0, -1.0, false},
  };
  Columns c;
  for (const Row& row : rows) {
    c.ratio.push_back(row.ratio);
    c.reference.push_back(row.reference);
    c.film.push_back(row.film);
    c.substrate.push_back(row.substrate);
    c.unit.push_back(row.unit);
  }
  for (const OverlayerKernelSet& kernel : overlayer_kernels()) {
    CAPTURE(kernel.instruction_set);
    const Result r = solve(kernel, c.from(0), rows.size());
    std::size_t outside = 0;
    for (std::size_t i = 0; i < rows.size(); ++i) {
      CAPTURE(i);
      const Row& row = rows[i];
      const Status expected = row.inside ? Status::ok : Status::not_converged;
      CHECK(r.status[i] == expected);
      const Result one = solve_one(kernel, row.ratio, row.reference, row.film, row.substrate, row.unit);
      CHECK(one.status[0] == expected);
      CHECK(one.left == (row.inside ? 0u : 1u));
      if (!row.inside) ++outside;
    }
    CHECK(r.left == outside);
  }
}

TEST_CASE("arrays and single measurements agree with the scalar solver and with each other") {
  std::mt19937_64 engine(20240609);
  const auto draw = [&](double low, double high) { return std::uniform_real_distribution<double>(low, high)(engine); };
  for (int i = 0; i < 3000; ++i) {
    const double reference = draw(0.1, 3.0), film = draw(1.0, 4.0);
    const double substrate = i % 4 == 0 ? film : draw(0.5, 8.0), emission = draw(0.0, 80.0);
    const double ratio = reference * std::pow(10.0, draw(-9.0, 12.0));
    double t = 0.0;
    Status status{};
    const auto one = [](const double& v) { return std::span(&v, 1); };
    thickness_nm({one(ratio), one(reference), one(film), one(substrate), one(emission)}, std::span(&t, 1),
                 std::span(&status, 1));
    CHECK(status == Status::ok);
    RatioMeasurement m;
    m.ratio = ratio;
    m.reference_ratio = reference;
    m.film_line_length_nm = film;
    m.substrate_line_length_nm = substrate;
    m.emission_deg = emission;
    const Thickness single = thickness_from_ratio(m);
    CHECK(same_bits(t, single.value_nm));
    const detail::RootResult scalar = detail::overlayer_root(ratio / reference, film / substrate);
    CHECK(scalar.status == Status::ok);
    CHECK(close_to(single.reduced_thickness, scalar.x, rel(kStated)));
  }
}

TEST_CASE("legal numbers far outside the box still have their thickness") {
  for (const double r : {kDenormal, 1e-310, 1e-300, 1e-200, 1e-31, 1e31, 1e100, 1e300}) {
    for (const double rho : {0.02, 0.19, 0.2, 0.9, 1.0, 1.1, 5.0, 5.1, 40.0}) {
      CAPTURE(r);
      CAPTURE(rho);
      const detail::RootResult root = detail::overlayer_root_as_in_arrays(r, rho);
      CHECK(root.status == Status::ok);
      // The smallest denormal number has no neighbours to be close to.
      if (r >= 1e-300) CHECK(close_to(root.x, root_by_bisection(r, rho), rel(kStated)));
      if (r < 1e-300) CHECK(close_to(root.x, r, rel(1e-10)));
    }
  }
  CHECK(detail::overlayer_root_as_in_arrays(0.0, 2.0).x == 0.0);
  CHECK(detail::overlayer_root_as_in_arrays(detail::reduced_ratio(1e-300, 1e300), 2.0).x == 0.0);
}

TEST_CASE("thickness of a map has the same bits with one or two or three threads") {
  const std::size_t size = 3 * kBlockSize + 5;
  const Columns c = Columns::random(size);
  std::vector<double> emission(size);
  for (std::size_t i = 0; i < size; ++i) emission[i] = static_cast<double>(i / 100 % 80);
  const RatioArrays arrays{c.ratio, c.reference, c.film, c.substrate, emission};
  const auto run = [&](const std::string& threads) {
    const test::ThreadsVariable variable(threads);
    Result r{std::vector<double>(size), std::vector<Status>(size)};
    thickness_nm(arrays, r.values, r.status);
    return r;
  };
  const Result one = run("1");
  for (const Status s : one.status) CHECK(s == Status::ok);
  CHECK(same_bits(run("2").values, one.values));
  CHECK(same_bits(run("3").values, one.values));
}

}  // TEST_SUITE("overlayer kernel")
