#pragma once
/// Numbers and text: locale-free reading, shortest exact writing, and rounding to the uncertainty.

#include <optional>
#include <string>
#include <string_view>

namespace pellicle {

/// Reads one decimal number; the whole text must be the number ("1.5", "-2e3").
/// @return nothing for anything else: empty, trailing text, "nan", "inf", or out of range of a double.
[[nodiscard]] std::optional<double> parse_number(std::string_view text) noexcept;

/// Shortest text that reads back to the same double.
[[nodiscard]] std::string number_text(double value);

/// `value` with `digits` significant digits, no exponent for ordinary sizes.
[[nodiscard]] std::string rounded_text(double value, int digits);

/// Energy for people, to 0.1 eV: "1387.1", "1202".
[[nodiscard]] std::string energy_text(double energy_ev);

/// "3.27 ± 0.34": the uncertainty with two significant digits, the value to the same decimal
/// (GUM 7.2.6). Without an uncertainty the value has four significant digits.
[[nodiscard]] std::string value_with_uncertainty(double value, std::optional<double> standard_uncertainty);

}  // namespace pellicle
