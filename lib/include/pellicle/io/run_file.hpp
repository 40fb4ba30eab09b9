#pragma once
/// Run files (TOML). README describes every key.

#include <string>
#include <string_view>

#include "pellicle/job/run.hpp"

namespace pellicle {

/// Reads a run from a file and the area table it names (a path beside the run file).
/// @throws InputError with file, line, key, what was wrong and what was expected
[[nodiscard]] Run read_run_file(const std::string& path);

/// Reads a run from text. @param place file name, for messages and to find the area table beside it
/// @throws as read_run_file()
[[nodiscard]] Run parse_run(std::string_view toml, const std::string& place);

}  // namespace pellicle
