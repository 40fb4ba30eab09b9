#include "cli/command.hpp"

#include <fcntl.h>
#include <sys/wait.h>
#include <unistd.h>

#include <sstream>
#include <stdexcept>

#include "support/check_rows.hpp"
#include "support/scratch_folder.hpp"

namespace pellicle::test {

CommandResult pellicle_command(const std::vector<std::string>& arguments, const std::string& folder,
                               const std::string& input, const std::string& output) {
  // Files instead of pipes: a command that fills one stream cannot stall on the other.
  const ScratchFolder scratch;
  const std::string in = scratch.write("in", input), out = scratch.write("out", ""), err = scratch.write("err", "");
  std::vector<std::string> words = {"pellicle"};
  words.insert(words.end(), arguments.begin(), arguments.end());
  std::vector<char*> argv;
  for (std::string& word : words) argv.push_back(word.data());
  argv.push_back(nullptr);

  const pid_t child = ::fork();
  if (child < 0) throw std::runtime_error("fork failed");
  if (child == 0) {
    const int fd_in = ::open(in.c_str(), O_RDONLY), fd_out = ::open((output.empty() ? out : output).c_str(), O_WRONLY),
              fd_err = ::open(err.c_str(), O_WRONLY);
    const bool ready =
        ::dup2(fd_in, 0) == 0 && ::dup2(fd_out, 1) == 1 && ::dup2(fd_err, 2) == 2 && ::chdir(folder.c_str()) == 0;
    if (ready) ::execv(PELLICLE_COMMAND, argv.data());
    ::_exit(126);
  }
  int status = 0;
  if (::waitpid(child, &status, 0) != child) throw std::runtime_error("waitpid failed");
  CommandResult result;
  result.code = WIFEXITED(status) ? WEXITSTATUS(status) : 128 + WTERMSIG(status);
  result.out = read_whole_file(out);
  result.err = read_whole_file(err);
  return result;
}

std::vector<std::string> text_lines(const std::string& text) {
  std::istringstream in(text);
  std::vector<std::string> lines;
  for (std::string line; std::getline(in, line);) lines.push_back(line);
  return lines;
}

}  // namespace pellicle::test
