#pragma once
/// Options --plot and --report: results as pictures and as a report.

#include <CLI/CLI.hpp>
#include <optional>
#include <string>

#include "command.hpp"
#include "pellicle/report/figure.hpp"

namespace pellicle::cli {

struct PictureOptions {
  std::optional<std::string> plot;  ///< file; "-": the terminal
  std::string report;               ///< file; empty: none
};

void add_picture_options(CLI::App& command, PictureOptions& options);

/// To be called before any work is done.
/// @throws UsageError for a file that is neither picture nor page by its extension, and for a terminal picture that
///         would run into JSON or CSV on standard output
void check_picture_options(const PictureOptions& options, const Output& output);

/// Writes the report, if there is one to write. @throws InputError when it cannot be written
void deliver_report(const PictureOptions& options, const Output& output, const std::string& html);

/// Draws the figure by gnuplot, into its file or on the terminal.
/// @throws DomainError when gnuplot is missing or fails; InputError when the file cannot be written
void deliver_plot(const PictureOptions& options, const Output& output, const Figure& figure);

/// The command line that gives the same numbers again, quoted for a shell; options that only send results elsewhere
/// are left out.
[[nodiscard]] std::string repeating_command(const CLI::App& command);

}  // namespace pellicle::cli
