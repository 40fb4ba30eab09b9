#pragma once
/// Enough of a reader of HTML and SVG to see whether tags close and text stays text.

#include <cctype>
#include <set>
#include <string>
#include <vector>

namespace pellicle::test {

/// The first tag that does not fit, or nothing. Void elements of HTML need no end; the content of <style> is skipped.
inline std::string unbalanced_tag(const std::string& markup) {
  static const std::set<std::string> voids = {"meta", "br", "wbr"};
  std::vector<std::string> open;
  for (std::size_t at = markup.find('<'); at != std::string::npos; at = markup.find('<', at + 1)) {
    const std::size_t end = markup.find('>', at);
    if (end == std::string::npos) return markup.substr(at, 40);
    const std::string tag = markup.substr(at + 1, end - at - 1);
    if (tag.starts_with('!') || tag.starts_with('?') || tag.ends_with('/')) continue;
    std::string name;
    for (const char c : tag.substr(tag.starts_with('/') ? 1 : 0)) {
      if (std::isalnum(static_cast<unsigned char>(c)) == 0) break;
      name += c;
    }
    if (name.empty()) return markup.substr(at, 40);
    if (tag.starts_with('/')) {
      if (open.empty() || open.back() != name) return "</" + name + ">";
      open.pop_back();
    } else if (!voids.contains(name)) {
      open.push_back(name);
      if (name == "style") at = markup.find("</style>", at) - 1;
    }
  }
  return open.empty() ? "" : "<" + open.back() + ">";
}

/// How often `part` stands in `text`.
inline std::size_t count_of(const std::string& text, const std::string& part) {
  std::size_t count = 0;
  for (std::size_t at = text.find(part); at != std::string::npos; at = text.find(part, at + part.size())) ++count;
  return count;
}

}  // namespace pellicle::test
