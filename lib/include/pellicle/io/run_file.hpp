#pragma once
/// Run files (TOML). README describes every key.

#include <string>
#include <string_view>
#include <vector>

#include "pellicle/job/run.hpp"

namespace pellicle {

/// Reads a run from a file and the area table it names (a path beside the run file).
/// @param tables area tables that take the place of the one the file names; empty: none do
/// @throws InputError with file, line, key, what was wrong and what was expected
[[nodiscard]] Run read_run_file(const std::string& path, const std::vector<std::string>& tables = {});

/// Reads a run from text. @param place file name, for messages and to find the area table beside it
/// @throws as read_run_file()
[[nodiscard]] Run parse_run(std::string_view toml, const std::string& place, const std::vector<std::string>& tables = {});

}  // namespace pellicle
