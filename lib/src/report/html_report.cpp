#include "report/html_report.hpp"

#include <fmt/format.h>

#include "pellicle/base/number.hpp"
#include "report/wording.hpp"

namespace pellicle::detail {

std::string record_of(const Run& run, std::string_view key) {
  for (const auto& [name, value] : run.record) {
    if (name == key) return value;
  }
  return {};
}

std::string quantity_html(double value, const std::optional<double>& sd) {
  constexpr std::string_view kPlusMinus = " ± ";
  const std::string shown = value_with_uncertainty(value, sd);
  const std::size_t at = shown.find(kPlusMinus);
  if (at == std::string::npos) return data_html(value, shown);
  return data_html(value, shown.substr(0, at)) + std::string(kPlusMinus) +
         data_html(*sd, shown.substr(at + kPlusMinus.size()));
}

std::string quantity_html(const Quantity& q) { return quantity_html(q.value, q.standard_uncertainty); }

std::string stated_html(const Quantity& q, std::string_view unit) {
  return quantity_html(q) + (unit.empty() ? "" : " " + escaped(unit)) +
         (q.standard_uncertainty ? "" : ", uncertainty not given");
}

std::string interval_html(const Interval& i, double sd) {
  return data_html(i.low95, value_words(i.low95, sd)) + " to " + data_html(i.high95, value_words(i.high95, sd));
}

const char* interval_method(const ThicknessResult& r) { return r.monte_carlo ? "Monte Carlo" : "GUM"; }

std::string joined(const std::vector<std::string>& names, std::size_t most) {
  std::string text;
  for (std::size_t i = 0; i < names.size() && i < most; ++i) text += (i == 0 ? "" : ", ") + names[i];
  if (names.size() > most) text += fmt::format(" and {} more", names.size() - most);
  return text;
}

bool several_tables(const Run& run) { return run.tables.size() > 1; }

void note_cut(HtmlWriter& w, std::size_t shown, std::size_t all, const char* where) {
  if (all <= shown) return;
  w.paragraph(fmt::format("{} of {} results shown; the other {} are in the {} result.", shown, all, all - shown, where),
              "remark");
}

}  // namespace pellicle::detail
