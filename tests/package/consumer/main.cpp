// Silicon dioxide on silicon: 2.0 over 0.9329 at 34 deg and L = 3.448 nm make 3.27429 nm (closed form).
#include <cmath>
#include <cstdio>

#include <pellicle/pellicle.hpp>

int main() {
  auto t = pellicle::thickness_from_ratio(
      {.ratio = 2.0, .reference_ratio = 0.9329, .film_line_length_nm = 3.448, .emission_deg = 34.0});
  std::printf("%.5f nm\n", t.value_nm);
  return std::abs(t.value_nm - 3.27429) < 5e-6 ? 0 : 1;
}
