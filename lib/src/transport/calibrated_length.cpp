#include "pellicle/transport/calibrated_length.hpp"

#include <vector>

#include "base/csv.hpp"
#include "base/nearest.hpp"
#include "pellicle/base/error.hpp"

namespace pellicle {

std::span<const CalibratedLength> calibrated_lengths() {
  static const std::vector<CalibratedLength> all = [] {
    std::vector<CalibratedLength> rows;
    detail::for_each_record("calibrated_lengths", [&](const detail::CsvRecord& row) {
      Quantity length = row.number("length_nm");
      length.standard_uncertainty = row.optional_number("sd_nm");
      rows.push_back({row.text("set"), row.text("material"), row.text("line"), row.text("photon_source"),
                      row.number("kinetic_energy_ev"), length, row.text("source"), row.text("mark"), row.text("note")});
    });
    return rows;
  }();
  return all;
}

const CalibratedLength& calibrated_length(std::string_view set, std::string_view material_id, std::string_view line,
                                          std::string_view photon_source) {
  std::vector<std::string> sets;
  bool known = false;
  std::string held;
  for (const CalibratedLength& row : calibrated_lengths()) {
    if (sets.empty() || sets.back() != row.set) sets.push_back(row.set);
    if (row.set != set) continue;
    known = true;
    if (row.material == material_id && row.line == line && row.photon_source == photon_source) return row;
    held += (held.empty() ? "" : ", ") + row.material + " " + row.line + " " + row.photon_source;
  }
  if (!known) {
    throw InputError("", "unknown length set \"" + std::string(set) + "\"", detail::name_hint(set, sets));
  }
  throw InputError("", "length set \"" + std::string(set) + "\" holds no length for " + std::string(material_id) + " " +
                           std::string(line) + " " + std::string(photon_source), "it holds: " + held);
}

}  // namespace pellicle
