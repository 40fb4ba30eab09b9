#pragma once
/// Outcome of one element of an array function.

#include <cstdint>

namespace pellicle {

enum class Status : std::uint8_t {
  ok = 0,
  invalid_input = 1,   ///< an input is not a number, or outside its legal range
  out_of_range = 2,    ///< the formula is not valid there
  no_solution = 3,     ///< legal input for which no finite answer exists
  not_converged = 4
};

/// One sentence for people.
[[nodiscard]] const char* status_text(Status status) noexcept;

}  // namespace pellicle
