#pragma once
/// Runs that several tests start from. All measured numbers are invented; length and reference ratio of silica are
/// recalled [seah2004].

#include <string>
#include <string_view>

#include "pellicle/job/run.hpp"

namespace pellicle::test {

/// A line of a run, its energy settled.
inline Line line(const Run& run, const std::string& label, std::string_view level, const std::string& from) {
  Line l;
  l.label = label;
  l.components = {{label, 1.0}};
  l.level = core_level(level);
  l.kinetic_energy_ev = kinetic_energy_ev(*l.level, run.source);
  l.from = from;
  return l;
}

inline AreaRow area(const std::string& spot, const std::string& label, double value) {
  AreaRow row;
  row.spot = spot;
  row.line = label;
  row.area = value;
  return row;
}

/// Silica on silicon at 34°: one spot of 20000 over 10000, reference ratio 0.9329, length 3.448 nm given.
inline Run silica_run() {
  Run run;
  run.place = "run.toml";
  run.tables = {"areas.csv"};
  run.uncertainty.method = IntervalMethod::gum;
  run.source = photon_source("Al Ka");
  run.emission_deg = 34.0;
  run.sample.layers.push_back({"oxide", catalogue_material("SiO2")});
  run.sample.substrate = catalogue_material("Si");
  run.lines = {line(run, "Si 2p oxide", "Si 2p", "oxide"), line(run, "Si 2p metal", "Si 2p", "substrate")};
  run.lines[1].length_nm["oxide"] = 3.448;
  run.references = {{"Si 2p oxide", "Si 2p metal", 0.9329}};
  run.areas = {area("1", "Si 2p oxide", 20000.0), area("1", "Si 2p metal", 10000.0)};
  return run;
}

}  // namespace pellicle::test
