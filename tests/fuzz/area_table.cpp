// Any text as an area table: an error, or rows of finite numbers.
#include <cmath>
#include <cstdlib>

#include "fuzz_target.hpp"
#include "pellicle/pellicle.hpp"

extern "C" int LLVMFuzzerTestOneInput(const std::uint8_t* data, std::size_t size) {
  try {
    for (const pellicle::AreaRow& row : pellicle::read_area_table(text_of(data, size), "table.csv").rows) {
      if ((row.area && !std::isfinite(*row.area)) || row.line.empty()) std::abort();
      if (row.emission_deg && !(*row.emission_deg >= 0.0 && *row.emission_deg < 90.0)) std::abort();
    }
  } catch (const pellicle::Error&) {
  }
  return 0;
}
