#pragma once
/// A folder of its own for a test that writes files; gone when the test ends.

#include <string>
#include <string_view>

namespace pellicle::test {

class ScratchFolder {
 public:
  ScratchFolder();
  ~ScratchFolder();
  ScratchFolder(const ScratchFolder&) = delete;
  ScratchFolder& operator=(const ScratchFolder&) = delete;

  [[nodiscard]] const std::string& path() const { return path_; }
  /// Path of a file in the folder.
  [[nodiscard]] std::string file(std::string_view name) const;
  /// Writes a file into the folder and gives its path.
  std::string write(std::string_view name, std::string_view text) const;
  /// Number of entries in the folder.
  [[nodiscard]] std::size_t entries() const;

 private:
  std::string path_;
};

}  // namespace pellicle::test
