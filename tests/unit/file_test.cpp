#include "pellicle/io/file.hpp"

#include <fcntl.h>
#include <sys/resource.h>
#include <sys/socket.h>
#include <sys/stat.h>
#include <sys/un.h>
#include <unistd.h>

#include <csignal>
#include <filesystem>
#include <string>

#include "pellicle/base/error.hpp"
#include "support/check_rows.hpp"
#include "support/close_to.hpp"
#include "support/scratch_folder.hpp"

using namespace pellicle;
using test::contains;
using test::error_of;
using test::read_whole_file;
using test::ScratchFolder;

namespace {

namespace fs = std::filesystem;

/// Lets files grow to `bytes` only, as a full disk would, for one scope.
class FullDisk {
 public:
  explicit FullDisk(rlim_t bytes) : old_handler_(std::signal(SIGXFSZ, SIG_IGN)) {
    getrlimit(RLIMIT_FSIZE, &old_);
    rlimit small = old_;
    small.rlim_cur = bytes;
    setrlimit(RLIMIT_FSIZE, &small);
  }
  ~FullDisk() {
    setrlimit(RLIMIT_FSIZE, &old_);
    std::signal(SIGXFSZ, old_handler_);
  }
  FullDisk(const FullDisk&) = delete;
  FullDisk& operator=(const FullDisk&) = delete;

 private:
  rlimit old_{};
  void (*old_handler_)(int);
};

}  // namespace

TEST_SUITE("files") {

TEST_CASE("a file is written whole and read back") {
  const ScratchFolder folder;
  const std::string path = folder.file("result.json");
  const std::string text(200000, 'x');
  write_text_file(path, text);
  CHECK(read_text_file(path) == text);
  write_text_file(path, "second\n");
  CHECK(read_text_file(path) == "second\n");
  write_text_file(path, "");
  CHECK(read_text_file(path).empty());
  CHECK(folder.entries() == 1);  // no scratch file stays behind
}

TEST_CASE("a new file has the permissions of any new file") {
  const ScratchFolder folder;
  const mode_t mask = ::umask(022);
  write_text_file(folder.file("a"), "a");
  ::umask(mask);
  struct stat status {};
  REQUIRE(::stat(folder.file("a").c_str(), &status) == 0);
  CHECK((status.st_mode & 0777U) == 0644U);
}

TEST_CASE("a file that cannot be written whole is not written at all") {
  const ScratchFolder folder;
  const std::string path = folder.write("result.json", "the older result");
  {
    const FullDisk disk(1000);
    CHECK(contains(error_of<InputError>([&] { write_text_file(path, std::string(5000, 'x')); }).fact(),
                   "cannot be written"));
    CHECK_THROWS_AS(write_text_file(folder.file("new.json"), std::string(5000, 'x')), InputError);
  }
  CHECK(read_whole_file(path) == "the older result");
  CHECK(folder.entries() == 1);
}

TEST_CASE("a folder that is not there or is no folder takes no file") {
  const ScratchFolder folder;
  folder.write("plain", "");
  for (const std::string& path : {folder.file("absent/result.json"), folder.file("plain/result.json")}) {
    const auto error = error_of<InputError>([&] { write_text_file(path, "x"); });
    CHECK(error.where() == path);
    CHECK(contains(error.fact(), "cannot be written"));
  }
  CHECK(contains(error_of<InputError>([&] { write_text_file(folder.path(), "x"); }).fact(), "this is a folder"));
}

TEST_CASE("a folder without permission takes no file and keeps the one it has") {
  if (::geteuid() == 0) return;  // permissions do not bind the superuser; the full disk above is for everyone
  const ScratchFolder folder;
  const std::string path = folder.write("result.json", "the older result");
  REQUIRE(::chmod(folder.path().c_str(), 0555) == 0);
  CHECK(contains(error_of<InputError>([&] { write_text_file(path, "x"); }).fact(), "cannot be written"));
  REQUIRE(::chmod(folder.path().c_str(), 0755) == 0);
  CHECK(read_whole_file(path) == "the older result");
}

// Pipes and sockets of the test's own stand for devices: a fault in the code must not be able to replace a device of
// the machine on which the tests run.

TEST_CASE("a pipe is written straight and stays a pipe") {
  const ScratchFolder folder;
  const std::string path = folder.file("pipe");
  REQUIRE(::mkfifo(path.c_str(), 0600) == 0);
  const int reader = ::open(path.c_str(), O_RDONLY | O_NONBLOCK);
  REQUIRE(reader >= 0);
  write_text_file(path, "a result\n");
  char buffer[64] = {};
  const ssize_t size = ::read(reader, buffer, sizeof buffer);
  ::close(reader);
  REQUIRE(size > 0);
  CHECK(std::string(buffer, static_cast<std::size_t>(size)) == "a result\n");
  CHECK(fs::is_fifo(path));
  CHECK(folder.entries() == 1);
}

TEST_CASE("what refuses to be opened for writing is reported and left as it is") {
  const ScratchFolder folder;
  const std::string path = folder.file("socket");
  sockaddr_un address{};
  address.sun_family = AF_UNIX;
  REQUIRE(path.size() < sizeof address.sun_path);
  path.copy(address.sun_path, path.size());
  const int listener = ::socket(AF_UNIX, SOCK_STREAM, 0);
  REQUIRE(::bind(listener, reinterpret_cast<const sockaddr*>(&address), sizeof address) == 0);
  CHECK(contains(error_of<InputError>([&] { write_text_file(path, "x"); }).fact(), "cannot be written"));
  CHECK(fs::is_socket(path));
  CHECK(folder.entries() == 1);
  ::close(listener);
}

TEST_CASE("a link stays a link and its target takes the text") {
  const ScratchFolder folder;
  folder.write("target", "old");
  fs::create_symlink("target", folder.file("link"));
  write_text_file(folder.file("link"), "new");
  CHECK(fs::is_symlink(folder.file("link")));
  CHECK(read_whole_file(folder.file("target")) == "new");
}

TEST_CASE("what is not UTF-8 text is refused with its line") {
  const ScratchFolder folder;
  struct Fault {
    std::string text;
    int line;
  };
  for (const Fault& fault :
       {Fault{"a\nb\xFF\n", 2}, Fault{"\xC3", 1}, Fault{"\xC0\xAF", 1}, Fault{"a\n\n\xED\xA0\x80", 3},
        Fault{"\xF4\x90\x80\x80", 1}, Fault{"\xE0\x80\xAF", 1}, Fault{"\x80", 1}, Fault{"\xF0\x80\x80\xAF", 1},
        Fault{std::string("a\0b", 3), 1}, Fault{"\xE2\x82", 1}, Fault{"\xF8\x88\x80\x80\x80", 1}}) {
    const std::string path = folder.write("t", fault.text);
    const auto error = error_of<InputError>([&] { (void)read_text_file(path); });
    CHECK(error.where() == path + ":" + std::to_string(fault.line));
    CHECK(contains(error.fact(), "UTF-8"));
  }
  const std::string fine = "Al\u2082O\u2083 \u00B0 \U0001F52C\n";
  CHECK(read_text_file(folder.write("t", fine)) == fine);
}

TEST_CASE("a byte-order mark is dropped") {
  const ScratchFolder folder;
  CHECK(read_text_file(folder.write("t", "\xEF\xBB\xBFspot,area\n")) == "spot,area\n");
  CHECK(read_text_file(folder.write("t", "\xEF\xBB\xBF")) == "");
}

TEST_CASE("what cannot be read is refused with its name") {
  const ScratchFolder folder;
  CHECK(contains(error_of<InputError>([&] { (void)read_text_file(folder.file("absent")); }).what(),
                 "absent: cannot be read"));
  CHECK(contains(error_of<InputError>([&] { (void)read_text_file(folder.path()); }).fact(), "this is a folder"));
}

TEST_CASE("a path is seen from the folder of its base") {
  CHECK(path_beside("runs/coupon.toml", "areas.csv") == "runs/areas.csv");
  CHECK(path_beside("coupon.toml", "areas.csv") == "areas.csv");
  CHECK(path_beside("runs/coupon.toml", "/data/areas.csv") == "/data/areas.csv");
  CHECK(path_beside("-", "areas.csv") == "areas.csv");
  CHECK(path_beside("runs/coupon.toml", "-") == "-");
}

}  // TEST_SUITE("files")
