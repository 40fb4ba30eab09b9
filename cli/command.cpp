#include "command.hpp"

#include <unistd.h>

#include <cstdio>
#include <filesystem>
#include <iostream>

#include "pellicle/base/error.hpp"
#include "pellicle/io/file.hpp"

namespace pellicle::cli {

void add_output_options(CLI::App& command, Output& output, bool with_csv, bool with_strict) {
  command.add_flag("--json", output.json, "print JSON, schema pellicle.result/1");
  if (with_csv) command.add_flag("--csv", output.csv, "print CSV")->excludes("--json");
  command.add_option("--out", output.out, "write the result to this file, whole or not at all")->type_name("FILE");
  if (with_strict) command.add_flag("--strict", output.strict, "exit with 1 when a row failed or a finding is an error");
  command.add_flag("--quiet", output.quiet, "no remarks on standard error");
}

void deliver(const Output& output, const std::string& text) {
  if (!output.out.empty() && output.out != "-") {
    write_text_file(output.out, text);
    remark(output, "wrote " + output.out);
    return;
  }
  if (std::fwrite(text.data(), 1, text.size(), stdout) != text.size() || std::fflush(stdout) != 0) {
    throw InputError("standard output", "the result could not be written");
  }
}

void check_targets(const std::vector<std::string>& inputs, const std::vector<std::pair<std::string, std::string>>& targets) {
  namespace fs = std::filesystem;
  const auto whole = [](const std::string& path) {
    std::error_code failure;
    const fs::path full = fs::weakly_canonical(path, failure);
    return failure ? fs::path(path) : full;
  };
  for (std::size_t i = 0; i < targets.size(); ++i) {
    const auto& [option, path] = targets[i];
    if (path.empty() || path == "-") continue;
    for (const std::string& input : inputs) {
      if (whole(path) == whole(input)) throw UsageError(option + " " + path + " would write over an input");
    }
    for (std::size_t k = 0; k < i; ++k) {
      if (whole(path) == whole(targets[k].second)) throw UsageError(option + " and " + targets[k].first + " name the same file, " + path);
    }
  }
}

void remark(const Output& output, const std::string& text) {
  if (!output.quiet) std::cerr << text << '\n';
}

ProgressLine::ProgressLine(const Output& output, std::string what)
    : what_(std::move(what)), enabled_(!output.quiet && ::isatty(STDERR_FILENO) == 1), last_(std::chrono::steady_clock::now()) {}

bool ProgressLine::operator()(std::size_t done, std::size_t all) {
  const auto now = std::chrono::steady_clock::now();
  if (!enabled_ || done == all || now - last_ < std::chrono::milliseconds(300)) return true;
  last_ = now;
  shown_ = true;
  std::cerr << '\r' << done << " of " << all << ' ' << what_ << std::flush;
  return true;
}

void ProgressLine::clear() {
  if (shown_) std::cerr << "\r\033[K" << std::flush;
  shown_ = false;
}

std::optional<Quantity> QuantityOption::quantity(const std::string& name) const {
  if (!value) {
    if (sd) throw InputError("--" + name + "-sd", "it is given without --" + name, "give both");
    return std::nullopt;
  }
  if (sd && !(*sd >= 0.0)) throw InputError("--" + name + "-sd", "the standard uncertainty is not a number >= 0");
  Quantity q = *value;
  q.standard_uncertainty = sd;
  return q;
}

void add_quantity(CLI::App& command, const std::string& name, QuantityOption& option, const std::string& about) {
  command.add_option("--" + name, option.value, about)->type_name("NUMBER");
  command.add_option("--" + name + "-sd", option.sd, "its standard uncertainty")->type_name("NUMBER");
}

}  // namespace pellicle::cli
