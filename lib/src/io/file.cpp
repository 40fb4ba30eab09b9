#include "pellicle/io/file.hpp"

#include <fcntl.h>
#include <sys/stat.h>
#include <unistd.h>

#include <cerrno>
#include <cstdio>
#include <cstring>
#include <filesystem>
#include <iostream>
#include <iterator>
#include <memory>

#include "pellicle/base/error.hpp"

namespace pellicle {
namespace {

namespace fs = std::filesystem;

/// Length of the well-formed UTF-8 sequence at `at`, or 0.
std::size_t utf8_length(std::string_view text, std::size_t at) {
  const auto byte = [&](std::size_t i) { return i < text.size() ? static_cast<unsigned char>(text[i]) : 0U; };
  const auto follows = [&](std::size_t i) { return (byte(at + i) & 0xC0U) == 0x80U; };
  const unsigned first = byte(at);
  if (first < 0x80) return 1;
  if (first >= 0xC2 && first <= 0xDF && follows(1)) return 2;
  if (first >= 0xE0 && first <= 0xEF && follows(1) && follows(2)) {
    const bool overlong = first == 0xE0 && byte(at + 1) < 0xA0;
    const bool surrogate = first == 0xED && byte(at + 1) > 0x9F;
    return overlong || surrogate ? 0 : 3;
  }
  if (first >= 0xF0 && first <= 0xF4 && follows(1) && follows(2) && follows(3)) {
    const bool overlong = first == 0xF0 && byte(at + 1) < 0x90;
    const bool beyond = first == 0xF4 && byte(at + 1) > 0x8F;
    return overlong || beyond ? 0 : 4;
  }
  return 0;
}

void check_text(const std::string& place, std::string_view text) {
  std::size_t line = 1;
  for (std::size_t at = 0; at < text.size();) {
    if (text[at] == '\n') ++line;
    const std::size_t size = text[at] == '\0' ? 0 : utf8_length(text, at);
    if (size == 0) {
      throw InputError(place + ":" + std::to_string(line), "the file is not UTF-8 text", "save it as UTF-8");
    }
    at += size;
  }
}

}  // namespace

std::string read_text_file(const std::string& path) {
  std::string text;
  if (path == "-") {
    text.assign(std::istreambuf_iterator<char>(std::cin), {});
  } else {
    std::error_code failure;
    if (fs::is_directory(path, failure)) throw InputError(path, "this is a folder", "expected a file");
    const std::unique_ptr<std::FILE, int (*)(std::FILE*)> file(std::fopen(path.c_str(), "rb"), &std::fclose);
    if (!file) throw InputError(path, std::string("cannot be read: ") + std::strerror(errno), "check the name and the permissions");
    char buffer[1 << 16];
    for (std::size_t n = 0; (n = std::fread(buffer, 1, sizeof buffer, file.get())) > 0;) text.append(buffer, n);
    if (std::ferror(file.get())) throw InputError(path, std::string("cannot be read: ") + std::strerror(errno));
  }
  const std::string place = path == "-" ? "standard input" : path;
  if (text.starts_with("\xEF\xBB\xBF")) text.erase(0, 3);
  check_text(place, text);
  return text;
}

void write_text_file(const std::string& path, std::string_view text) {
  std::error_code failure;
  const fs::path target = fs::is_symlink(path, failure) ? fs::canonical(path, failure) : fs::path(path);
  if (fs::is_directory(target, failure)) throw InputError(path, "this is a folder", "expected the name of a file");
  // Pipes and devices take no neighbour; they are written straight.
  const bool plain = !fs::exists(target, failure) || fs::is_regular_file(target, failure);
  std::string scratch = plain ? target.string() + ".XXXXXX" : target.string();
  const int descriptor = plain ? ::mkstemp(scratch.data()) : ::open(scratch.c_str(), O_WRONLY);
  if (descriptor < 0) throw InputError(path, std::string("cannot be written: ") + std::strerror(errno));
  bool done = true;
  for (std::size_t at = 0; done && at < text.size();) {
    const ssize_t n = ::write(descriptor, text.data() + at, text.size() - at);
    if (n < 0 && errno == EINTR) continue;
    done = n > 0;
    if (done) at += static_cast<std::size_t>(n);
  }
  int reason = errno;
  if (plain && done) {
    // mkstemp makes files private; a result deserves the permissions of any new file.
    const mode_t mask = ::umask(0);
    ::umask(mask);
    done = ::fchmod(descriptor, 0666 & ~mask) == 0;
    reason = errno;
  }
  if (::close(descriptor) != 0 && done) {
    done = false;
    reason = errno;
  }
  if (plain && done) {
    done = std::rename(scratch.c_str(), target.c_str()) == 0;
    reason = errno;
  }
  if (done) return;
  if (plain) ::unlink(scratch.c_str());
  throw InputError(path, std::string("cannot be written: ") + std::strerror(reason));
}

std::string path_beside(const std::string& base, const std::string& path) {
  if (path == "-" || base == "-" || fs::path(path).is_absolute()) return path;
  return (fs::path(base).parent_path() / path).string();
}

}  // namespace pellicle
