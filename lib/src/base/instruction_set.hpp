#pragma once
/// Which of the compiled instruction sets this processor can run. Included after hwy/foreach_target.h.

#include <hwy/targets.h>

#include <cstdint>

namespace pellicle::detail {

/// As hwy::SupportedTargets(), in the same bits. That one lives in Highway's shared library, which neither a wheel
/// nor a consumer of a static pellicle shall need; all else we use of Highway is in its headers.
inline std::int64_t runnable_targets() {
  std::int64_t targets = HWY_STATIC_TARGET;
#if HWY_ARCH_X86 && (HWY_COMPILER_GCC || HWY_COMPILER_CLANG)
  // The features Highway lets the compiler use for each set; one that lacks a feature is passed over.
  __builtin_cpu_init();
  if (!__builtin_cpu_supports("sse4.2") || !__builtin_cpu_supports("pclmul") || !__builtin_cpu_supports("aes"))
    return targets;
  targets |= HWY_SSE4;
  if (!__builtin_cpu_supports("avx2") || !__builtin_cpu_supports("fma") || !__builtin_cpu_supports("bmi") ||
      !__builtin_cpu_supports("bmi2")) {
    return targets;
  }
  targets |= HWY_AVX2;
  if (!__builtin_cpu_supports("avx512f") || !__builtin_cpu_supports("avx512cd") ||
      !__builtin_cpu_supports("avx512vl") || !__builtin_cpu_supports("avx512dq") ||
      !__builtin_cpu_supports("avx512bw")) {
    return targets;
  }
  targets |= HWY_AVX3;
#endif
  return targets;
}

}  // namespace pellicle::detail
