#include "pellicle/job/run.hpp"

#include <map>

#include "base/csv.hpp"
#include "pellicle/base/error.hpp"

namespace pellicle {

const Line* Run::find_line(std::string_view label) const noexcept {
  for (const Line& line : lines) {
    if (line.label == label) return &line;
  }
  return nullptr;
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
