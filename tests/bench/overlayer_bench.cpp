// The kernel of the two-energy thickness against one vectorised exp and one vectorised log over the same array, for
// every instruction set this processor can run: pellicle_overlayer_bench
// This file is compiled once per instruction set; hwy/foreach_target.h includes it again and again.
#undef HWY_TARGET_INCLUDE
#define HWY_TARGET_INCLUDE "overlayer_bench.cpp"
#include <hwy/foreach_target.h>
// After foreach_target.h:
#include <hwy/contrib/math/math-inl.h>
#include <hwy/highway.h>

#include <benchmark/benchmark.h>

#include <cmath>
#include <cstddef>
#include <cstdio>
#include <map>
#include <random>
#include <string>
#include <vector>

#include "base/instruction_set.hpp"
#include "estimate/overlayer_kernel.hpp"

HWY_BEFORE_NAMESPACE();
namespace pellicle::bench {
namespace HWY_NAMESPACE {
namespace hn = hwy::HWY_NAMESPACE;

/// exp and log of every element; the size is a multiple of every vector.
void ExpLog(const double* HWY_RESTRICT in, std::size_t size, double* HWY_RESTRICT exp, double* HWY_RESTRICT log) {
  const hn::ScalableTag<double> d;
  for (std::size_t i = 0; i < size; i += hn::Lanes(d)) hn::StoreU(hn::Exp(d, hn::LoadU(d, in + i)), d, exp + i);
  for (std::size_t i = 0; i < size; i += hn::Lanes(d)) hn::StoreU(hn::Log(d, hn::LoadU(d, in + i)), d, log + i);
}

}  // namespace HWY_NAMESPACE
}  // namespace pellicle::bench
HWY_AFTER_NAMESPACE();

#if HWY_ONCE
namespace pellicle::bench {
namespace {

using detail::KernelInput;

constexpr std::size_t kSize = std::size_t{1} << 20;
constexpr double kLengthRatio = 0.8;  // invented: film line 2.4 nm, substrate line 3.0 nm

struct Data {
  std::vector<double> ratio, length_ratio, out, other;
  std::vector<Status> status;

  Data() : ratio(kSize), length_ratio(kSize), out(kSize), other(kSize), status(kSize) {
    std::mt19937_64 engine(1);
    std::uniform_real_distribution<double> x(0.01, 5.0), spread(0.5, 2.0);
    for (std::size_t i = 0; i < kSize; ++i) {
      const double reduced = x(engine);
      ratio[i] = -std::expm1(-reduced) * std::exp(kLengthRatio * reduced);
      length_ratio[i] = spread(engine);
    }
  }
};

Data& data() {
  static Data all;
  return all;
}

using ExpLogFunction = void (*)(const double*, std::size_t, double*, double*);

void exp_log(benchmark::State& state, ExpLogFunction function) {
  for (auto _ : state) {
    function(data().ratio.data(), kSize, data().out.data(), data().other.data());
    benchmark::ClobberMemory();
  }
  state.SetItemsProcessed(state.iterations() * static_cast<std::int64_t>(kSize));
}

enum class Lengths { equal, one_ratio, ratio_per_element };

void overlayer(benchmark::State& state, detail::OverlayerKernel kernel, Lengths lengths) {
  const double one = 1.0, rho = kLengthRatio;
  KernelInput input{{data().ratio.data(), 1}, {&one, 0}, {&rho, 0}, {&one, 0}, {&one, 0}};
  input.equal_lengths = lengths == Lengths::equal;
  if (lengths == Lengths::ratio_per_element) input.film_length = {data().length_ratio.data(), 1};
  for (auto _ : state) {
    std::size_t left = kernel(input, kSize, data().out.data(), data().status.data());
    benchmark::DoNotOptimize(left);
    benchmark::ClobberMemory();
  }
  state.SetItemsProcessed(state.iterations() * static_cast<std::int64_t>(kSize));
}

/// Prints as usual and keeps the shortest time of every benchmark.
class KeepTimes : public benchmark::ConsoleReporter {
 public:
  void ReportRuns(const std::vector<Run>& runs) override {
    ConsoleReporter::ReportRuns(runs);
    for (const Run& run : runs) {
      if (run.run_type != Run::RT_Iteration) continue;
      const double time = run.GetAdjustedRealTime();
      const std::string name = run.run_name.function_name;
      const auto [at, added] = shortest.emplace(name, time);
      if (!added && time < at->second) at->second = time;
    }
  }
  std::map<std::string, double> shortest;
};

}  // namespace

int run() {
  std::map<std::string, ExpLogFunction> exp_logs;
  const std::int64_t can_run = detail::runnable_targets();
#define ADD(target, set)                                                             \
  if ((can_run & (target)) != 0) exp_logs.emplace(hwy::TargetName(target), set::ExpLog);
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
  exp_logs.emplace(hwy::TargetName(HWY_STATIC_TARGET), HWY_NAMESPACE::ExpLog);

  // Sides take turns and the shortest time counts, so that a busy moment spoils neither.
  constexpr int kRepetitions = 9;
  const auto add = [](const std::string& name, auto body) {
    benchmark::RegisterBenchmark(name.c_str(), body)->Repetitions(kRepetitions)->Unit(benchmark::kMillisecond);
  };
  for (const detail::OverlayerKernelSet& kernel : detail::overlayer_kernels()) {
    const std::string set = kernel.instruction_set;
    const auto solve = kernel.solve;
    const auto exp_log_of_set = exp_logs.at(set);
    add(set + " exp + log", [=](benchmark::State& s) { exp_log(s, exp_log_of_set); });
    add(set + " one length ratio", [=](benchmark::State& s) { overlayer(s, solve, Lengths::one_ratio); });
    add(set + " a length ratio per element", [=](benchmark::State& s) { overlayer(s, solve, Lengths::ratio_per_element); });
    add(set + " equal lengths", [=](benchmark::State& s) { overlayer(s, solve, Lengths::equal); });
  }
  benchmark::SetDefaultTimeUnit(benchmark::kMillisecond);
  KeepTimes reporter;
  benchmark::RunSpecifiedBenchmarks(&reporter);
  std::printf("\nTime over that of one exp and one log of as many numbers, one thread (goal: at most 6)\n");
  for (const detail::OverlayerKernelSet& kernel : detail::overlayer_kernels()) {
    const std::string set = kernel.instruction_set;
    const auto base = reporter.shortest.find(set + " exp + log");
    for (const char* kind : {" one length ratio", " a length ratio per element", " equal lengths"}) {
      const auto own = reporter.shortest.find(set + kind);
      if (base == reporter.shortest.end() || own == reporter.shortest.end()) continue;
      std::printf("%-6s%-30s %5.2f\n", set.c_str(), kind, own->second / base->second);
    }
  }
  return 0;
}

}  // namespace pellicle::bench

int main(int argc, char** argv) {
  benchmark::Initialize(&argc, argv);
  if (benchmark::ReportUnrecognizedArguments(argc, argv)) return 2;
  return pellicle::bench::run();
}
#endif  // HWY_ONCE
