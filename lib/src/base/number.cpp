#include "pellicle/base/number.hpp"

#include <charconv>
#include <cmath>

#include <fmt/format.h>

namespace pellicle {

std::optional<double> parse_number(std::string_view text) noexcept {
  double value = 0.0;
  const char* end = text.data() + text.size();
  const auto [stop, failure] = std::from_chars(text.data(), end, value);
  if (failure != std::errc{} || stop != end || !std::isfinite(value)) return std::nullopt;
  return value;
}

std::string number_text(double value) { return fmt::format("{}", value); }

std::string rounded_text(double value, int digits) {
  if (value == 0.0 || !std::isfinite(value)) return fmt::format("{}", value);
  const double size = std::abs(value);
  if (size >= 1e6 || size < 1e-4) return fmt::format("{:.{}g}", value, digits);
  const int exponent = static_cast<int>(std::floor(std::log10(size)));
  return fmt::format("{:.{}f}", value, std::max(0, digits - 1 - exponent));
}

std::string energy_text(double energy_ev) {
  const std::string text = fmt::format("{:.1f}", energy_ev);
  return text.ends_with(".0") ? text.substr(0, text.size() - 2) : text;
}

std::string value_with_uncertainty(double value, std::optional<double> standard_uncertainty) {
  if (!standard_uncertainty || !(*standard_uncertainty > 0.0)) return rounded_text(value, 4);
  const int exponent = static_cast<int>(std::floor(std::log10(*standard_uncertainty)));
  const int decimals = std::max(0, 1 - exponent);
  if (decimals > 9) return fmt::format("{:.6g} ± {:.2g}", value, *standard_uncertainty);
  return fmt::format("{:.{}f} ± {:.{}f}", value, decimals, *standard_uncertainty, decimals);
}

}  // namespace pellicle
