#pragma once
/// The root of [1 − exp(−x)] exp(ϱ x) = r for arrays, in the widest vectors the processor has.

#include <cstddef>
#include <span>

#include "estimate/overlayer_root.hpp"
#include "pellicle/base/status.hpp"

namespace pellicle::detail {

/// References the kernel takes. Their reciprocals are normal numbers.
inline constexpr double kLeastReference = 0x1p-500, kMostReference = 0x1p500;

/// One input of the kernel: a value per element (step 1), or one value for all (step 0), which is not spread out.
struct KernelColumn {
  const double* values;
  std::size_t step;

  [[nodiscard]] double operator[](std::size_t i) const { return values[i * step]; }
};

/// What the kernel turns into x·unit, with r = ratio/reference and ϱ = film_length/substrate_length.
struct KernelInput {
  KernelColumn ratio, reference, film_length, substrate_length;
  KernelColumn unit;           ///< L_f cosθ for a thickness, 1 for x itself
  bool equal_lengths = false;  ///< ϱ = 1, whatever the lengths are
};

/// Solves elements [0, size). Those outside the box where the vector code is proven (r from 2^-100 to 2^100, ϱ from
/// 0.2 to 5, reference as above, 0 < unit <= 2^500) are left to the caller: status not_converged, value not
/// meant. All others get Status::ok.
/// @return how many elements were left
using OverlayerKernel = std::size_t (*)(const KernelInput& input, std::size_t size, double* out, Status* status);

/// cos of angles in degrees, error at most 4 ulp for |angle| <= 1e6.
using CosineKernel = void (*)(const double* angle_deg, std::size_t size, double* out);

/// The kernels for one instruction set.
struct OverlayerKernelSet {
  const char* instruction_set;  ///< in Highway's words: "AVX3" (AVX-512), "AVX2", "SSE4", ...
  OverlayerKernel solve;
  CosineKernel cosines_of_deg;
};

/// Those that this processor can run, the fastest first; at least one.
[[nodiscard]] std::span<const OverlayerKernelSet> overlayer_kernels();

/// The kernel in use: the fastest, or the one the environment variable PELLICLE_INSTRUCTION_SET names when the
/// library is first used. Results repeat to the last bit within one instruction set, so a name makes them repeat on
/// another processor, too. A name that is unknown or cannot run here changes nothing.
[[nodiscard]] const OverlayerKernelSet& overlayer_kernel();

/// r = ratio/reference, rounded as the kernel rounds it where the kernel may be used.
[[nodiscard]] double reduced_ratio(double ratio, double reference) noexcept;

/// One root, with the bits that the same r and ϱ have in an array.
/// @param reduced_ratio r >= 0, finite @param length_ratio ϱ >= 0, not NaN
[[nodiscard]] RootResult overlayer_root_as_in_arrays(double reduced_ratio, double length_ratio);

}  // namespace pellicle::detail
