#pragma once
/// Random numbers for simulations: the same on every processor, compiler and number of threads.
///
/// Bits: the counter-based generator Philox4x32-10, a bijection of a 128-bit counter under a 64-bit key
/// [salmon2011]. The key is the seed; the counter is (number within the stream, block). So streams of different
/// blocks share no counter and cannot overlap, any of them can be made without the others, and no state has
/// to be handed from one block to the next. It passes the statistical batteries named by its authors and
/// is one of the engines of C++26.
///
/// Normal numbers: pairs √(−2 ln u) (cos 2πv, sin 2πv) of independent uniform u, v [box1958]; u has 52 bits, so
/// |z| never exceeds √(104 ln 2) = 8.49 (probability beyond: 2e-17). ln, cos and sin are polynomials of ours,
/// relative error below 2e-13, made of additions, multiplications, divisions and square roots alone: these
/// are rounded in one way everywhere (IEEE 754), library functions are not.

#include <cstddef>
#include <cstdint>
#include <span>

namespace pellicle {

/// One stream of random numbers; all numbers of all streams of all seeds are independent for every practical
/// purpose. Numbers come in groups of kGroup: every call begins a new group, so that two calls for 10 numbers
/// give other numbers than one call for 20, on every machine alike.
class RandomStream {
 public:
  /// Numbers that are made together.
  static constexpr std::size_t kGroup = 64;

  /// @param seed any number; chosen by the user and printed with the result
  /// @param block any number; in a parallel loop the position of the block of elements
  RandomStream(std::uint64_t seed, std::uint64_t block) noexcept : seed_(seed), block_(block) {}

  /// Independent random bits. @cite salmon2011
  void fill_bits(std::span<std::uint64_t> bits) noexcept;

  /// Uniform numbers between 0 and 1: odd multiples of 2^-53, hence never 0 or 1.
  void fill_uniform(std::span<double> numbers) noexcept;

  /// Normal numbers of mean 0 and standard deviation 1. @cite box1958
  void fill_normal(std::span<double> numbers) noexcept;

 private:
  std::uint64_t seed_;
  std::uint64_t block_;
  std::uint64_t next_ = 0;  // counter of the next group's first number
};

}  // namespace pellicle
