#include "report/wording.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <map>

#include "pellicle/base/number.hpp"

namespace pellicle::detail {
namespace {

constexpr std::string_view kReplacement = "\xEF\xBF\xBD";
constexpr std::string_view kEllipsis = "…";

/// Code point of the well-formed UTF-8 sequence at `at` with its length, or a length of 0.
std::pair<char32_t, std::size_t> code_point(std::string_view text, std::size_t at) {
  const auto byte = [&](std::size_t i) { return at + i < text.size() ? static_cast<unsigned char>(text[at + i]) : 0U; };
  const unsigned first = byte(0);
  if (first < 0x80) return {first, 1};
  const std::size_t length = first >= 0xF0 ? 4 : first >= 0xE0 ? 3 : 2;
  if (first < 0xC2 || first > 0xF4) return {0, 0};
  char32_t code = first & (0xFFU >> (length + 1));
  for (std::size_t i = 1; i < length; ++i) {
    if ((byte(i) & 0xC0U) != 0x80U) return {0, 0};
    code = (code << 6U) | (byte(i) & 0x3FU);
  }
  constexpr char32_t kLowest[] = {0, 0, 0x80, 0x800, 0x10000};
  const bool surrogate = code >= 0xD800 && code <= 0xDFFF;
  return code < kLowest[length] || code > 0x10FFFF || surrogate ? std::pair<char32_t, std::size_t>{0, 0}
                                                                : std::pair{code, length};
}

/// Controls, and marks that turn the direction of the text that follows them.
bool unprintable(char32_t code) {
  return code < 0x20 || (code >= 0x7F && code < 0xA0) || (code >= 0x202A && code <= 0x202E) ||
         (code >= 0x2066 && code <= 0x2069) || code == 0xFFFE || code == 0xFFFF;
}

/// Letters and signs that every font for European scripts has.
bool common(char32_t code) {
  static const std::u32string signs = U"€™Ω−∞≈≠≤≥";
  return code < 0x500 || (code >= 0x1E00 && code <= 0x1EFF) || (code >= 0x2010 && code <= 0x203A) ||
         (code >= 0x2070 && code <= 0x208E) || signs.find(code) != std::u32string::npos;
}

int decimals_for(double sd) {
  return sd > 0.0 ? std::clamp(1 - static_cast<int>(std::floor(std::log10(sd))), 0, 6) : 3;
}

}  // namespace

std::string printable(std::string_view text) {
  std::string result;
  result.reserve(text.size());
  for (std::size_t at = 0; at < text.size();) {
    const auto [code, length] = code_point(text, at);
    if (code == '\n' || code == '\t' || code == '\r' || code == 0x2028 || code == 0x2029) {
      result += ' ';
    } else if (length == 0 || unprintable(code)) {
      result += kReplacement;
    } else {
      result += text.substr(at, length);
    }
    at += std::max<std::size_t>(length, 1);
  }
  return result;
}

std::string european(std::string_view text) {
  const std::string whole = printable(text);
  std::string result;
  for (std::size_t at = 0; at < whole.size();) {
    const auto [code, length] = code_point(whole, at);
    if (common(code)) {
      result += whole.substr(at, length);
    } else {
      result += '?';
    }
    at += length;
  }
  return result;
}

std::size_t characters(std::string_view text) noexcept {
  return static_cast<std::size_t>(
      std::count_if(text.begin(), text.end(), [](char c) { return (static_cast<unsigned char>(c) & 0xC0U) != 0x80U; }));
}

std::string shortened(std::string_view text, std::size_t most) {
  if (characters(text) <= most) return std::string(text);
  std::size_t end = 0;
  for (std::size_t kept = 0; end < text.size(); ++end) {
    if ((static_cast<unsigned char>(text[end]) & 0xC0U) != 0x80U && ++kept == std::max<std::size_t>(most, 1)) break;
  }
  return std::string(text.substr(0, end)) + std::string(kEllipsis);
}

std::string escaped(std::string_view text) {
  std::string result;
  for (const char c : printable(text)) {
    switch (c) {
      case '&':
        result += "&amp;";
        break;
      case '<':
        result += "&lt;";
        break;
      case '>':
        result += "&gt;";
        break;
      case '"':
        result += "&quot;";
        break;
      case '\'':
        result += "&#39;";
        break;
      default:
        result += c;
    }
  }
  return result;
}

std::string value_words(double value, double sd) { return fmt::format("{:.{}f}", value, decimals_for(sd)); }

std::string interval_words(const Interval& interval, double sd) {
  return value_words(interval.low95, sd) + " to " + value_words(interval.high95, sd);
}

std::string angle_words(double degrees) {
  std::string text = fmt::format("{:.2f}", degrees);
  text.erase(text.find_last_not_of('0') + 1);
  if (text.ends_with('.')) text.pop_back();
  return text == "-0" ? "0" : text;
}

std::string input_words(std::string_view name) {
  static const std::map<std::string_view, std::string_view> known = {
      {kLengthName, "attenuation length"},
      {kFilmLengthName, "attenuation length, film line"},
      {kSubstrateLengthName, "attenuation length, substrate line"},
      {kEmissionName, "emission angle"},
      {"imfp", "IMFP"},
      {"imfp_film", "IMFP, film"},
      {"imfp_substrate", "IMFP, substrate"},
  };
  if (const auto found = known.find(name); found != known.end()) return std::string(found->second);
  std::string words(name);
  for (const std::string_view part : {"film", "substrate"}) {
    // "density_film" is the density of the film; "film_area" is a word of its own.
    const std::string suffix = "_" + std::string(part);
    if (words.ends_with(suffix)) words = words.substr(0, words.size() - suffix.size()) + ", " + std::string(part);
  }
  std::replace(words.begin(), words.end(), '_', ' ');
  return words;
}

std::string route_words(const Run& run, const ThicknessRoute& route) {
  if (route.layer.empty()) return run.sample.substrate.id;
  const std::string& material = run.sample.material(route.layer).id;
  const std::string film = material == route.layer ? route.layer : route.layer + " (" + material + ")";
  const std::size_t below = run.sample.position(route.layer) + 1;
  return film + " on " + (below < run.sample.layers.size() ? run.sample.layers[below].name : run.sample.substrate.id);
}

std::string lines_words(const Run& run, const ThicknessRoute& route) {
  std::string words;
  if (route.film_line) words = run.lines[*route.film_line].label;
  if (route.substrate_line) words += (words.empty() ? "" : " over ") + run.lines[*route.substrate_line].label;
  return words;
}

std::string spot_words(const Run& run, const ThicknessResult& result) {
  if (run.tables.size() < 2 || result.table >= run.tables.size()) return result.spot;
  return run.tables[result.table] + ": " + result.spot;
}

std::string counted(std::size_t count, std::string_view one, std::string_view several) {
  return fmt::format("{} {}", count, count == 1 ? one : several);
}

}  // namespace pellicle::detail
