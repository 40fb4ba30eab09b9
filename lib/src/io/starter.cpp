#include "pellicle/io/starter.hpp"

namespace pellicle {
namespace {

constexpr std::string_view kBefore = R"toml(# A run file for pellicle. Every number below is invented: replace it with yours.
# Any number may carry its standard uncertainty: { value = 2.8, sd = 0.2 } or { value = 2.8, relative_sd = 0.07 }.
title = "Starter run (invented numbers)"

[record]                      # echoed in results; leave out what you do not know
specimen = "S-01"
fit_model = "one asymmetric metal peak, one oxide peak"

[instrument]
source = "Al Ka"              # Mg Ka, Al Ka, Ag La, Cr Ka, Ga Ka … or photon_energy_ev = 1486.6
emission_deg = 0.0            # from the surface normal, for rows that state no angle; takeoff_deg counts from the surface
emission_sd_deg = 0.5         # absent: 1 deg is assumed, and said

[sample]
substrate = "Al"              # catalogue id or formula (see: pellicle materials), or { formula = …, density_g_cm3 = … }

[[sample.layer]]              # outermost layer first
name = "contamination"
material = "hydrocarbon"

[[sample.layer]]              # the film lies directly on the substrate
name = "oxide"
material = { formula = "Al2O3", density_g_cm3 = 3.1, band_gap_ev = 7.0 }

[[line]]                      # one fitted peak, by the name the area table uses
label = "Al 2p oxide"
level = "Al 2p"               # or "Al 2p3/2", or kinetic_energy_ev = …; binding_energy_ev = … overrides the table
from = "oxide"                # the layer that emits it
# length_nm = { oxide = { value = 2.8, sd = 0.2 } }   # attenuation length; absent: predicted

[[line]]
label = "Al 2p metal"
level = "Al 2p"
from = "substrate"

[[reference]]                 # infinitely thick film over bare substrate, same instrument settings
film = "Al 2p oxide"
substrate = "Al 2p metal"
ratio = { value = 0.65, sd = 0.03 }

[data]
areas = ")toml";

constexpr std::string_view kAfter = R"toml("
area_unit = "arbitrary"       # counts | counts/s | counts*eV | counts*eV/s | arbitrary
)toml";

}  // namespace

std::string starter_run(std::string_view table) {
  std::string quoted;
  for (const char c : table) {
    if (c == '"' || c == '\\') quoted += '\\';
    quoted += c;
  }
  return std::string(kBefore) + quoted + std::string(kAfter);
}

std::string starter_areas() {
  return "spot,emission_deg,line,area,area_sd\n"
         "1,0,Al 2p oxide,4210,65\n"
         "1,0,Al 2p metal,3120,55\n"
         "2,0,Al 2p oxide,4150,65\n"
         "2,0,Al 2p metal,3190,55\n";
}

}  // namespace pellicle
