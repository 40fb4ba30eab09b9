#include "pellicle/lines/core_level.hpp"

#include <algorithm>
#include <array>
#include <cctype>
#include <map>

#include "base/csv.hpp"
#include "base/nearest.hpp"
#include "pellicle/base/error.hpp"
#include "pellicle/base/number.hpp"

namespace pellicle {
namespace {

struct LevelRow {
  std::string level;
  double binding_energy_ev;
  double occupancy;
  bool outer;
  std::string source, mark;
};

using LevelTable = std::map<int, std::vector<LevelRow>>;

const LevelTable& table() {
  static const LevelTable all = [] {
    LevelTable levels;
    detail::for_each_record("core_levels", [&](const detail::CsvRecord& row) {
      levels[static_cast<int>(row.number("z"))].push_back({row.text("level"), row.number("binding_energy_ev"),
                                                          row.number("occupancy"), row.text("outer") == "1",
                                                          row.text("source"), row.text("mark")});
    });
    return levels;
  }();
  return all;
}

std::string subshell_of(const std::string& level) { return level.substr(0, 2); }

const std::vector<LevelRow>& rows_of(const Element& e) {
  const auto found = table().find(e.z);
  if (found == table().end()) {
    throw InputError("", "no core levels are tabulated for " + e.symbol, "give kinetic_energy_ev for this line");
  }
  return found->second;
}

CoreLevel make_level(const Element& e, const std::vector<const LevelRow*>& rows, const std::string& short_name) {
  CoreLevel level;
  level.name = e.symbol + " " + short_name;
  level.element = &e;
  level.subshell = subshell_of(rows.front()->level);
  for (const LevelRow* row : rows) {
    level.levels.push_back(row->level);
    level.occupancy += row->occupancy;
    level.binding_energy_ev += row->occupancy * row->binding_energy_ev;
    level.outer = level.outer || row->outer;
    level.source = row->source;
    level.mark = row->mark;
  }
  if (rows.size() == 1) {
    level.binding_energy_ev = rows.front()->binding_energy_ev;
  } else if (level.occupancy > 0.0) {
    level.binding_energy_ev /= level.occupancy;
  } else {  // a filler pair without electrons: plain mean
    for (const LevelRow* row : rows) level.binding_energy_ev += row->binding_energy_ev / static_cast<double>(rows.size());
  }
  return level;
}

}  // namespace

bool CoreLevel::is_half_doublet() const noexcept {
  return levels.size() == 1 && levels.front().find('/') != std::string::npos && subshell.back() != 's';
}

std::vector<CoreLevel> core_levels(const Element& e) {
  // A full doublet stands before its members; subshells by falling energy.
  std::vector<std::vector<CoreLevel>> groups;
  const std::vector<LevelRow>& rows = rows_of(e);
  std::vector<std::string> done;
  for (const LevelRow& row : rows) {
    const std::string subshell = subshell_of(row.level);
    if (std::find(done.begin(), done.end(), subshell) != done.end()) continue;
    done.push_back(subshell);
    std::vector<const LevelRow*> members;
    for (const LevelRow& other : rows) {
      if (subshell_of(other.level) == subshell) members.push_back(&other);
    }
    std::vector<CoreLevel> group = {make_level(e, members, subshell)};
    if (members.size() == 2) {
      for (const LevelRow* member : members) group.push_back(make_level(e, {member}, member->level));
    }
    groups.push_back(std::move(group));
  }
  std::stable_sort(groups.begin(), groups.end(), [](const auto& a, const auto& b) {
    return a.front().binding_energy_ev > b.front().binding_energy_ev;
  });
  std::vector<CoreLevel> all;
  for (auto& group : groups) std::move(group.begin(), group.end(), std::back_inserter(all));
  return all;
}

CoreLevel core_level(std::string_view name) {
  std::string compact;
  for (const char c : name) {
    if (!std::isspace(static_cast<unsigned char>(c))) compact.push_back(c);
  }
  std::size_t split = 0;
  while (split < compact.size() && std::isalpha(static_cast<unsigned char>(compact[split]))) ++split;
  const std::string quoted = "line \"" + std::string(name) + "\"";
  if (split > 0 && split == compact.size()) (void)element(compact);  // an unknown element is the better complaint
  if (split == 0 || split == compact.size()) {
    throw InputError("", quoted + " is not of the form \"element level\"", "expected for example \"Si 2p\" or \"Ti 2p3/2\"");
  }
  const Element& e = element(std::string_view(compact).substr(0, split));
  const std::string wanted = compact.substr(split);
  std::vector<std::string> known;
  for (CoreLevel& level : core_levels(e)) {
    const std::string short_name = level.name.substr(e.symbol.size() + 1);
    if (short_name == wanted) return std::move(level);
    known.push_back(level.name);
  }
  throw InputError("", e.symbol + " has no tabulated level \"" + wanted + "\"",
                   "expected one of: " + detail::join_names(known));
}

double kinetic_energy_ev(const CoreLevel& level, const PhotonSource& source) {
  const double energy = source.photon_energy_ev - level.binding_energy_ev;
  if (!(energy > 0.0)) {
    throw DomainError("", "photons of " + number_text(source.photon_energy_ev) + " eV cannot reach " + level.name +
                              " at " + energy_text(level.binding_energy_ev) + " eV binding energy",
                      "choose another line or source");
  }
  return energy;
}

}  // namespace pellicle
