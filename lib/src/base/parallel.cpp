#include "pellicle/base/parallel.hpp"

#include <algorithm>
#include <atomic>
#include <charconv>
#include <cstdlib>
#include <exception>
#include <mutex>
#include <string_view>
#include <thread>
#include <vector>

namespace pellicle {

unsigned thread_count() noexcept {
  if (const char* text = std::getenv("PELLICLE_THREADS")) {
    const std::string_view view(text);
    unsigned count = 0;
    const auto [stop, failure] = std::from_chars(view.data(), view.data() + view.size(), count);
    if (failure == std::errc{} && stop == view.data() + view.size() && count > 0) return std::min(count, 1024U);
  }
  return std::max(1U, std::thread::hardware_concurrency());
}

void for_each_block(std::size_t size, const std::function<void(std::size_t, std::size_t)>& body, unsigned threads) {
  const std::size_t blocks = (size + kBlockSize - 1) / kBlockSize;
  const std::size_t workers = std::min<std::size_t>(threads == 0 ? thread_count() : threads, blocks);
  std::atomic<std::size_t> next{0};
  std::exception_ptr failure;
  std::mutex failure_mutex;
  const auto work = [&] {
    for (std::size_t block = next++; block < blocks; block = next++) {
      try {
        body(block * kBlockSize, std::min(size, (block + 1) * kBlockSize));
      } catch (...) {
        const std::lock_guard lock(failure_mutex);
        if (!failure) failure = std::current_exception();
        next = blocks;
      }
    }
  };
  if (workers <= 1) {
    work();
  } else {
    std::vector<std::jthread> pool;
    for (std::size_t i = 1; i < workers; ++i) pool.emplace_back(work);
    work();
  }
  if (failure) std::rethrow_exception(failure);
}

}  // namespace pellicle
