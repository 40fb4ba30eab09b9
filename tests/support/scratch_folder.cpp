#include "support/scratch_folder.hpp"

#include <cstdlib>
#include <filesystem>
#include <fstream>
#include <iterator>
#include <stdexcept>

namespace pellicle::test {

namespace fs = std::filesystem;

ScratchFolder::ScratchFolder() : path_((fs::temp_directory_path() / "pellicle-test-XXXXXX").string()) {
  if (mkdtemp(path_.data()) == nullptr) throw std::runtime_error("no scratch folder could be made");
}

ScratchFolder::~ScratchFolder() {
  std::error_code ignored;
  fs::remove_all(path_, ignored);
}

std::string ScratchFolder::file(std::string_view name) const { return (fs::path(path_) / name).string(); }

std::string ScratchFolder::write(std::string_view name, std::string_view text) const {
  const std::string target = file(name);
  std::ofstream out(target, std::ios::binary);
  out << text;
  if (!out.flush()) throw std::runtime_error("cannot write " + target);
  return target;
}

std::size_t ScratchFolder::entries() const {
  return static_cast<std::size_t>(std::distance(fs::directory_iterator(path_), fs::directory_iterator()));
}

}  // namespace pellicle::test
