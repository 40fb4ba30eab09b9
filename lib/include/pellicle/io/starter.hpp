#pragma once
/// The commented run file and area table that `pellicle new` writes.

#include <string>
#include <string_view>

namespace pellicle {

/// Commented run file that names `table` as its area table. Its numbers are invented and say so.
[[nodiscard]] std::string starter_run(std::string_view table);

/// The area table that goes with it.
[[nodiscard]] std::string starter_areas();

}  // namespace pellicle
