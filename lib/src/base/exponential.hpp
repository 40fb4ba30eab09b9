#pragma once
/// Exponentials of arrays, in the widest vectors the processor has.

#include <span>

namespace pellicle::detail {

/// x ← exp(offset + scale·x), relative error at most 4 ulp while the exponent lies within ±700. The bits of an element
/// depend on its value and the instruction set alone, not on its place.
void exponential_of_linear(double offset, double scale, std::span<double> x);

}  // namespace pellicle::detail
