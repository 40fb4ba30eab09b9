#include "report/text_table.hpp"

#include <algorithm>
#include <sstream>

namespace pellicle::detail {
namespace {

/// Characters of UTF-8 text; all we print take one column each.
std::size_t width_of(const std::string& text) {
  return static_cast<std::size_t>(std::count_if(text.begin(), text.end(), [](char c) { return (c & 0xC0) != 0x80; }));
}

/// Characters a remark may fill before it is wrapped.
constexpr std::size_t kRemarkWidth = 70;

bool looks_numeric(const std::string& cell) {
  return cell.empty() || cell.find_first_of("0123456789+-") == 0 || cell.starts_with("–") || cell.starts_with("<= ") || cell.starts_with(">= ");
}

}  // namespace

std::string text_table(const std::vector<std::vector<std::string>>& rows) {
  if (rows.empty()) return {};
  std::vector<std::size_t> widths(rows.front().size(), 0);
  std::vector<bool> right(rows.front().size(), true);
  for (std::size_t r = 0; r < rows.size(); ++r) {
    for (std::size_t c = 0; c < widths.size(); ++c) {
      widths[c] = std::max(widths[c], width_of(rows[r][c]));
      if (r > 0 && !looks_numeric(rows[r][c])) right[c] = false;
    }
  }
  std::string text;
  for (const auto& row : rows) {
    std::string line;
    for (std::size_t c = 0; c < widths.size(); ++c) {
      const std::string pad(widths[c] - width_of(row[c]), ' ');
      line += (c == 0 ? "  " : "   ") + (right[c] ? pad + row[c] : row[c] + pad);
    }
    // A long remark in the last column goes on below itself.
    const std::size_t before = width_of(line) - std::max(widths.back(), width_of(row.back()));
    if (!right.back() && width_of(row.back()) > kRemarkWidth) {
      line = line.substr(0, line.size() - row.back().size() - (widths.back() - width_of(row.back())));
      line += wrapped(row.back(), kRemarkWidth, std::string(before, ' '));
    }
    line.erase(line.find_last_not_of(' ') + 1);
    text += line + "\n";
  }
  return text;
}

std::string wrapped(const std::string& text, std::size_t width, const std::string& indent) {
  std::istringstream words(text);
  std::string result, line, word;
  while (words >> word) {
    // Only the text counts, not the indent of the lines below the first.
    const std::size_t used = width_of(line) - (result.empty() ? 0 : width_of(indent));
    if (!line.empty() && used + 1 + width_of(word) > width) {
      result += line + "\n";
      line = indent + word;
    } else {
      line += (line.empty() ? "" : " ") + word;
    }
  }
  return result + line;
}

}  // namespace pellicle::detail
