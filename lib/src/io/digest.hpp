#pragma once

#include <string>
#include <string_view>

namespace pellicle::detail {

/// SHA-256 of a text, 64 hexadecimal digits (FIPS 180-4, by libmd).
[[nodiscard]] std::string sha256_hex(std::string_view text);

}  // namespace pellicle::detail
