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

TabulatedValue refuse(const char* what, const CoreLevel& level, const PhotonSource& source, const std::string& reason, const char* hint) {
  return {std::nullopt, std::string("no ") + what + " for " + level.name + " with " + source.name + " (" + reason + ")" + hint, reason, ""};
}

/// The reason of this source out of "Ag La, Cr Ka: reason; Ga Ka: other reason".
std::string reason_for(const std::string& refusal, const std::string& source) {
  for (std::size_t begin = 0; begin < refusal.size();) {
    const std::size_t end = std::min(refusal.find("; ", begin), refusal.size());
    const std::string part = refusal.substr(begin, end - begin);
    const std::size_t colon = part.find(": ");
    if (colon != std::string::npos && part.substr(0, colon).find(source) != std::string::npos) return part.substr(colon + 2);
    begin = end + 2;
  }
  return refusal;
}

}  // namespace

TabulatedValue photoionisation_cross_section_barn(const CoreLevel& level, const PhotonSource& source) {
  static const Table table = load("photoionisation", "level", "_barn", true);
  const auto refused = [&](const std::string& reason) { return refuse("reliable cross section", level, source, reason, "; give sensitivity"); };
  const std::optional<std::size_t> column = column_of(source);
  if (!column) return refused("tabulated for the photon energy of five laboratory sources only");
  TabulatedValue result{0.0, {}, {}, {}};
  for (const std::string& member : level.levels) {
    const auto found = table.find({level.element->z, member});
    if (found == table.end()) return refused("not tabulated");
    const Row& row = found->second;
    if (!row.values[*column]) {
      const bool below = source.photon_energy_ev <= level.binding_energy_ev;
      return refused(below || row.refusal.empty() ? "the photon energy is below the threshold" : reason_for(row.refusal, source.name));
    }
    *result.value += *row.values[*column];
    result.source = row.source;
  }
  return result;
}

TabulatedValue asymmetry_parameter(const CoreLevel& level, const PhotonSource& source) {
  // Dipole selection leaves one channel for an s electron, hence cos² with full contrast.
  if (level.subshell.back() == 's') return {2.0, {}, {}, "cooper1968"};
  static const Table table = load("asymmetry", "subshell", "", false);
  const std::optional<std::size_t> column = column_of(source);
  if (!column) return refuse("asymmetry parameter", level, source, "tabulated for the photon energy of five laboratory sources only", "");
  const auto found = table.find({level.element->z, level.subshell});
  if (found == table.end() || !found->second.values[*column]) return refuse("asymmetry parameter", level, source, "not tabulated", "");
  return {found->second.values[*column], {}, {}, found->second.source};
}

}  // namespace pellicle
