#include "pellicle/lines/photoionisation.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <map>
#include <utility>

#include "base/csv.hpp"

namespace pellicle {
namespace {

/// The laboratory energies: name of the source and the prefix of its columns.
constexpr std::array<std::pair<const char*, const char*>, 5> kTabulatedSources = {
    {{"Mg Ka", "mg_ka"}, {"Al Ka", "al_ka"}, {"Ag La", "ag_la"}, {"Cr Ka", "cr_ka"}, {"Ga Ka", "ga_ka"}}};

struct Row {
  std::array<std::optional<double>, kTabulatedSources.size()> values;
  std::string refusal, source;
};

using Table = std::map<std::pair<int, std::string>, Row>;

Table load(std::string_view name, const std::string& key_column, const std::string& suffix, bool has_refusal) {
  Table table;
  detail::for_each_record(name, [&](const detail::CsvRecord& record) {
    Row row;
    for (std::size_t i = 0; i < kTabulatedSources.size(); ++i) {
      row.values[i] = record.optional_number(kTabulatedSources[i].second + suffix);
    }
    if (has_refusal) row.refusal = record.text("refused");
    row.source = record.text("source");
    table[{static_cast<int>(record.number("z")), record.text(key_column)}] = std::move(row);
  });
  return table;
}

std::optional<std::size_t> column_of(const PhotonSource& source) {
  for (std::size_t i = 0; i < kTabulatedSources.size(); ++i) {
    if (source.name == kTabulatedSources[i].first) return i;
  }
  return std::nullopt;
}

TabulatedValue refuse(const CoreLevel& level, const PhotonSource& source, const std::string& reason) {
  return {std::nullopt, "no " + reason + " for " + level.name + " with " + source.name + "; give sensitivity", ""};
}

}  // namespace

TabulatedValue photoionisation_cross_section_barn(const CoreLevel& level, const PhotonSource& source) {
  static const Table table = load("photoionisation", "level", "_barn", true);
  const std::optional<std::size_t> column = column_of(source);
  if (!column) return refuse(level, source, "cross section is tabulated at this photon energy");
  TabulatedValue result{0.0, {}, {}};
  for (const std::string& member : level.levels) {
    const auto found = table.find({level.element->z, member});
    if (found == table.end()) return refuse(level, source, "cross section is tabulated");
    const Row& row = found->second;
    if (!row.values[*column]) {
      const bool below = source.photon_energy_ev <= level.binding_energy_ev;
      return refuse(level, source,
                    below || row.refusal.empty() ? "cross section (the photon energy is below the threshold)"
                                                 : "reliable cross section (" + row.refusal + ")");
    }
    *result.value += *row.values[*column];
    result.source = row.source;
  }
  return result;
}

TabulatedValue asymmetry_parameter(const CoreLevel& level, const PhotonSource& source) {
  // Dipole selection leaves one channel for an s electron, hence cos² with full contrast.
  if (level.subshell.back() == 's') return {2.0, {}, "cooper1968"};
  static const Table table = load("asymmetry", "subshell", "", false);
  const std::optional<std::size_t> column = column_of(source);
  if (!column) return refuse(level, source, "asymmetry parameter is tabulated at this photon energy");
  const auto found = table.find({level.element->z, level.subshell});
  if (found == table.end() || !found->second.values[*column]) {
    return refuse(level, source, "asymmetry parameter is tabulated");
  }
  return {found->second.values[*column], {}, found->second.source};
}

}  // namespace pellicle
