// Notation: x = t/(Lf cos theta), rho = Lf/Ls, r = R/R0, e = exp(-x), T = 1 - e; f(x) = T exp(rho x) - r [hill1976].
//
//   guess   x0 within 1 % or so, in single precision: a rational function of v = ln(1 + r);
//   decay   T and F = f exp(-rho x) = T - r exp(-rho x) at x0, in double precision;
//   step    x = x0 - f Q3/Q4, where 1/f(x0 + h) = sum of Qn (-h)^n/f^(n+1): Householder's method of fifth order.
// Two exponentials and no logarithm are enough, because every derivative is elementary:
//   f^(n)(x) exp(-rho x) = rho^n - (rho - 1)^n e.
// F tells how far off the guess was. Lanes where it was too far take more steps by themselves, so what happens in a
// lane depends on the numbers of this lane alone, and its bits on nothing else but the instruction set.
//
// This file is compiled once per instruction set; hwy/foreach_target.h includes it again and again. Left out: sets
// that bring nothing here, and sets whose vectors have no size at compile time.
#include <hwy/detect_targets.h>
#undef HWY_DISABLED_TARGETS
#ifdef HWY_AVX3_ZEN4  // not in Highway 1.0.3
#define HWY_DISABLED_TARGETS \
  (HWY_SSSE3 | HWY_AVX3_DL | HWY_AVX3_ZEN4 | HWY_AVX3_SPR | HWY_SVE | HWY_SVE2 | HWY_SVE_256 | HWY_SVE2_128)
#else
#define HWY_DISABLED_TARGETS (HWY_SSSE3 | HWY_AVX3_DL | HWY_SVE | HWY_SVE2 | HWY_SVE_256 | HWY_SVE2_128)
#endif
#undef HWY_TARGET_INCLUDE
#define HWY_TARGET_INCLUDE "estimate/overlayer_kernel.cpp"
#include <hwy/foreach_target.h>
// After foreach_target.h:
#include <hwy/contrib/math/math-inl.h>
#include <hwy/highway.h>

#include <cmath>
#include <cstddef>
#include <cstdint>
#include <cstdlib>
#include <limits>
#include <span>
#include <string_view>
#include <vector>

#include "base/instruction_set.hpp"
#include "estimate/overlayer_kernel.hpp"
#include "pellicle/base/constants.hpp"

HWY_BEFORE_NAMESPACE();
namespace pellicle::detail {
namespace HWY_NAMESPACE {
namespace hn = hwy::HWY_NAMESPACE;

using D = hn::ScalableTag<double>;
using DF = hn::Rebind<float, D>;  // as many lanes, half as wide
using DI = hn::RebindToSigned<D>;
using DFI = hn::RebindToSigned<DF>;
using V = hn::Vec<D>;
using VF = hn::Vec<DF>;
using M = hn::Mask<D>;

constexpr std::size_t kLanes = HWY_MAX_BYTES / sizeof(double);

// Chains of dependent operations that run side by side: one alone would wait for its own results.
#define EACH for (std::size_t j = 0; j < kChains; ++j)
constexpr std::size_t kMostChains = 4;
constexpr std::size_t kGroup = kMostChains * kLanes;

/// Elements that pass through all stages together: what the stages hand on stays in the first-level cache.
constexpr std::size_t kChunk = 512;
static_assert(kChunk % kGroup == 0);

/// c0 + c1 t + ... + c4 t^4
HWY_INLINE VF Quartic(VF t, float c0, float c1, float c2, float c3, float c4) {
  const DF df;
  const VF t2 = hn::Mul(t, t);
  return hn::MulAdd(hn::MulAdd(hn::MulAdd(hn::Set(df, c4), t, hn::Set(df, c3)), t, hn::Set(df, c2)), t2,
                    hn::MulAdd(hn::Set(df, c1), t, hn::Set(df, c0)));
}

/// Coefficients of the guess x0 = v (1 + n1 v + ... + n4 v^4)/(1 + d1 v + ... + d4 v^4), v = ln(1 + r), as functions
/// of (rho - 1)/(rho + 1). Minimax fit by linear programming, reference/fit_overlayer_guess.py: |F/T| below StepTerms'
/// limit for rho from 0.35 to 3, growing to six times that at 0.2 and 5. All of them are positive there.
struct GuessTerms {
  VF n1, n2, n3, n4, d1, d2, d3, d4;

  HWY_INLINE explicit GuessTerms(V rho) {
    const DF df;
    const VF p = hn::DemoteTo(df, rho), one = hn::Set(df, 1.0f);
    const VF t = hn::Div(hn::Sub(p, one), hn::Add(p, one));
    n1 = Quartic(t, 1.6788357e+00f, -2.6571658e-01f, -9.7285311e-01f, 6.7753552e-01f, -1.5257638e+00f);
    n2 = Quartic(t, 1.4400331e+00f, -1.9400336e+00f, -2.8571918e+00f, 4.3650756e+00f, -8.6148605e-01f);
    n3 = Quartic(t, 1.1078726e-02f, 1.9381193e-01f, 6.3956045e-01f, -1.7428604e+00f, 8.8736029e-01f);
    n4 = Quartic(t, 3.0349654e-01f, -1.2606537e+00f, 1.7996963e+00f, -9.7733160e-01f, 1.3495070e-01f);
    d1 = Quartic(t, 1.6884591e+00f, 1.4915258e+00f, 8.8843942e-01f, 4.0596913e+00f, 5.7662356e-01f);
    d2 = Quartic(t, 1.4362869e+00f, 1.2782921e+00f, -3.9392787e+00f, -3.0020120e+00f, 1.8276416e+00f);
    d3 = Quartic(t, 1.1504070e-02f, 1.9799998e-01f, 1.0649235e+00f, -1.2121054e-02f, -9.8863578e-01f);
    d4 = Quartic(t, 3.0348484e-01f, -6.5341909e-01f, -1.1487429e-01f, 7.0711966e-01f, -1.3331494e-01f);
  }
};

/// Guesses for kChains vectors of r; NaN where r is outside the box.
template <std::size_t kChains>
HWY_INLINE void Guess(const V* HWY_RESTRICT r, const GuessTerms& c, VF* HWY_RESTRICT x) {
  const DF df;
  const DFI di;
  const VF one = hn::Set(df, 1.0f);
  VF s[kChains], m[kChains], v[kChains], n[kChains], q[kChains];
  EACH {
    // 1 + r = (1 + m) 2^k with 0 <= m < 1; m without the rounding of 1 + r, so that small r keep their digits.
    s[j] = hn::DemoteTo(df, r[j]);
    const auto power = hn::And(hn::BitCast(di, hn::Add(s[j], one)), hn::Set(di, 0x7F800000));
    const VF inverse = hn::BitCast(df, hn::Sub(hn::Set(di, 0x7F000000), power));
    m[j] = hn::Mul(hn::Sub(s[j], hn::Sub(hn::BitCast(df, power), one)), inverse);
    const VF k = hn::ConvertTo(df, hn::Sub(hn::ShiftRight<23>(power), hn::Set(di, 127)));
    v[j] = hn::Mul(k, hn::Set(df, 0.693147181f));
  }
  // ln(1 + m)/m interpolated at Chebyshev points, relative error 6e-5.
  EACH q[j] = hn::MulAdd(m[j], hn::Set(df, 0.040663438f), hn::Set(df, -0.15602953f));
  EACH q[j] = hn::MulAdd(q[j], m[j], hn::Set(df, 0.30539998f));
  EACH q[j] = hn::MulAdd(q[j], m[j], hn::Set(df, -0.49678875f));
  EACH q[j] = hn::MulAdd(q[j], m[j], hn::Set(df, 0.99993682f));
  EACH v[j] = hn::MulAdd(q[j], m[j], v[j]);
  EACH {
    n[j] = hn::MulAdd(c.n4, v[j], c.n3);
    q[j] = hn::MulAdd(c.d4, v[j], c.d3);
  }
  EACH {
    n[j] = hn::MulAdd(n[j], v[j], c.n2);
    q[j] = hn::MulAdd(q[j], v[j], c.d2);
  }
  EACH {
    n[j] = hn::MulAdd(n[j], v[j], c.n1);
    q[j] = hn::MulAdd(q[j], v[j], c.d1);
  }
  EACH {
    n[j] = hn::MulAdd(n[j], v[j], one);
    q[j] = hn::MulAdd(q[j], v[j], one);
  }
  EACH {
    const auto inside = hn::And(hn::Ge(s[j], hn::Set(df, 0x1p-100f)), hn::Le(s[j], hn::Set(df, 0x1p100f)));
    x[j] = hn::IfThenElse(inside, hn::Div(hn::Mul(n[j], v[j]), q[j]),
                          hn::Set(df, std::numeric_limits<float>::quiet_NaN()));
  }
}

constexpr double kMinusTwoPerLn2 = -2.8853900817779268;

/// 2^(n/2) from the sum of n and 1.5 * 2^52, |n| < 2000.
HWY_INLINE V RootsOfTwo(V sum) {
  const D d;
  const DI di;
  const auto bits = hn::BitCast(di, sum);
  const auto odd = hn::TestBit(bits, hn::Set(di, 1));
  const auto one = hn::Set(di, 0x3FF0000000000000), root = hn::Set(di, 0x3FF6A09E667F3BCD);
  const auto exponent = hn::And(hn::ShiftLeft<51>(bits), hn::Set(di, -0x10000000000000));
  return hn::BitCast(d, hn::Add(hn::IfThenElse(odd, root, one), exponent));
}

/// T and F at x for kChains vectors. exp(z) = 2^(n/2) (1 + g P(g)) with n + g = 2 z/ln 2, |g| <= 1/2; P are minimax
/// polynomials of (2^(g/2) - 1)/g: relative error 1.5e-16 for T, absolute error of g P(g) 1.5e-15 for F.
template <std::size_t kChains>
HWY_INLINE void Decay(const V* HWY_RESTRICT r, V minus_kappa, const V* HWY_RESTRICT x, V* HWY_RESTRICT t,
                      V* HWY_RESTRICT f) {
  const D d;
  const V round = hn::Set(d, 0x1.8p52), one = hn::Set(d, 1.0), minus_one_kappa = hn::Set(d, kMinusTwoPerLn2);
  V g[kChains], h[kChains], p[kChains], q[kChains];
  EACH {
    const V sum = hn::MulAdd(x[j], minus_one_kappa, round);
    g[j] = hn::MulSub(x[j], minus_one_kappa, hn::Sub(sum, round));
    p[j] = RootsOfTwo(sum);
  }
  EACH {
    const V sum = hn::MulAdd(x[j], minus_kappa, round);
    h[j] = hn::MulSub(x[j], minus_kappa, hn::Sub(sum, round));
    q[j] = hn::Mul(RootsOfTwo(sum), r[j]);
  }
  V a[kChains], b[kChains];
#define HORNER(c, k)                                      \
  EACH {                                                  \
    a[j] = hn::MulAdd(a[j], g[j], hn::Set(d, c));         \
    b[j] = hn::MulAdd(b[j], h[j], hn::Set(d, k));         \
  }
  EACH {
    a[j] = hn::MulAdd(g[j], hn::Set(d, 0x1.b5253e04fb633p-33), hn::Set(d, 0x1.63044e3e54f16p-28));
    b[j] = hn::Set(d, 0x1.63128794aa800p-28);
  }
  HORNER(0x1.ffcc071578ce4p-24, 0x1.00236ca847ad6p-23)
  HORNER(0x1.43090c9502130p-19, 0x1.4309091c872cap-19)
  HORNER(0x1.5d87fe77882bap-15, 0x1.5d87f2f89f7f9p-15)
  HORNER(0x1.3b2ab6fc1664dp-11, 0x1.3b2ab6fc9a6dcp-11)
  HORNER(0x1.c6b08d704a2c3p-8, 0x1.c6b08d71e1b18p-8)
  HORNER(0x1.ebfbdff82c507p-5, 0x1.ebfbdff82c39bp-5)
  HORNER(0x1.62e42fefa39efp-2, 0x1.62e42fefa380ap-2)
#undef HORNER
  EACH {
    // T by parts, so that small x keep their digits: n = 0 there, and T = -g P(g).
    t[j] = hn::NegMulAdd(hn::Mul(p[j], g[j]), a[j], hn::Sub(one, p[j]));
    f[j] = hn::Sub(t[j], hn::MulAdd(hn::Mul(q[j], h[j]), b[j], q[j]));
  }
}

/// rho^n/n! and (rho - 1)^n/n!, and the largest |F/T| from which a step ends within 3e-15 of the root.
struct StepTerms {
  V p1, p2, p3, p4, m1, m2, m3, m4, limit;

  HWY_INLINE explicit StepTerms(V rho) {
    const D d;
    const V half = hn::Set(d, 1.0 / 2.0), sixth = hn::Set(d, 1.0 / 6.0), fourth = hn::Set(d, 1.0 / 12.0);
    p1 = rho;
    p2 = hn::Mul(hn::Mul(p1, p1), half);
    p3 = hn::Mul(hn::Mul(hn::Mul(p1, p1), p1), sixth);
    p4 = hn::Mul(hn::Mul(p2, hn::Mul(p1, p1)), fourth);
    m1 = hn::Sub(rho, hn::Set(d, 1.0));
    m2 = hn::Mul(hn::Mul(m1, m1), half);
    m3 = hn::Mul(hn::Mul(hn::Mul(m1, m1), m1), sixth);
    m4 = hn::Mul(hn::Mul(m2, hn::Mul(m1, m1)), fourth);
    limit = hn::Min(hn::Set(d, 5e-3), hn::MulAdd(rho, hn::Set(d, 6.8e-3), hn::Set(d, 2.4e-4)));
  }
};

/// One step for kChains vectors, in place; `near` says where it was the last one needed.
template <std::size_t kChains>
HWY_INLINE void Step(const V* HWY_RESTRICT t, const V* HWY_RESTRICT f, const StepTerms& c, V* HWY_RESTRICT x,
                     M* HWY_RESTRICT near) {
  const D d;
  V a1[kChains], a2[kChains], a3[kChains], a4[kChains], q2[kChains], q3[kChains], q4[kChains];
  EACH {
    const V e = hn::Sub(hn::Set(d, 1.0), t[j]);
    const V f2 = hn::Mul(f[j], f[j]);
    a1[j] = hn::NegMulAdd(c.m1, e, c.p1);
    a2[j] = hn::Mul(hn::NegMulAdd(c.m2, e, c.p2), f[j]);
    a3[j] = hn::Mul(hn::NegMulAdd(c.m3, e, c.p3), f2);
    a4[j] = hn::Mul(hn::NegMulAdd(c.m4, e, c.p4), hn::Mul(f2, f[j]));
    near[j] = hn::Le(hn::Abs(f[j]), hn::Mul(c.limit, t[j]));
  }
  EACH {
    q2[j] = hn::MulSub(a1[j], a1[j], a2[j]);
    q4[j] = hn::MulSub(a3[j], a1[j], a4[j]);
  }
  EACH {
    q3[j] = hn::MulAdd(a1[j], hn::Sub(q2[j], a2[j]), a3[j]);
    q4[j] = hn::NegMulAdd(a2[j], q2[j], q4[j]);
  }
  EACH q4[j] = hn::MulAdd(a1[j], q3[j], q4[j]);
  EACH x[j] = hn::Sub(x[j], hn::Div(hn::Mul(f[j], q3[j]), q4[j]));
}

/// More steps for the lanes that are not near; the others keep what they have.
HWY_NOINLINE void Refine(const V& r, const V& rho, V& x, M& near) {
  const D d;
  const V minus_kappa = hn::Mul(rho, hn::Set(d, kMinusTwoPerLn2));
  const StepTerms terms(rho);
  constexpr int kMostSteps = 6;
  for (int step = 0; step < kMostSteps; ++step) {
    V t, f, next = x;
    M done;
    Decay<1>(&r, minus_kappa, &x, &t, &f);
    Step<1>(&t, &f, terms, &next, &done);
    x = hn::IfThenElse(near, x, next);
    near = hn::Or(near, done);
    // A lane outside the box is NaN from the start and stays so.
    if (hn::AllTrue(d, hn::Or(near, hn::Ne(f, f)))) return;
  }
}

HWY_INLINE V Load(const KernelColumn& column, std::size_t i) {
  const D d;
  return column.step != 0 ? hn::LoadU(d, column.values + i) : hn::Set(d, *column.values);
}

HWY_INLINE M Inside(V v, double low, double high) {
  const D d;
  return hn::And(hn::Ge(v, hn::Set(d, low)), hn::Le(v, hn::Set(d, high)));
}

HWY_INLINE M ReferenceInside(V reference) { return Inside(reference, kLeastReference, kMostReference); }
HWY_INLINE M LengthRatioInside(V rho) { return Inside(rho, 0.2, 5.0); }

/// Stores x·unit, and the status of lanes that are not solved.
HWY_INLINE std::size_t Deliver(V x, M solved, const KernelColumn& unit_column, std::size_t i, double* HWY_RESTRICT out,
                               Status* HWY_RESTRICT status) {
  const D d;
  const V unit = Load(unit_column, i);
  solved = hn::And(solved, Inside(unit, std::numeric_limits<double>::denorm_min(), 0x1p500));
  hn::StoreU(hn::Mul(x, unit), d, out + i);
  if (HWY_LIKELY(hn::AllTrue(d, solved))) return 0;
  HWY_ALIGN double flags[kLanes];
  hn::Store(hn::IfThenElseZero(solved, hn::Set(d, 1.0)), d, flags);
  std::size_t left = 0;
  for (std::size_t lane = 0; lane < kLanes; ++lane) {
    if (flags[lane] != 0.0) continue;
    status[i + lane] = Status::not_converged;
    ++left;
  }
  return left;
}

/// What is the same for every chunk.
struct Shared {
  V rho, inverse_reference;

  HWY_INLINE explicit Shared(const KernelInput& in) {
    const D d;
    rho = hn::Set(d, in.film_length[0] / in.substrate_length[0]);
    inverse_reference = hn::Set(d, 1.0 / in.reference[0]);
  }
};

HWY_INLINE V Reduced(const KernelInput& in, std::size_t i, V inverse_reference) {
  const D d;
  const V ratio = Load(in.ratio, i);
  if (in.reference.step == 0) return hn::Mul(ratio, inverse_reference);
  // The same two roundings as above; a reference outside its box makes NaN of r, and that is outside, too.
  const V reference = Load(in.reference, i);
  return hn::IfThenElse(ReferenceInside(reference), hn::Mul(ratio, hn::Div(hn::Set(d, 1.0), reference)),
                        hn::Set(d, std::numeric_limits<double>::quiet_NaN()));
}

/// Equal lengths: x = ln(1 + r).
HWY_NOINLINE std::size_t ChunkEqual(const KernelInput& in, const Shared& shared, std::size_t begin, std::size_t end,
                                    double* out, Status* status) {
  const D d;
  std::size_t left = 0;
  for (std::size_t i = begin; i < end; i += kLanes) {
    const V r = Reduced(in, i, shared.inverse_reference);
    left += Deliver(hn::Log1p(d, r), Inside(r, 0x1p-100, 0x1p100), in.unit, i, out, status);
  }
  return left;
}

/// kOneRho: one rho for all elements, so that its terms are made once.
template <bool kOneRho>
HWY_NOINLINE std::size_t Chunk(const KernelInput& in, const Shared& shared, std::size_t begin, std::size_t end,
                               double* out, Status* status) {
  const D d;
  const DF df;
  const std::size_t size = end - begin;
  HWY_ALIGN double rs[kChunk], rhos[kOneRho ? kLanes : kChunk], ts[kChunk], fs[kChunk];
  HWY_ALIGN float xs[kChunk];
  // The chains of one pass share their terms; where every vector has its own, chains would only cost registers.
  constexpr std::size_t kGuessChains = kOneRho ? 4 : 1, kOtherChains = kOneRho ? 2 : 1;
  static_assert(kGuessChains <= kMostChains && kOtherChains <= kMostChains);
  {
    constexpr std::size_t kChains = kGuessChains;
    GuessTerms terms(shared.rho);
    for (std::size_t i = 0; i < size; i += kChains * kLanes) {
      V r[kChains];
      VF x[kChains];
      EACH r[j] = Reduced(in, begin + i + j * kLanes, shared.inverse_reference);
      if constexpr (!kOneRho) {
        const V rho = hn::Div(Load(in.film_length, begin + i), Load(in.substrate_length, begin + i));
        r[0] = hn::IfThenElse(LengthRatioInside(rho), r[0], hn::Set(d, std::numeric_limits<double>::quiet_NaN()));
        hn::Store(rho, d, rhos + i);
        terms = GuessTerms(rho);
      }
      Guess<kChains>(r, terms, x);
      EACH {
        hn::Store(r[j], d, rs + i + j * kLanes);
        hn::Store(x[j], df, xs + i + j * kLanes);
      }
    }
  }
  const V scale = hn::Set(d, kMinusTwoPerLn2);
  const V shared_kappa = hn::Mul(shared.rho, scale);
  for (std::size_t i = 0; i < size; i += kOtherChains * kLanes) {
    constexpr std::size_t kChains = kOtherChains;
    V r[kChains], x[kChains], t[kChains], f[kChains];
    EACH {
      r[j] = hn::Load(d, rs + i + j * kLanes);
      x[j] = hn::PromoteTo(d, hn::Load(df, xs + i + j * kLanes));
    }
    Decay<kChains>(r, kOneRho ? shared_kappa : hn::Mul(hn::Load(d, rhos + (kOneRho ? 0 : i)), scale), x, t, f);
    EACH {
      hn::Store(t[j], d, ts + i + j * kLanes);
      hn::Store(f[j], d, fs + i + j * kLanes);
    }
  }
  std::size_t left = 0;
  StepTerms terms(shared.rho);
  for (std::size_t i = 0; i < size; i += kOtherChains * kLanes) {
    constexpr std::size_t kChains = kOtherChains;
    V rho = shared.rho;
    if constexpr (!kOneRho) {
      rho = hn::Load(d, rhos + i);
      terms = StepTerms(rho);
    }
    V x[kChains], t[kChains], f[kChains];
    M near[kChains];
    EACH {
      t[j] = hn::Load(d, ts + i + j * kLanes);
      f[j] = hn::Load(d, fs + i + j * kLanes);
      x[j] = hn::PromoteTo(d, hn::Load(df, xs + i + j * kLanes));
    }
    Step<kChains>(t, f, terms, x, near);
    EACH {
      if (HWY_UNLIKELY(!hn::AllTrue(d, near[j]))) Refine(hn::Load(d, rs + i + j * kLanes), rho, x[j], near[j]);
      if constexpr (!kOneRho) {
        const M equal = hn::Eq(rho, hn::Set(d, 1.0));
        if (!hn::AllFalse(d, equal)) x[j] = hn::IfThenElse(equal, hn::Log1p(d, hn::Load(d, rs + i)), x[j]);
      }
      left += Deliver(x[j], near[j], in.unit, begin + i + j * kLanes, out, status);
    }
  }
  return left;
}

/// Elements [begin, end), a multiple of the group.
std::size_t Chunks(const KernelInput& in, const Shared& shared, std::size_t begin, std::size_t end, double* out,
                   Status* status) {
  std::size_t left = 0;
  const bool one_rho = in.film_length.step == 0 && in.substrate_length.step == 0;
  const bool equal = in.equal_lengths || (one_rho && in.film_length[0] / in.substrate_length[0] == 1.0);
  for (std::size_t i = begin; i < end; i += kChunk) {
    const std::size_t stop = HWY_MIN(i + kChunk, end);
    left += equal     ? ChunkEqual(in, shared, i, stop, out, status)
            : one_rho ? Chunk<true>(in, shared, i, stop, out, status)
                      : Chunk<false>(in, shared, i, stop, out, status);
  }
  return left;
}

/// One value for all that is outside its box leaves all elements.
bool SharedInside(const KernelInput& in, const Shared& shared) {
  const D d;
  const bool one_rho = !in.equal_lengths && in.film_length.step == 0 && in.substrate_length.step == 0;
  return !(one_rho && !hn::AllTrue(d, LengthRatioInside(shared.rho))) &&
         !(in.reference.step == 0 && !hn::AllTrue(d, ReferenceInside(hn::Set(d, in.reference[0]))));
}

std::size_t Solve(const KernelInput& in, std::size_t size, double* out, Status* status) {
  const Shared shared(in);
  const bool inside = SharedInside(in, shared);
  for (std::size_t i = 0; i < size; ++i) status[i] = inside ? Status::ok : Status::not_converged;
  if (!inside) return size;
  const std::size_t whole = size / kGroup * kGroup, rest = size - whole;
  std::size_t left = Chunks(in, shared, 0, whole, out, status);
  if (rest == 0) return left;
  // The last, partial group is filled up with ones and takes the same way.
  double columns[5][kGroup], last_out[kGroup];
  Status last_status[kGroup];
  KernelInput last = in;
  std::size_t next = 0;
  for (KernelColumn* column :
       {&last.ratio, &last.reference, &last.film_length, &last.substrate_length, &last.unit}) {
    double* copy = columns[next++];
    if (column->step == 0) continue;
    for (std::size_t i = 0; i < kGroup; ++i) copy[i] = i < rest ? column->values[whole + i] : 1.0;
    column->values = copy;
  }
  for (std::size_t i = 0; i < kGroup; ++i) last_status[i] = Status::ok;
  Chunks(last, shared, 0, kGroup, last_out, last_status);
  for (std::size_t i = 0; i < rest; ++i) {
    out[whole + i] = last_out[i];
    status[whole + i] = last_status[i];
    left += last_status[i] == Status::ok ? 0 : 1;
  }
  return left;
}

void CosinesOfDeg(const double* angle_deg, std::size_t size, double* out) {
  const D d;
  const V scale = hn::Set(d, kRadianPerDegree);
  std::size_t i = 0;
  for (; i + kLanes <= size; i += kLanes) hn::StoreU(hn::Cos(d, hn::Mul(hn::LoadU(d, angle_deg + i), scale)), d, out + i);
  if (i == size) return;
  HWY_ALIGN double last[kLanes] = {};
  for (std::size_t k = i; k < size; ++k) last[k - i] = angle_deg[k];
  hn::Store(hn::Cos(d, hn::Mul(hn::Load(d, last), scale)), d, last);
  for (std::size_t k = i; k < size; ++k) out[k] = last[k - i];
}

#undef EACH

}  // namespace HWY_NAMESPACE
}  // namespace pellicle::detail
HWY_AFTER_NAMESPACE();

#if HWY_ONCE
namespace pellicle::detail {

std::span<const OverlayerKernelSet> overlayer_kernels() {
  static const std::vector<OverlayerKernelSet> all = [] {
    std::vector<OverlayerKernelSet> kernels;
    [[maybe_unused]] const std::int64_t can_run = runnable_targets();
#define ADD(target, set)                                                                \
  if ((can_run & (target)) != 0) kernels.push_back({hwy::TargetName(target), set::Solve, set::CosinesOfDeg});
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
    kernels.push_back({hwy::TargetName(HWY_STATIC_TARGET), HWY_NAMESPACE::Solve, HWY_NAMESPACE::CosinesOfDeg});
    return kernels;
  }();
  return all;
}

const OverlayerKernelSet& overlayer_kernel() {
  static const OverlayerKernelSet& chosen = []() -> const OverlayerKernelSet& {
    const std::span<const OverlayerKernelSet> all = overlayer_kernels();
    if (const char* name = std::getenv("PELLICLE_INSTRUCTION_SET")) {
      for (const OverlayerKernelSet& kernel : all) {
        if (std::string_view(name) == kernel.instruction_set) return kernel;
      }
    }
    return all.front();
  }();
  return chosen;
}

double reduced_ratio(double ratio, double reference) noexcept {
  const bool inside = reference >= kLeastReference && reference <= kMostReference;
  return inside ? ratio * (1.0 / reference) : ratio / reference;
}

RootResult overlayer_root_as_in_arrays(double reduced_ratio, double length_ratio) {
  if (reduced_ratio == 0.0) return {0.0, Status::ok};
  if (!std::isfinite(reduced_ratio) || !(length_ratio > 0.0) || !std::isfinite(length_ratio)) return {0.0, Status::no_solution};
  const double one = 1.0;
  const KernelInput input{{&reduced_ratio, 0}, {&one, 0}, {&length_ratio, 0}, {&one, 0}, {&one, 0}};
  RootResult root{};
  if (overlayer_kernel().solve(input, 1, &root.x, &root.status) == 0) return root;
  return overlayer_root(reduced_ratio, length_ratio);
}

}  // namespace pellicle::detail
#endif  // HWY_ONCE
