#pragma once
/// A few larger pieces of work side by side.

#include <cstddef>
#include <functional>

#include "pellicle/base/parallel.hpp"

namespace pellicle::detail {

/// Calls `body(0)` … `body(count − 1)` on up to `threads` threads (0: thread_count()); errors as for_each_block().
inline void for_each_task(std::size_t count, const std::function<void(std::size_t)>& body, unsigned threads) {
  for_each_block(count * kBlockSize, [&](std::size_t begin, std::size_t) { body(begin / kBlockSize); }, threads);
}

}  // namespace pellicle::detail
