#include "pellicle/base/error.hpp"

#include <utility>

namespace pellicle {
namespace {

std::string join(const std::string& where, const std::string& fact, const std::string& hint) {
  std::string line = where.empty() ? fact : where + ": " + fact;
  if (!hint.empty()) {
    if (line.ends_with('.')) line.pop_back();
    line += "; " + hint;
  }
  // A value quoted from a broken file may hold line breaks; the message stays one line.
  for (char& c : line) {
    if (static_cast<unsigned char>(c) < 0x20) c = ' ';
  }
  return line;
}

}  // namespace

Error::Error(std::string where, std::string fact, std::string hint)
    : std::runtime_error(join(where, fact, hint)),
      where_(std::move(where)), fact_(std::move(fact)), hint_(std::move(hint)) {}

}  // namespace pellicle
