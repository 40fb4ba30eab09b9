#include "base/nearest.hpp"

#include <algorithm>
#include <cctype>
#include <numeric>

namespace pellicle::detail {
namespace {

char lower(char c) { return static_cast<char>(std::tolower(static_cast<unsigned char>(c))); }

}  // namespace

std::size_t edit_distance(std::string_view a, std::string_view b) {
  std::vector<std::size_t> row(b.size() + 1);
  std::iota(row.begin(), row.end(), std::size_t{0});
  for (std::size_t i = 0; i < a.size(); ++i) {
    std::size_t diagonal = row[0];
    row[0] = i + 1;
    for (std::size_t j = 0; j < b.size(); ++j) {
      const std::size_t substitute = diagonal + (lower(a[i]) == lower(b[j]) ? 0 : 1);
      diagonal = row[j + 1];
      row[j + 1] = std::min({substitute, row[j] + 1, row[j + 1] + 1});
    }
  }
  return row[b.size()];
}

std::string nearest_name(std::string_view word, std::span<const std::string> known) {
  if (word.size() > 64) return {};
  std::string best;
  std::size_t best_distance = word.size() + 1;
  for (const std::string& name : known) {
    const std::size_t distance = edit_distance(word, name);
    if (distance < best_distance) {
      best_distance = distance;
      best = name;
    }
  }
  // One or two slips first; then a longer or shorter form of a known name; then names of like spelling.
  if (best_distance <= 2 && best_distance < word.size()) return best;
  constexpr std::size_t kFewest = 3;
  std::string form;
  for (const std::string& name : known) {
    const std::size_t common = std::min(name.size(), word.size());
    if (common < kFewest || edit_distance(word.substr(0, common), std::string_view(name).substr(0, common)) != 0) continue;
    if (form.empty() || common > std::min(form.size(), word.size())) form = name;
  }
  if (!form.empty()) return form;
  return best_distance <= std::max<std::size_t>(2, word.size() / 3) ? best : std::string();
}

std::string join_names(std::span<const std::string> names) {
  std::string text;
  for (const std::string& name : names) text += (text.empty() ? "" : ", ") + name;
  return text;
}

std::string name_hint(std::string_view word, std::span<const std::string> known) {
  const std::string near = nearest_name(word, known);
  if (!near.empty()) return "did you mean \"" + near + "\"?";
  constexpr std::size_t kMost = 12;
  if (known.size() <= kMost) return "expected one of: " + join_names(known);
  return "expected one of: " + join_names(known.first(kMost)) + ", …";
}

}  // namespace pellicle::detail
