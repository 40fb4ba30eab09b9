#include "report/html_writer.hpp"

#include <fmt/format.h>

#include "pellicle/base/number.hpp"
#include "report/wording.hpp"

namespace pellicle::detail {
namespace {

const char* css_class(CellKind kind) {
  return kind == CellKind::number ? " class=\"n\"" : kind == CellKind::word ? " class=\"w\"" : "";
}

/// Escaped text in which words longer than a column, and codes with underscores, may be broken.
std::string breakable(std::string_view text) {
  constexpr std::size_t kLongest = 22;
  const std::string whole = printable(text);
  std::string result;
  std::size_t begin = 0, in_word = 0;
  for (std::size_t at = 0; at < whole.size(); ++at) {
    const bool starts = (static_cast<unsigned char>(whole[at]) & 0xC0U) != 0x80U;
    if (!starts) continue;
    const bool joint = at > 0 && whole[at - 1] == '_';
    if (whole[at] == ' ') {
      in_word = 0;
    } else if (++in_word > kLongest || joint) {
      result += escaped(std::string_view(whole).substr(begin, at - begin)) + "<wbr>";
      begin = at;
      in_word = 1;
    }
  }
  return result + escaped(std::string_view(whole).substr(begin));
}

}  // namespace

Cell text_cell(std::string_view text) { return {breakable(text)}; }

Cell number_cell(std::string html) { return {std::move(html), CellKind::number}; }

Cell word_cell(std::string_view text) { return {escaped(text), CellKind::word}; }

std::string data_html(double value, std::string_view shown) {
  return fmt::format("<data value=\"{}\">{}</data>", number_text(value), escaped(shown));
}

void HtmlWriter::section(std::string_view id, std::string_view title) {
  html_ += fmt::format("<section aria-labelledby=\"{0}\">\n<h2 id=\"{0}\"><span class=\"count\">{1}</span> {2}</h2>\n",
                       id, ++sections_, escaped(title));
}

void HtmlWriter::heading(std::string_view title) { html_ += "<h3>" + escaped(title) + "</h3>\n"; }

void HtmlWriter::paragraph(std::string_view text, std::string_view css_class) {
  html_ += (css_class.empty() ? "<p>" : fmt::format("<p class=\"{}\">", css_class)) + escaped(text) + "</p>\n";
}

void HtmlWriter::list(const std::vector<std::string>& texts) {
  html_ += "<ul>\n";
  for (const std::string& text : texts) html_ += "<li>" + escaped(text) + "</li>\n";
  html_ += "</ul>\n";
}

void HtmlWriter::fact(std::string_view name, std::string_view text) { fact_html(name, escaped(text)); }

void HtmlWriter::fact_html(std::string_view name, std::string_view html) {
  html_ += "<div><dt>" + escaped(name) + "</dt><dd>";
  html_ += html.empty() ? "<span class=\"absent\">not stated</span>" : html;
  html_ += "</dd></div>\n";
}

void HtmlWriter::table(std::string_view caption, const std::vector<std::string>& header,
                       const std::vector<std::vector<Cell>>& rows) {
  // A short table stays on one page.
  constexpr std::size_t kShort = 12;
  // A column is set like its first row; a header stands over its numbers.
  html_ += "<div class=\"wide\" tabindex=\"0\" role=\"region\" aria-label=\"" + escaped(caption) + "\"><table" +
           (rows.size() <= kShort ? " class=\"short\"" : "") + ">\n<caption>" + escaped(caption) +
           "</caption>\n<thead><tr>";
  for (std::size_t c = 0; c < header.size(); ++c) {
    const bool number = !rows.empty() && rows[0][c].kind == CellKind::number;
    html_ += fmt::format("<th scope=\"col\"{}>{}</th>", css_class(number ? CellKind::number : CellKind::text),
                         breakable(header[c]));
  }
  html_ += "</tr></thead>\n<tbody>\n";
  for (const std::vector<Cell>& row : rows) {
    html_ += "<tr>";
    for (std::size_t c = 0; c < row.size(); ++c) {
      const char* kind = css_class(row[c].kind);
      html_ += c == 0 ? fmt::format("<th scope=\"row\"{}>{}</th>", kind, row[c].html)
                      : fmt::format("<td{}>{}</td>", kind, row[c].html);
    }
    html_ += "</tr>\n";
  }
  html_ += "</tbody></table></div>\n";
}

void HtmlWriter::figure(std::string_view svg, std::string_view caption) {
  html_ += "<figure>\n";
  html_ += svg;
  html_ += "<figcaption>" + escaped(caption) + "</figcaption>\n</figure>\n";
}

}  // namespace pellicle::detail
