#include "report/text_table.hpp"

#include <algorithm>
#include <sstream>

namespace pellicle::detail {
namespace {

/// Characters of UTF-8 text; all we print take one column each.
std::size_t width_of(const std::string& text) {
  return static_cast<std::size_t>(std::count_if(text.begin(), text.end(), [](char c) { return (c & 0xC0) != 0x80; }));
}

bool looks_numeric(const std::string& cell) {
  return cell.empty() || cell.find_first_of("0123456789+-") == 0 || cell.starts_with("–");
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
    line.erase(line.find_last_not_of(' ') + 1);
    text += line + "\n";
  }
  return text;
}

std::string wrapped(const std::string& text, std::size_t width, const std::string& indent) {
  std::istringstream words(text);
  std::string result, line, word;
  while (words >> word) {
    if (!line.empty() && width_of(line) + 1 + width_of(word) > width) {
      result += line + "\n";
      line = indent + word;
    } else {
      line += (line.empty() ? "" : " ") + word;
    }
  }
  return result + line;
}

}  // namespace pellicle::detail
