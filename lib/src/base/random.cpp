// This file is compiled once per instruction set; hwy/foreach_target.h includes it again and again. Fused
// multiply-adds are not used, so that every instruction set gives the same bits. Left out: sets that bring nothing
// here, and sets whose vectors have no size at compile time.
#undef HWY_DISABLED_TARGETS
#define HWY_DISABLED_TARGETS (HWY_SSSE3 | HWY_AVX3_DL | HWY_SVE | HWY_SVE2 | HWY_SVE_256 | HWY_SVE2_128)
#undef HWY_TARGET_INCLUDE
#define HWY_TARGET_INCLUDE "base/random.cpp"
#include <hwy/foreach_target.h>
// After foreach_target.h:
#include <hwy/highway.h>

#include <algorithm>
#include <cstddef>
#include <cstdint>
#include <span>
#include <vector>

#include "base/instruction_set.hpp"
#include "base/random_kernel.hpp"
#include "pellicle/base/random.hpp"

HWY_BEFORE_NAMESPACE();
namespace pellicle::detail {
namespace HWY_NAMESPACE {
namespace hn = hwy::HWY_NAMESPACE;

using DU = hn::CappedTag<std::uint64_t, 8>;
using DF = hn::Rebind<double, DU>;
using VU = hn::Vec<DU>;
using VF = hn::Vec<DF>;

constexpr std::size_t kCounters = RandomStream::kGroup / 2;  // each gives two numbers

// Chains of dependent operations that run side by side: one alone would wait for its own results.
constexpr std::size_t kChains = 4;
#define EACH for (std::size_t j = 0; j < kChains; ++j)

/// Product of the lower 32 bits of every lane.
HWY_INLINE VU Product32(VU a, VU b) {
#if HWY_TARGET == HWY_SCALAR
  const VU low = hn::Set(DU(), 0xFFFFFFFFu);
  return hn::Set(DU(), hn::GetLane(hn::And(a, low)) * hn::GetLane(hn::And(b, low)));
#else
  const hn::Repartition<std::uint32_t, DU> d32;
  return hn::MulEven(hn::BitCast(d32, a), hn::BitCast(d32, b));
#endif
}

/// Philox4x32-10 [salmon2011]. Multipliers and key increments as published there. The upper halves of the lanes hold
/// left-overs between the rounds; Product32 does not look at them.
/// bits[i] and bits[kCounters + i] come from counter first + i: its output words 0, 1 and 2, 3, the lower one first.
HWY_INLINE void Bits(std::uint64_t seed, std::uint64_t block, std::uint64_t first, std::uint64_t* HWY_RESTRICT bits) {
  const DU du;
  const std::size_t lanes = hn::Lanes(du);
  const VU low = hn::Set(du, 0xFFFFFFFFu);
  const VU m0 = hn::Set(du, 0xD2511F53u), m1 = hn::Set(du, 0xCD9E8D57u);
  for (std::size_t i = 0; i < kCounters; i += kChains * lanes) {
    VU c0[kChains], c1[kChains], c2[kChains], c3[kChains];
    EACH {
      c0[j] = hn::Iota(du, first + i + j * lanes);
      c1[j] = hn::ShiftRight<32>(c0[j]);
      c2[j] = hn::Set(du, block);
      c3[j] = hn::Set(du, block >> 32);
    }
    std::uint64_t k0 = seed & 0xFFFFFFFFu, k1 = seed >> 32;
    for (int round = 0; round < 10; ++round) {
      const VU key0 = hn::Set(du, k0), key1 = hn::Set(du, k1);
      EACH {
        const VU p0 = Product32(m0, c0[j]), p1 = Product32(m1, c2[j]);
        c0[j] = hn::Xor(hn::Xor(hn::ShiftRight<32>(p1), c1[j]), key0);
        c2[j] = hn::Xor(hn::Xor(hn::ShiftRight<32>(p0), c3[j]), key1);
        c1[j] = p1;
        c3[j] = p0;
      }
      k0 += 0x9E3779B9u;
      k1 += 0xBB67AE85u;
    }
    EACH {
      const std::size_t at = i + j * lanes;
      hn::StoreU(hn::Or(hn::ShiftLeft<32>(c1[j]), hn::And(c0[j], low)), du, bits + at);
      hn::StoreU(hn::Or(hn::ShiftLeft<32>(c3[j]), hn::And(c2[j], low)), du, bits + kCounters + at);
    }
  }
}

/// 1 <= number < 2 with the upper 52 of the bits.
HWY_INLINE VF OneToTwo(VU bits) {
  return hn::BitCast(DF(), hn::Or(hn::ShiftRight<12>(bits), hn::Set(DU(), 0x3FF0000000000000u)));
}

/// p <- p x + c in every chain.
HWY_INLINE void Horner(VF* p, const VF* x, double c) {
  EACH p[j] = hn::Add(hn::Mul(p[j], x[j]), hn::Set(DF(), c));
}

/// Pairs of normal numbers [box1958] from pairs of random bits, in place. The polynomials interpolate at Chebyshev
/// points; the error stated with each is the largest relative one, rounding left out.
HWY_INLINE void Normal(const std::uint64_t* HWY_RESTRICT bits, double* HWY_RESTRICT numbers) {
  const DU du;
  const DF df;
  const std::size_t lanes = hn::Lanes(du);
  const VU sign = hn::Set(du, 0x8000000000000000u);
  const VU one_bits = hn::Set(du, 0x3FF0000000000000u);
  const VF one = hn::Set(df, 1.0);
  for (std::size_t i = 0; i < kCounters; i += kChains * lanes) {
    VU turn[kChains];
    VF exponent[kChains], s[kChains], w[kChains], log_part[kChains];
    VF v[kChains], y[kChains], sine[kChains], cosine[kChains];
    EACH {
      // u = m 2^e, 0 < u <= 1, √½ <= m < √2; s = (m - 1)/(m + 1), w = s².
      const VF u = hn::Sub(hn::Set(df, 2.0), OneToTwo(hn::LoadU(du, bits + i + j * lanes)));
      const VU ub = hn::BitCast(du, u);
      const VU biased = hn::ShiftRight<52>(hn::Add(ub, hn::Set(du, 0x3FF0000000000000u - 0x3FE6A09E667F3BCDu)));
      exponent[j] = hn::Sub(hn::BitCast(df, hn::Or(biased, hn::Set(du, 0x4330000000000000u))),
                            hn::Set(df, 4503599627370496.0 + 1023.0));
      const VF m = hn::BitCast(df, hn::Add(hn::Sub(ub, hn::ShiftLeft<52>(biased)), one_bits));
      s[j] = hn::Div(hn::Sub(m, one), hn::Add(m, one));
      w[j] = hn::Mul(s[j], s[j]);
      // Three bits choose one of eight images of an eighth of a turn: angle = (π/2) v, -1/2 <= v < 1/2.
      turn[j] = hn::LoadU(du, bits + kCounters + i + j * lanes);
      v[j] = hn::Sub(OneToTwo(hn::ShiftLeft<3>(turn[j])), hn::Set(df, 1.5));
      y[j] = hn::Mul(v[j], v[j]);
    }
    // ln m = s P(w), 0 <= w < 0.02944; error 2.7e-14.
    EACH log_part[j] = hn::Set(df, 0.19608245305704075);
    for (const double c : {0.22174240003765905, 0.28572166372494656, 0.39999994889749985, 0.6666666667958581,
                           1.9999999999999472}) {
      Horner(log_part, w, c);
    }
    // sin((π/2)v) = v S(v²), error 4.8e-15; cos((π/2)v) = C(v²), error 7.9e-14.
    EACH sine[j] = hn::Set(df, -3.556386260704784e-06);
    for (const double c : {0.00016042926504495616, -0.004681752591458209, 0.07969262615574603, -0.645964097504309,
                           1.57079632679489}) {
      Horner(sine, y, c);
    }
    EACH cosine[j] = hn::Set(df, -2.4850963357813638e-05);
    for (const double c : {0.0009191617369539572, -0.020863468002244645, 0.25366950715370434, -1.2337005501201592,
                           0.9999999999999444}) {
      Horner(cosine, y, c);
    }
    EACH {
      const VF log_u =
          hn::Add(hn::Mul(exponent[j], hn::Set(df, 0.6931471805599453)), hn::Mul(s[j], log_part[j]));
      const VF radius = hn::Sqrt(hn::Mul(hn::Set(df, -2.0), log_u));
      const VU sin_bits = hn::BitCast(du, hn::Mul(sine[j], v[j])), cos_bits = hn::BitCast(du, cosine[j]);
      const VU swap = hn::Sub(hn::Zero(du), hn::And(hn::ShiftRight<61>(turn[j]), hn::Set(du, 1)));
      const VU exchange = hn::And(hn::Xor(sin_bits, cos_bits), swap);
      const VU first = hn::Xor(hn::Xor(sin_bits, exchange), hn::And(hn::ShiftLeft<1>(turn[j]), sign));
      const VU second = hn::Xor(hn::Xor(cos_bits, exchange), hn::And(turn[j], sign));
      hn::StoreU(hn::Mul(radius, hn::BitCast(df, first)), df, numbers + i + j * lanes);
      hn::StoreU(hn::Mul(radius, hn::BitCast(df, second)), df, numbers + kCounters + i + j * lanes);
    }
  }
}

HWY_INLINE void Uniform(const std::uint64_t* HWY_RESTRICT bits, double* HWY_RESTRICT numbers) {
  const DU du;
  const DF df;
  for (std::size_t i = 0; i < RandomStream::kGroup; i += hn::Lanes(du))
    hn::StoreU(hn::Sub(OneToTwo(hn::LoadU(du, bits + i)), hn::Set(df, 1.0 - 0x1p-53)), df, numbers + i);
}

void FillBits(std::uint64_t seed, std::uint64_t block, std::uint64_t first, std::size_t groups, std::uint64_t* out) {
  for (std::size_t g = 0; g < groups; ++g) Bits(seed, block, first + g * kCounters, out + g * RandomStream::kGroup);
}

void FillUniform(std::uint64_t seed, std::uint64_t block, std::uint64_t first, std::size_t groups, double* out) {
  alignas(64) std::uint64_t bits[RandomStream::kGroup];
  for (std::size_t g = 0; g < groups; ++g) {
    Bits(seed, block, first + g * kCounters, bits);
    Uniform(bits, out + g * RandomStream::kGroup);
  }
}

void FillNormal(std::uint64_t seed, std::uint64_t block, std::uint64_t first, std::size_t groups, double* out) {
  alignas(64) std::uint64_t bits[RandomStream::kGroup];
  for (std::size_t g = 0; g < groups; ++g) {
    Bits(seed, block, first + g * kCounters, bits);
    Normal(bits, out + g * RandomStream::kGroup);
  }
}

#undef EACH

}  // namespace HWY_NAMESPACE
}  // namespace pellicle::detail
HWY_AFTER_NAMESPACE();

#if HWY_ONCE
namespace pellicle {
namespace detail {
namespace {

template <typename Element>
using Fill = void (*)(std::uint64_t, std::uint64_t, std::uint64_t, std::size_t, Element*);

/// Fills any number of elements; the last group is made aside and what is too much of it is dropped.
template <typename Element>
void fill(Fill<Element> kernel, std::uint64_t seed, std::uint64_t block, std::uint64_t& next,
          std::span<Element> numbers) noexcept {
  constexpr std::size_t group = RandomStream::kGroup;
  const std::size_t whole = numbers.size() / group, rest = numbers.size() % group;
  kernel(seed, block, next, whole, numbers.data());
  next += whole * (group / 2);
  if (rest == 0) return;
  Element last[group];
  kernel(seed, block, next, 1, last);
  next += group / 2;
  std::copy_n(last, rest, numbers.data() + whole * group);
}

}  // namespace

std::span<const RandomKernel> random_kernels() {
  static const std::vector<RandomKernel> all = [] {
    std::vector<RandomKernel> kernels;
    [[maybe_unused]] const std::int64_t can_run = runnable_targets();
#define ADD(target, set)                                                                                      \
  if ((can_run & (target)) != 0) {                                                                            \
    kernels.push_back({hwy::TargetName(target), set::FillBits, set::FillUniform, set::FillNormal});           \
  }
#if HWY_TARGETS & HWY_AVX3 & ~HWY_STATIC_TARGET
    ADD(HWY_AVX3, N_AVX3)
#endif
#if HWY_TARGETS & HWY_AVX2 & ~HWY_STATIC_TARGET
    ADD(HWY_AVX2, N_AVX2)
#endif
#if HWY_TARGETS & HWY_SSE4 & ~HWY_STATIC_TARGET
    ADD(HWY_SSE4, N_SSE4)
#endif
#undef ADD
    kernels.push_back({hwy::TargetName(HWY_STATIC_TARGET), HWY_NAMESPACE::FillBits, HWY_NAMESPACE::FillUniform,
                       HWY_NAMESPACE::FillNormal});
    return kernels;
  }();
  return all;
}

}  // namespace detail

void RandomStream::fill_bits(std::span<std::uint64_t> bits) noexcept {
  detail::fill(detail::random_kernels().front().bits, seed_, block_, next_, bits);
}

void RandomStream::fill_uniform(std::span<double> numbers) noexcept {
  detail::fill(detail::random_kernels().front().uniform, seed_, block_, next_, numbers);
}

void RandomStream::fill_normal(std::span<double> numbers) noexcept {
  detail::fill(detail::random_kernels().front().normal, seed_, block_, next_, numbers);
}

}  // namespace pellicle
#endif  // HWY_ONCE
