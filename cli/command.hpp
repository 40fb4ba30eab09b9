#pragma once
/// What every command shares: the way results leave, and how a command joins the program.

#include <chrono>
#include <functional>
#include <optional>
#include <stdexcept>
#include <string>
#include <utility>
#include <vector>

#include <CLI/CLI.hpp>

#include "pellicle/uncertainty/quantity.hpp"

namespace pellicle::cli {

/// Exit codes of the program.
enum ExitCode { kDone = 0, kNoAnswer = 1, kUsage = 2, kInput = 3 };

/// The command line itself is wrong (exit code 2), in a way the option parser cannot see.
class UsageError : public std::runtime_error {
 public:
  using std::runtime_error::runtime_error;
};

/// Options common to the commands that give results.
struct Output {
  bool json = false;
  bool csv = false;
  std::string out;
  bool quiet = false;
  bool strict = false;
};

/// Adds --json, --out and --quiet, and --csv and --strict where they mean something.
void add_output_options(CLI::App& command, Output& output, bool with_csv = false, bool with_strict = false);

/// Sends a result to --out or to standard output.
void deliver(const Output& output, const std::string& text);

/// Refuses to write over what is read, or two results into one file.
/// @param targets option and path of everything that is written; "-" and empty paths are nobody's
/// @throws UsageError
void check_targets(const std::vector<std::string>& inputs, const std::vector<std::pair<std::string, std::string>>& targets);

/// Line on standard error, unless --quiet.
void remark(const Output& output, const std::string& text);

/// Counts on standard error while long work runs, on a terminal only and not under --quiet.
class ProgressLine {
 public:
  ProgressLine(const Output& output, std::string what);
  /// Shows the count at most a few times a second; always true.
  bool operator()(std::size_t done, std::size_t all);
  /// Removes the line.
  void clear();

 private:
  std::string what_;
  bool enabled_, shown_ = false;
  std::chrono::steady_clock::time_point last_;
};

/// A number with its standard uncertainty on the command line: --name and --name-sd.
struct QuantityOption {
  std::optional<double> value;
  std::optional<double> sd;
  /// @throws InputError when only the uncertainty is given or it is negative
  [[nodiscard]] std::optional<Quantity> quantity(const std::string& name) const;
};
void add_quantity(CLI::App& command, const std::string& name, QuantityOption& option, const std::string& about);

/// A command: its options are set up once, then run() gives the exit code.
using Run = std::function<int()>;
Run add_thickness(CLI::App& app);
Run add_lengths(CLI::App& app);
Run add_materials(CLI::App& app);
Run add_lines(CLI::App& app);
Run add_check(CLI::App& app);
Run add_new(CLI::App& app);

}  // namespace pellicle::cli
