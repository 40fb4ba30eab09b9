#include "picture.hpp"

#include <spawn.h>
#include <sys/ioctl.h>
#include <sys/wait.h>
#include <unistd.h>

#include <algorithm>
#include <cerrno>
#include <cstdio>
#include <cstring>
#include <memory>
#include <set>

#include "pellicle/base/error.hpp"
#include "pellicle/io/file.hpp"

extern char** environ;

namespace pellicle::cli {
namespace {

constexpr const char* kTerminal = "-";

/// A file without a name, gone when closed.
class ScratchFile {
 public:
  ScratchFile() : file_(std::tmpfile(), &std::fclose) {
    if (!file_) throw InputError("--plot", std::string("no temporary file can be made: ") + std::strerror(errno));
  }
  void write(const std::string& text) {
    if (std::fwrite(text.data(), 1, text.size(), file_.get()) != text.size() || std::fflush(file_.get()) != 0) {
      throw InputError("--plot", std::string("a temporary file cannot be written: ") + std::strerror(errno));
    }
    std::rewind(file_.get());
  }
  [[nodiscard]] std::string read() {
    std::rewind(file_.get());
    std::string text;
    char buffer[1 << 14];
    for (std::size_t n = 0; (n = std::fread(buffer, 1, sizeof buffer, file_.get())) > 0;) text.append(buffer, n);
    return text;
  }
  [[nodiscard]] int descriptor() const { return ::fileno(file_.get()); }

 private:
  std::unique_ptr<std::FILE, int (*)(std::FILE*)> file_;
};

std::string first_line(const std::string& text) {
  const std::size_t begin = text.find_first_not_of(" \t\r\n");
  if (begin == std::string::npos) return "it says nothing";
  return text.substr(begin, text.find('\n', begin) - begin);
}

/// What gnuplot makes of a script. Files instead of pipes: neither side can wait for the other.
std::string run_gnuplot(const std::string& script) {
  ScratchFile in, out, err;
  in.write(script);
  posix_spawn_file_actions_t actions;
  posix_spawn_file_actions_init(&actions);
  posix_spawn_file_actions_adddup2(&actions, in.descriptor(), STDIN_FILENO);
  posix_spawn_file_actions_adddup2(&actions, out.descriptor(), STDOUT_FILENO);
  posix_spawn_file_actions_adddup2(&actions, err.descriptor(), STDERR_FILENO);
  char name[] = "gnuplot", defaults[] = "--default-settings";  // a start-up file could draw anything
  char* const arguments[] = {name, defaults, nullptr};
  pid_t child = 0;
  const int failure = ::posix_spawnp(&child, name, &actions, nullptr, arguments, environ);
  posix_spawn_file_actions_destroy(&actions);
  if (failure == ENOENT)
    throw DomainError("--plot", "gnuplot, which draws the pictures, is not installed",
                      "on Debian: apt-get install gnuplot-nox");
  if (failure != 0) throw DomainError("--plot", std::string("gnuplot cannot be started: ") + std::strerror(failure));
  int status = 0;
  while (::waitpid(child, &status, 0) < 0 && errno == EINTR) {
  }
  const std::string picture = out.read();
  if (!WIFEXITED(status) || WEXITSTATUS(status) != 0 || picture.empty()) {
    throw DomainError("--plot", "gnuplot failed: " + first_line(err.read()));
  }
  return picture;
}

/// Without blanks at the ends of lines and without empty lines at both ends.
std::string trimmed(const std::string& picture) {
  std::string text, gap;
  for (std::size_t begin = 0; begin < picture.size();) {
    const std::size_t end = std::min(picture.find('\n', begin), picture.size());
    std::string line = picture.substr(begin, end - begin);
    line.erase(line.find_last_not_of(" \f\r") + 1);
    if (line.empty()) {
      if (!text.empty()) gap += '\n';
    } else {
      text += gap + line + "\n";
      gap.clear();
    }
    begin = end + 1;
  }
  return text;
}

std::string terminal_picture(const Figure& figure) {
  int columns = 79, rows = 26;
  winsize size{};
  if (::isatty(STDOUT_FILENO) == 1 && ::ioctl(STDOUT_FILENO, TIOCGWINSZ, &size) == 0 && size.ws_col > 0) {
    columns = std::min(size.ws_col - 1, 120);
    rows = std::clamp(size.ws_row - 2, 22, 36);
  }
  rows = std::max(rows, 12 + 2 * static_cast<int>(figure.y.names.size()));
  return trimmed(run_gnuplot(gnuplot_script(figure, PlotFormat::terminal, columns, rows)));
}

std::string shell_word(const std::string& word) {
  const auto plain = [](unsigned char c) { return std::isalnum(c) || std::strchr("_./:=,+-%@", c); };
  if (!word.empty() && std::all_of(word.begin(), word.end(), plain)) return word;
  std::string quoted = "'";
  for (const char c : word) quoted += c == '\'' ? std::string("'\\''") : std::string(1, c);
  return quoted + "'";
}

bool is_page(const std::string& path) { return path.ends_with(".html") || path.ends_with(".htm"); }

}  // namespace

void add_picture_options(CLI::App& command, PictureOptions& options) {
  command
      .add_option_function<std::string>(
          "--plot", [&options](const std::string& file) { options.plot = file.empty() ? kTerminal : file; },
          "draw the result by gnuplot: .svg, .png or .pdf; on the terminal without FILE")
      ->type_name("FILE")
      ->expected(0, 1)
      ->trigger_on_parse();
  command.add_option("--report", options.report, "write a report: one .html file that needs nothing else")
      ->type_name("FILE.html");
}

void check_picture_options(const PictureOptions& options, const Output& output) {
  // The extension also keeps a forgotten FILE from taking the run file for it.
  if (!options.report.empty() && !is_page(options.report)) {
    throw UsageError("--report " + options.report + ": a report is an .html file");
  }
  if (!options.plot) return;
  if (*options.plot != kTerminal) {
    if (!plot_format(*options.plot))
      throw UsageError("--plot " + *options.plot + ": pictures end in .svg, .png or .pdf; - draws on the terminal");
    return;
  }
  if (output.out.empty() && (output.json || output.csv)) {
    throw UsageError("--plot without a file would draw into the " + std::string(output.json ? "JSON" : "CSV") +
                     "; name a file, or give --out");
  }
}

void deliver_report(const PictureOptions& options, const Output& output, const std::string& html) {
  write_text_file(options.report, html);
  remark(output, "wrote " + options.report);
}

void deliver_plot(const PictureOptions& options, const Output& output, const Figure& figure) {
  if (!options.plot) return;
  if (*options.plot == kTerminal) {
    Output to_terminal = output;
    to_terminal.out.clear();
    deliver(to_terminal, "\n" + terminal_picture(figure));
    return;
  }
  write_text_file(*options.plot, run_gnuplot(gnuplot_script(figure, *plot_format(*options.plot))));
  remark(output, "wrote " + *options.plot);
}

std::string repeating_command(const CLI::App& command) {
  static const std::set<std::string> elsewhere = {"--json", "--csv",    "--out", "--quiet",
                                                  "--plot", "--report", "--help"};
  std::string positionals, options;
  for (const CLI::Option* option : command.get_options()) {
    if (option->count() == 0 || elsewhere.contains(option->get_name())) continue;
    std::string words;
    if (option->get_items_expected_max() > 0) {
      for (const std::string& value : option->results()) words += " " + shell_word(value);
    }
    if (option->get_positional()) {
      positionals += words;
    } else {
      options += " " + option->get_name() + words;
    }
  }
  return "pellicle " + command.get_name() + positionals + options;
}

}  // namespace pellicle::cli
