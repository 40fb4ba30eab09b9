#pragma once
/// The code behind RandomStream, once per instruction set.

#include <cstddef>
#include <cstdint>
#include <span>

namespace pellicle::detail {

/// Fill whole groups of RandomStream::kGroup numbers of the stream (seed, block), from the counter `first` on.
/// Every kernel gives the same bits.
struct RandomKernel {
  const char* instruction_set;
  void (*bits)(std::uint64_t seed, std::uint64_t block, std::uint64_t first, std::size_t groups, std::uint64_t* out);
  void (*uniform)(std::uint64_t seed, std::uint64_t block, std::uint64_t first, std::size_t groups, double* out);
  void (*normal)(std::uint64_t seed, std::uint64_t block, std::uint64_t first, std::size_t groups, double* out);
};

/// Those that this processor can run, the fastest first; at least one.
[[nodiscard]] std::span<const RandomKernel> random_kernels();

}  // namespace pellicle::detail
