// This file is compiled once per instruction set; hwy/foreach_target.h includes it again and again. Left out: sets that
// bring nothing here, and sets whose vectors have no size at compile time.
#undef HWY_DISABLED_TARGETS
#define HWY_DISABLED_TARGETS (HWY_SSSE3 | HWY_AVX3_DL | HWY_SVE | HWY_SVE2 | HWY_SVE_256 | HWY_SVE2_128)
#undef HWY_TARGET_INCLUDE
#define HWY_TARGET_INCLUDE "base/exponential.cpp"
#include <hwy/foreach_target.h>
// After foreach_target.h:
#include <hwy/contrib/math/math-inl.h>
#include <hwy/highway.h>

#include <cstddef>
#include <cstdint>

#include "base/exponential.hpp"
#include "base/instruction_set.hpp"

HWY_BEFORE_NAMESPACE();
namespace pellicle::detail {
namespace HWY_NAMESPACE {
namespace hn = hwy::HWY_NAMESPACE;

void ExponentialOfLinear(double offset, double scale, double* x, std::size_t size) {
  const hn::ScalableTag<double> d;
  constexpr std::size_t kLanes = HWY_MAX_BYTES / sizeof(double);
  const auto o = hn::Set(d, offset), s = hn::Set(d, scale);
  std::size_t i = 0;
  for (; i + kLanes <= size; i += kLanes) hn::StoreU(hn::Exp(d, hn::MulAdd(hn::LoadU(d, x + i), s, o)), d, x + i);
  if (i == size) return;
  // The last, partial vector is filled up with zeros.
  HWY_ALIGN double last[kLanes] = {};
  for (std::size_t k = i; k < size; ++k) last[k - i] = x[k];
  hn::Store(hn::Exp(d, hn::MulAdd(hn::Load(d, last), s, o)), d, last);
  for (std::size_t k = i; k < size; ++k) x[k] = last[k - i];
}

}  // namespace HWY_NAMESPACE
}  // namespace pellicle::detail
HWY_AFTER_NAMESPACE();

#if HWY_ONCE
namespace pellicle::detail {
namespace {

using Kernel = void (*)(double, double, double*, std::size_t);

Kernel fastest() {
  [[maybe_unused]] const std::int64_t can_run = runnable_targets();
#if HWY_TARGETS & HWY_AVX3 & ~HWY_STATIC_TARGET
  if ((can_run & HWY_AVX3) != 0) return N_AVX3::ExponentialOfLinear;
#endif
#if HWY_TARGETS & HWY_AVX2 & ~HWY_STATIC_TARGET
  if ((can_run & HWY_AVX2) != 0) return N_AVX2::ExponentialOfLinear;
#endif
#if HWY_TARGETS & HWY_SSE4 & ~HWY_STATIC_TARGET
  if ((can_run & HWY_SSE4) != 0) return N_SSE4::ExponentialOfLinear;
#endif
  return HWY_NAMESPACE::ExponentialOfLinear;
}

}  // namespace

void exponential_of_linear(double offset, double scale, std::span<double> x) {
  static const Kernel kernel = fastest();
  kernel(offset, scale, x.data(), x.size());
}

}  // namespace pellicle::detail
#endif  // HWY_ONCE
