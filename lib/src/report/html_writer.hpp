#pragma once
/// The few shapes of HTML that a report is made of. Arguments called `html` are markup already; all else is text and is
/// escaped here.

#include <string>
#include <string_view>
#include <vector>

namespace pellicle::detail {

/// How a cell is set: text may break anywhere, a number stands flush right, a word of ours stays whole.
enum class CellKind { text, number, word };

struct Cell {
  std::string html;
  CellKind kind = CellKind::text;
};

[[nodiscard]] Cell text_cell(std::string_view text);
[[nodiscard]] Cell number_cell(std::string html);
[[nodiscard]] Cell word_cell(std::string_view text);

/// A number for people with all its digits for programs: <data value="3.3746…">3.37</data>.
[[nodiscard]] std::string data_html(double value, std::string_view shown);

class HtmlWriter {
 public:
  void raw(std::string_view html) { html_ += html; }
  /// Begins a numbered section.
  void section(std::string_view id, std::string_view title);
  void end_section() { html_ += "</section>\n"; }
  void heading(std::string_view title);
  void paragraph(std::string_view text, std::string_view css_class = {});
  void list(const std::vector<std::string>& texts);

  /// Names with what they are: a list of pairs. Empty values read "not stated".
  void begin_facts() { html_ += "<dl>\n"; }
  void fact(std::string_view name, std::string_view text);
  void fact_html(std::string_view name, std::string_view html);
  void end_facts() { html_ += "</dl>\n"; }

  /// Table with a caption and one header row; a row's first cell is its header.
  void table(std::string_view caption, const std::vector<std::string>& header,
             const std::vector<std::vector<Cell>>& rows);
  /// An SVG with its caption.
  void figure(std::string_view svg, std::string_view caption);

  [[nodiscard]] std::string take() { return std::move(html_); }

 private:
  std::string html_;
  int sections_ = 0;
};

}  // namespace pellicle::detail
