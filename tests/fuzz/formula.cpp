// Any text as a formula: an error, or a formula whose numbers are finite and positive.
#include <cmath>
#include <cstdlib>

#include "fuzz_target.hpp"
#include "pellicle/pellicle.hpp"

extern "C" int LLVMFuzzerTestOneInput(const std::uint8_t* data, std::size_t size) {
  try {
    const pellicle::Formula formula = pellicle::Formula::parse(text_of(data, size));
    const double mass = formula.molar_mass_g_mol();
    if (!(mass > 0.0) || !std::isfinite(mass) || !(formula.mean_atomic_number() >= 1.0)) std::abort();
    if (!formula.same_composition(formula)) std::abort();
  } catch (const pellicle::Error&) {
  }
  return 0;
}
