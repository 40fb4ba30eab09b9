#pragma once
/// "Did you mean": the known name nearest to a mistyped one.

#include <span>
#include <string>
#include <string_view>
#include <vector>

namespace pellicle::detail {

/// Number of single-character edits between two words, letter case ignored.
[[nodiscard]] std::size_t edit_distance(std::string_view a, std::string_view b);

/// The nearest of `known`, or empty when none is near enough to be meant.
[[nodiscard]] std::string nearest_name(std::string_view word, std::span<const std::string> known);

/// Hint "did you mean X?" when some known name is near, else "expected one of: …" (at most twelve).
[[nodiscard]] std::string name_hint(std::string_view word, std::span<const std::string> known);

/// Words joined by ", ".
[[nodiscard]] std::string join_names(std::span<const std::string> names);

}  // namespace pellicle::detail
