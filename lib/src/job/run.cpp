#include "pellicle/job/run.hpp"

#include <map>

#include "base/csv.hpp"
#include "base/nearest.hpp"
#include "pellicle/base/error.hpp"

namespace pellicle {

const char* contamination_route_name(ContaminationRoute route) noexcept {
  switch (route) {
    case ContaminationRoute::reference: return "reference";
    case ContaminationRoute::sensitivities: return "sensitivities";
    case ContaminationRoute::atomic_percent: break;
  }
  return "atomic-percent";
}

ContaminationRoute contamination_route(std::string_view name) {
  std::vector<std::string> names;
  for (const ContaminationRoute route : {ContaminationRoute::reference, ContaminationRoute::sensitivities, ContaminationRoute::atomic_percent}) {
    if (name == contamination_route_name(route)) return route;
    names.emplace_back(contamination_route_name(route));
  }
  throw InputError("", "unknown contamination route \"" + std::string(name) + "\"", "expected one of: " + detail::join_names(names));
}

const Line* Run::find_line(std::string_view label) const noexcept {
  for (const Line& line : lines) {
    if (line.label == label) return &line;
  }
  return nullptr;
}

std::string Run::place_of(const AreaRow& row) const {
  const std::string file = row.table < tables.size() ? tables[row.table] : place;
  return row.line_number == 0 ? file : file + ":" + std::to_string(row.line_number);
}

const std::vector<std::string>& record_keys() {
  static const std::vector<std::string> keys = {"specimen", "analyst", "date", "instrument_id", "pass_energy_ev",
                                                "background", "fit_model", "charge_reference", "damage_check"};
  return keys;
}

double assumed_value(std::string_view name) {
  static const std::map<std::string, double, std::less<>> values = [] {
    std::map<std::string, double, std::less<>> table;
    detail::for_each_record("defaults", [&](const detail::CsvRecord& row) { table[row.text("name")] = row.number("value"); });
    return table;
  }();
  const auto found = values.find(name);
  if (found == values.end()) throw InputError("", "no assumed value is called \"" + std::string(name) + "\"");
  return found->second;
}

}  // namespace pellicle
