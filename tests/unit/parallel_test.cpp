#include "pellicle/base/parallel.hpp"

#include <algorithm>
#include <atomic>
#include <stdexcept>
#include <string>
#include <thread>
#include <vector>

#include "support/close_to.hpp"
#include "support/threads_variable.hpp"

using namespace pellicle;

using test::ThreadsVariable;

TEST_SUITE("parallel loop") {

TEST_CASE("blocks cover every element exactly once for any thread count") {
  for (const std::size_t size :
       {std::size_t{0}, std::size_t{1}, kBlockSize - 1, kBlockSize, kBlockSize + 1, 10 * kBlockSize + 17}) {
    for (const unsigned threads : {0U, 1U, 2U, 7U, 64U}) {
      CAPTURE(size);
      CAPTURE(threads);
      std::vector<std::atomic<int>> visits(size);
      for_each_block(
          size,
          [&](std::size_t begin, std::size_t end) {
            for (std::size_t i = begin; i < end; ++i) ++visits[i];
          },
          threads);
      bool once = true;
      for (const auto& v : visits) once = once && v == 1;
      CHECK(once);
    }
  }
}

TEST_CASE("blocks begin at multiples of the block size so that results cannot depend on threads") {
  for_each_block(
      3 * kBlockSize + 5,
      [&](std::size_t begin, std::size_t end) {
        if (begin % kBlockSize != 0 || end - begin > kBlockSize) throw std::logic_error("a block lies elsewhere");
      },
      3);
}

TEST_CASE("an exception of a body comes out of the loop") {
  for (const unsigned threads : {1U, 4U}) {
    CHECK_THROWS_WITH_AS(for_each_block(
                             20 * kBlockSize,
                             [](std::size_t begin, std::size_t) {
                               if (begin == 3 * kBlockSize) throw std::runtime_error("from a block");
                             },
                             threads),
                         "from a block", std::runtime_error);
  }
}

TEST_CASE("the environment sets the thread count and nonsense leaves the default") {
  const unsigned all = std::max(1U, std::thread::hardware_concurrency());
  {
    const ThreadsVariable v("3");
    CHECK(thread_count() == 3);
  }
  {
    const ThreadsVariable v("100000");
    CHECK(thread_count() == 1024);
  }
  for (const std::string nonsense : {"", "0", "-1", "two", "2x", "99999999999999"}) {
    CAPTURE(nonsense);
    const ThreadsVariable v(nonsense);
    CHECK(thread_count() == all);
  }
}

}  // TEST_SUITE("parallel loop")
