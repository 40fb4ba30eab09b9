#pragma once
/// Portable seeded random numbers: the same seed gives the same numbers on every platform and thread count.

#include <cstdint>
#include <memory>
#include <span>

namespace pellicle {

/// Independent stream of one (seed, stream, block). Generator: Mersenne Twister 19937-64 with normal numbers by the
/// ziggurat of Boost.Random; the key is spread over the seed words by a seed sequence.
class RandomStream {
 public:
  RandomStream(std::uint64_t seed, std::uint64_t stream, std::uint64_t block);
  ~RandomStream();
  RandomStream(const RandomStream&) = delete;
  RandomStream& operator=(const RandomStream&) = delete;

  /// Standard normal numbers.
  void fill_normal(std::span<double> values);

 private:
  struct State;
  std::unique_ptr<State> state_;
};

}  // namespace pellicle
