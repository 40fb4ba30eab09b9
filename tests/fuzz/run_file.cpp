// Any text as a run file: an error, or a run whose results are finite.
#include <cmath>
#include <cstdlib>

#include "fuzz_target.hpp"
#include "pellicle/pellicle.hpp"

extern "C" int LLVMFuzzerTestOneInput(const std::uint8_t* data, std::size_t size) {
  try {
    pellicle::Run run = pellicle::parse_run(text_of(data, size), PELLICLE_FUZZ_PLACE);
    run.uncertainty.draws = 1000;  // a million would be all that this does
    for (const pellicle::ThicknessResult& r : pellicle::run_thickness(run).results) {
      if (r.thickness && (!std::isfinite(r.thickness->value_nm) || !std::isfinite(r.thickness->standard_uncertainty_nm))) std::abort();
    }
  } catch (const pellicle::Error&) {
  }
  return 0;
}
