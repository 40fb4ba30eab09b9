#pragma once

#include <string_view>

namespace pellicle {

/// Version of the library, "major.minor.patch"; stated once, in the top CMakeLists.txt.
[[nodiscard]] std::string_view version() noexcept;

}  // namespace pellicle
