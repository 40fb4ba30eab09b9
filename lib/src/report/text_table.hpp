#pragma once

#include <string>
#include <vector>

namespace pellicle::detail {

/// A table of aligned columns: first row is the header, a column is right-aligned when all its other cells
/// start with a digit, sign or dash.
[[nodiscard]] std::string text_table(const std::vector<std::vector<std::string>>& rows);

/// Text broken at spaces into lines of at most `width` characters, each after the first begun with `indent`.
[[nodiscard]] std::string wrapped(const std::string& text, std::size_t width, const std::string& indent);

}  // namespace pellicle::detail
