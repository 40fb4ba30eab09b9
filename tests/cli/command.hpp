#pragma once
/// Runs the pellicle command as a script would and keeps exit code, standard output and standard error apart.

#include <string>
#include <vector>

namespace pellicle::test {

struct CommandResult {
  int code = -1;    ///< exit code; 128 + signal when it was killed
  std::string out;  ///< standard output
  std::string err;  ///< standard error
};

/// Runs `pellicle arguments…` in `folder` with `input` on standard input. Standard output goes to `output` instead of
/// the result when one is named; it is opened as a shell would and never replaced.
[[nodiscard]] CommandResult pellicle_command(const std::vector<std::string>& arguments, const std::string& folder = ".",
                                             const std::string& input = "", const std::string& output = "");

/// Lines of a text; a last line without its line break counts.
[[nodiscard]] std::vector<std::string> text_lines(const std::string& text);

}  // namespace pellicle::test
