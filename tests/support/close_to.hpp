#pragma once
/// Comparison of numbers with a stated tolerance; a failure prints both numbers, both differences and the row.

#include <doctest/doctest.h>

#include <bit>
#include <cmath>
#include <cstdint>
#include <ostream>
#include <span>
#include <sstream>
#include <stdexcept>
#include <string>

namespace pellicle::test {

/// How far two numbers may lie apart: as a fraction of the expected one, or in its unit.
struct Tolerance {
  enum class Kind { relative, absolute };
  Kind kind;
  double size;
};

constexpr Tolerance rel(double size) { return {Tolerance::Kind::relative, size}; }
constexpr Tolerance abs(double size) { return {Tolerance::Kind::absolute, size}; }

/// The outcome of a comparison; true when close, and its own report.
struct Closeness {
  bool close = false;
  double actual = 0.0;
  double expected = 0.0;
  Tolerance tolerance{};
  std::string row;  ///< where the expected number comes from

  explicit operator bool() const { return close; }
  /// Difference as a fraction of what is allowed; 1 is the limit.
  [[nodiscard]] double used() const {
    const double difference = std::abs(actual - expected);
    const double allowed =
        tolerance.kind == Tolerance::Kind::relative ? tolerance.size * std::abs(expected) : tolerance.size;
    if (difference == 0.0) return 0.0;
    return difference / allowed;
  }
};

/// Compares two numbers. An expected zero needs an absolute tolerance; nothing is close to NaN.
inline Closeness close_to(double actual, double expected, Tolerance tolerance, std::string row = {}) {
  Closeness result{false, actual, expected, tolerance, std::move(row)};
  result.close = std::isfinite(actual) && std::isfinite(expected) && result.used() <= 1.0;
  return result;
}

inline std::ostream& operator<<(std::ostream& out, const Closeness& c) {
  const auto old = out.precision(17);
  out << c.actual << " against " << c.expected;
  out.precision(3);
  out << ": off by " << c.actual - c.expected << ", relative " << (c.actual - c.expected) / c.expected << "; allowed "
      << c.tolerance.size << (c.tolerance.kind == Tolerance::Kind::relative ? " relative" : " absolute");
  if (!c.row.empty()) out << " [" << c.row << "]";
  out.precision(old);
  return out;
}

/// True when both hold the same bits, element by element (NaN equals the same NaN, 0 differs from −0).
inline bool same_bits(std::span<const double> a, std::span<const double> b) {
  if (a.size() != b.size()) return false;
  for (std::size_t i = 0; i < a.size(); ++i) {
    if (std::bit_cast<std::uint64_t>(a[i]) != std::bit_cast<std::uint64_t>(b[i])) return false;
  }
  return true;
}

inline bool same_bits(double a, double b) { return same_bits(std::span(&a, 1), std::span(&b, 1)); }

inline bool contains(const std::string& text, const std::string& part) { return text.find(part) != std::string::npos; }

/// The error of type E that `action` throws; the test fails when it throws none or another.
template <typename E, typename Action>
E error_of(Action&& action) {
  try {
    action();
  } catch (const E& error) {
    return error;
  }
  FAIL("no error was thrown");
  throw std::logic_error("FAIL throws, so this line is never reached");
}

}  // namespace pellicle::test
