#include <algorithm>
#include <cmath>
#include <limits>
#include <numeric>
#include <random>
#include <string>
#include <vector>

#include "pellicle/base/error.hpp"
#include "pellicle/base/parallel.hpp"
#include "pellicle/estimate/thickness.hpp"
#include "support/close_to.hpp"
#include "support/threads_variable.hpp"

using namespace pellicle;
using test::close_to;
using test::error_of;
using test::rel;
using test::same_bits;

namespace {

constexpr double kNan = std::numeric_limits<double>::quiet_NaN();
constexpr double kInf = std::numeric_limits<double>::infinity();
/// The same root, multiplied by length and cosine: two roundings.
constexpr double kRounding = 5e-16;

/// A map of invented measurements: one element per pixel.
struct Map {
  std::vector<double> ratio, reference, film, substrate, emission;

  static Map random(std::size_t size) {
    std::mt19937_64 engine(20240602);  // any seed would do; a fixed one repeats
    const auto draw = [&](double low, double high) {
      return std::uniform_real_distribution<double>(low, high)(engine);
    };
    Map map;
    for (std::size_t i = 0; i < size; ++i) {
      map.ratio.push_back(std::pow(10.0, draw(-6.0, 6.0)));
      map.reference.push_back(draw(0.1, 3.0));
      map.film.push_back(draw(0.5, 6.0));
      map.substrate.push_back(i % 5 == 0 ? map.film.back() : draw(0.5, 6.0));
      map.emission.push_back(draw(0.0, 80.0));
    }
    return map;
  }

  [[nodiscard]] Map picked(const std::vector<std::size_t>& order) const {
    Map map;
    for (const std::size_t i : order) {
      map.ratio.push_back(ratio[i]);
      map.reference.push_back(reference[i]);
      map.film.push_back(film[i]);
      map.substrate.push_back(substrate[i]);
      map.emission.push_back(emission[i]);
    }
    return map;
  }

  [[nodiscard]] RatioArrays arrays(std::size_t begin, std::size_t size) const {
    const auto part = [&](const std::vector<double>& v) { return std::span(v).subspan(begin, size); };
    return {part(ratio), part(reference), part(film), part(substrate), part(emission)};
  }
};

struct Result {
  std::vector<double> thickness;
  std::vector<Status> status;
};

Result run(const RatioArrays& arrays, std::size_t size) {
  Result r{std::vector<double>(size, -1.0), std::vector<Status>(size)};
  thickness_nm(arrays, r.thickness, r.status);
  return r;
}

}  // namespace

TEST_SUITE("thickness of arrays") {

TEST_CASE("each element is the thickness of its own ratio") {
  const Map map = Map::random(500);
  const Result r = run(map.arrays(0, 500), 500);
  for (std::size_t i = 0; i < 500; ++i) {
    RatioMeasurement m;
    m.ratio = map.ratio[i];
    m.reference_ratio = map.reference[i];
    m.film_line_length_nm = map.film[i];
    m.substrate_line_length_nm = map.substrate[i];
    m.emission_deg = map.emission[i];
    CHECK(r.status[i] == Status::ok);
    CHECK(close_to(r.thickness[i], thickness_from_ratio(m).value_nm, rel(kRounding)));
  }
}

TEST_CASE("single values stand for all elements") {
  const Map map = Map::random(40);
  const double reference = 0.9329, length = 3.448, emission = 34.0;
  RatioArrays arrays;
  arrays.ratio = map.ratio;
  arrays.reference_ratio = std::span(&reference, 1);
  arrays.film_line_length_nm = std::span(&length, 1);
  arrays.emission_deg = std::span(&emission, 1);
  const Result r = run(arrays, 40);
  for (std::size_t i = 0; i < 40; ++i) {
    RatioMeasurement m;
    m.ratio = map.ratio[i];
    m.reference_ratio = reference;
    m.film_line_length_nm = length;
    m.emission_deg = emission;
    CHECK(close_to(r.thickness[i], thickness_from_ratio(m).value_nm, rel(kRounding)));
  }
  // A ratio may be the single value as well.
  const double ratio = 2.0;
  arrays.ratio = std::span(&ratio, 1);
  const Result same = run(arrays, 3);
  for (const double t : same.thickness) CHECK(close_to(t, 3.27429, test::abs(5e-6)));
}

TEST_CASE("no bit of a thickness depends on place or chunking or thread count") {
  const std::size_t size = 4 * kBlockSize + 11;
  const Map map = Map::random(size);
  const Result reference = run(map.arrays(0, size), size);

  std::vector<std::size_t> order(size);
  std::iota(order.begin(), order.end(), std::size_t{0});
  std::shuffle(order.begin(), order.end(), std::mt19937_64(11));
  std::vector<double> expected;
  for (const std::size_t i : order) expected.push_back(reference.thickness[i]);
  CHECK(same_bits(run(map.picked(order).arrays(0, size), size).thickness, expected));

  for (const std::size_t chunk : {std::size_t{1}, std::size_t{999}, kBlockSize - 1, kBlockSize + 1}) {
    std::vector<double> pieces;
    for (std::size_t begin = 0; begin < size; begin += chunk) {
      const std::size_t n = std::min(chunk, size - begin);
      const Result part = run(map.arrays(begin, n), n);
      pieces.insert(pieces.end(), part.thickness.begin(), part.thickness.end());
    }
    CHECK(same_bits(pieces, reference.thickness));
  }
  for (const std::string threads : {"1", "2", "5"}) {
    const test::ThreadsVariable variable(threads);
    CHECK(same_bits(run(map.arrays(0, size), size).thickness, reference.thickness));
  }
}

TEST_CASE("a bad element gets a status and its neighbours their thickness") {
  struct Row {
    double ratio, reference, film, substrate, emission;
    Status status;
  };
  const std::vector<Row> rows = {
      {2.0, 1.0, 3.0, 3.0, 0.0, Status::ok},
      {0.0, 1.0, 3.0, 2.0, 0.0, Status::ok},
      {-1.0, 1.0, 3.0, 3.0, 0.0, Status::invalid_input},
      {kNan, 1.0, 3.0, 3.0, 0.0, Status::invalid_input},
      {kInf, 1.0, 3.0, 3.0, 0.0, Status::no_solution},
      {1e300, 1e-300, 3.0, 3.0, 0.0, Status::no_solution},
      {2.0, 0.0, 3.0, 3.0, 0.0, Status::invalid_input},
      {2.0, kInf, 3.0, 3.0, 0.0, Status::invalid_input},
      {2.0, kNan, 3.0, 3.0, 0.0, Status::invalid_input},
      {2.0, 1.0, 0.0, 3.0, 0.0, Status::invalid_input},
      {2.0, 1.0, -3.0, 3.0, 0.0, Status::invalid_input},
      {2.0, 1.0, kInf, 3.0, 0.0, Status::invalid_input},
      {2.0, 1.0, 3.0, 0.0, 0.0, Status::invalid_input},
      {2.0, 1.0, 3.0, kNan, 0.0, Status::invalid_input},
      {2.0, 1.0, 3.0, 3.0, 90.0, Status::invalid_input},
      {2.0, 1.0, 3.0, 3.0, -1.0, Status::invalid_input},
      {2.0, 1.0, 3.0, 3.0, kNan, Status::invalid_input},
      {2.0, 1.0, 3.0, 2.0, 60.0, Status::ok},
  };
  Map map;
  for (const Row& row : rows) {
    map.ratio.push_back(row.ratio);
    map.reference.push_back(row.reference);
    map.film.push_back(row.film);
    map.substrate.push_back(row.substrate);
    map.emission.push_back(row.emission);
  }
  const Result r = run(map.arrays(0, rows.size()), rows.size());
  for (std::size_t i = 0; i < rows.size(); ++i) {
    CAPTURE(i);
    CHECK(r.status[i] == rows[i].status);
    CHECK(std::isfinite(r.thickness[i]) == (rows[i].status == Status::ok));
  }
  CHECK(r.thickness[1] == 0.0);
  CHECK(close_to(r.thickness[0], 3.0 * std::log(3.0), rel(1e-14)));
}

TEST_CASE("arrays that do not fit together are refused by name") {
  const Map map = Map::random(5);
  std::vector<double> out(5);
  std::vector<Status> status(5);
  const auto where = [&](auto spoil) {
    RatioArrays arrays = map.arrays(0, 5);
    spoil(arrays);
    return error_of<InputError>([&] { thickness_nm(arrays, out, status); }).where();
  };
  CHECK(where([](RatioArrays& a) { a.ratio = a.ratio.first(4); }) == "ratio");
  CHECK(where([](RatioArrays& a) { a.ratio = {}; }) == "ratio");
  CHECK(where([](RatioArrays& a) { a.reference_ratio = a.reference_ratio.first(2); }) == "reference_ratio");
  CHECK(where([](RatioArrays& a) { a.film_line_length_nm = a.film_line_length_nm.first(3); }) == "film_line_length_nm");
  CHECK(where([](RatioArrays& a) { a.substrate_line_length_nm = a.substrate_line_length_nm.first(3); }) ==
        "substrate_line_length_nm");
  CHECK(where([](RatioArrays& a) { a.emission_deg = a.emission_deg.first(3); }) == "emission_deg");
  status.resize(4);
  CHECK(where([](RatioArrays&) {}) == "status");
}

TEST_CASE("an empty map has no thickness and no fault") {
  const double one = 1.0;
  RatioArrays arrays;
  arrays.reference_ratio = arrays.film_line_length_nm = arrays.emission_deg = std::span(&one, 1);
  CHECK_NOTHROW(thickness_nm(arrays, std::span<double>(), std::span<Status>()));
}

}  // TEST_SUITE("thickness of arrays")
