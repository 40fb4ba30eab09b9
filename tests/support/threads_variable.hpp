#pragma once

#include <cstdlib>
#include <optional>
#include <string>

namespace pellicle::test {

/// PELLICLE_THREADS set for one scope, then as it was.
class ThreadsVariable {
 public:
  explicit ThreadsVariable(const std::string& value) {
    if (const char* old = std::getenv("PELLICLE_THREADS")) old_ = old;
    setenv("PELLICLE_THREADS", value.c_str(), 1);
  }
  ~ThreadsVariable() {
    if (old_) {
      setenv("PELLICLE_THREADS", old_->c_str(), 1);
    } else {
      unsetenv("PELLICLE_THREADS");
    }
  }
  ThreadsVariable(const ThreadsVariable&) = delete;
  ThreadsVariable& operator=(const ThreadsVariable&) = delete;

 private:
  std::optional<std::string> old_;
};

}  // namespace pellicle::test
