#pragma once
/// Reading and writing whole files.

#include <string>
#include <string_view>

namespace pellicle {

/// The text of a file, or of standard input for "-". A UTF-8 byte-order mark is dropped.
/// @throws InputError when it cannot be read or is not UTF-8 text (it names the line)
[[nodiscard]] std::string read_text_file(const std::string& path);

/// Writes a file whole or not at all: the text goes to a neighbour first, which then takes the name.
/// @throws InputError when that fails; an older file of this name is then still as it was
void write_text_file(const std::string& path, std::string_view text);

/// `path` as seen from the folder of `base`, unless it is absolute.
[[nodiscard]] std::string path_beside(const std::string& base, const std::string& path);

}  // namespace pellicle
