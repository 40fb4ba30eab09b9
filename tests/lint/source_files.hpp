#pragma once
/// The files of the source tree as text, for checks that read them.

#include <map>
#include <set>
#include <string>
#include <vector>

namespace pellicle::test {

struct SourceFile {
  std::string path;  ///< from the top folder: "lib/src/base/csv.cpp"
  std::string text;

  [[nodiscard]] std::vector<std::string> lines() const;
  [[nodiscard]] bool is_cpp() const;
};

/// All files under one of the folders (or that file itself), sorted by path; none when it does not exist. Build
/// folders, caches and what git keeps for itself are left out.
[[nodiscard]] std::vector<SourceFile> source_files(const std::vector<std::string>& folders);

/// Names of folders and files of the top folder that belong to the sources.
[[nodiscard]] std::vector<std::string> top_entries();

/// Keys of reference/sources.bib in the order of the file.
[[nodiscard]] std::vector<std::string> bibliography_keys();

}  // namespace pellicle::test
