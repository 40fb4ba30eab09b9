#pragma once
/// The one parallel loop of the library.

#include <cstddef>
#include <functional>

namespace pellicle {

/// Elements per block of every array kernel. Results never depend on it: an element is computed
/// from its own inputs alone, and random streams belong to the block, not to the thread.
inline constexpr std::size_t kBlockSize = 4096;

/// Threads used by array functions: the PELLICLE_THREADS environment variable, else all processors.
[[nodiscard]] unsigned thread_count() noexcept;

/// Calls `body(begin, end)` for consecutive blocks that cover [0, size), on up to `threads` threads
/// (0: thread_count()). The first exception of a body is thrown again after all threads have ended.
void for_each_block(std::size_t size, const std::function<void(std::size_t begin, std::size_t end)>& body,
                    unsigned threads = 0);

}  // namespace pellicle
