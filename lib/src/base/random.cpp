#include "pellicle/base/random.hpp"

#include <array>

#include <boost/random/mersenne_twister.hpp>
#include <boost/random/normal_distribution.hpp>
#include <boost/random/seed_seq.hpp>

namespace pellicle {

struct RandomStream::State {
  boost::random::mt19937_64 engine;
  boost::random::normal_distribution<double> normal;
};

RandomStream::RandomStream(std::uint64_t seed, std::uint64_t stream, std::uint64_t block) : state_(std::make_unique<State>()) {
  std::array<std::uint32_t, 6> words{};
  std::size_t i = 0;
  for (const std::uint64_t key : {seed, stream, block}) {
    words[i++] = static_cast<std::uint32_t>(key);
    words[i++] = static_cast<std::uint32_t>(key >> 32);
  }
  boost::random::seed_seq sequence(words.begin(), words.end());
  state_->engine.seed(sequence);
}

RandomStream::~RandomStream() = default;

void RandomStream::fill_normal(std::span<double> values) {
  for (double& v : values) v = state_->normal(state_->engine);
}

}  // namespace pellicle
