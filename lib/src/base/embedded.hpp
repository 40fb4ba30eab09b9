#pragma once

#include <string_view>

namespace pellicle::detail {

/// Text of reference/data/<name>.csv as compiled in; empty for an unknown name.
[[nodiscard]] std::string_view embedded_table(std::string_view name);

}  // namespace pellicle::detail
