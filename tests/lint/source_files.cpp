#include "lint/source_files.hpp"

#include <algorithm>
#include <filesystem>
#include <regex>
#include <sstream>

#include "support/check_rows.hpp"

namespace pellicle::test {
namespace {

namespace fs = std::filesystem;

/// What a build, a tool or an editor leaves behind.
bool left_behind(const std::string& name) {
  static const std::set<std::string> names = {".git",  "build",         "dist",   "__pycache__",
                                              ".venv", ".pytest_cache", ".cache", "_skbuild"};
  return names.contains(name) || name.starts_with("build-") || name.ends_with(".egg-info");
}

/// A folder in which CMake or a virtual environment builds, whatever its name.
bool is_build_folder(const fs::path& folder) {
  return fs::exists(folder / "CMakeCache.txt") || fs::exists(folder / "pyvenv.cfg");
}

bool is_text(const std::string& text) { return text.find('\0') == std::string::npos; }

}  // namespace

std::vector<std::string> SourceFile::lines() const {
  std::istringstream in(text);
  std::vector<std::string> all;
  for (std::string line; std::getline(in, line);) all.push_back(line);
  return all;
}

bool SourceFile::is_cpp() const { return path.ends_with(".hpp") || path.ends_with(".cpp"); }

std::vector<SourceFile> source_files(const std::vector<std::string>& folders) {
  const fs::path top = source_folder();
  std::vector<SourceFile> files;
  const auto add = [&](const fs::path& path) {
    std::string text = read_whole_file(path.string());
    if (is_text(text)) files.push_back({fs::relative(path, top).generic_string(), std::move(text)});
  };
  for (const std::string& folder : folders) {
    const fs::path start = top / folder;
    if (fs::is_regular_file(start)) add(start);
    if (!fs::is_directory(start)) continue;
    for (auto entry = fs::recursive_directory_iterator(start); entry != fs::recursive_directory_iterator(); ++entry) {
      if (left_behind(entry->path().filename().string()) || is_build_folder(entry->path())) {
        entry.disable_recursion_pending();
      } else if (entry->is_regular_file()) {
        add(entry->path());
      }
    }
  }
  std::sort(files.begin(), files.end(), [](const SourceFile& a, const SourceFile& b) { return a.path < b.path; });
  return files;
}

std::vector<std::string> top_entries() {
  std::vector<std::string> names;
  for (const auto& entry : fs::directory_iterator(source_folder())) {
    const std::string name = entry.path().filename().string();
    if (!left_behind(name) && !is_build_folder(entry.path())) names.push_back(name);
  }
  return names;
}

std::vector<std::string> bibliography_keys() {
  const std::string text = read_whole_file(source_folder() + "/reference/sources.bib");
  std::vector<std::string> keys;
  static const std::regex entry("(?:^|\n)@[a-z]+\\{([^,\\s]+),");
  for (auto it = std::sregex_iterator(text.begin(), text.end(), entry); it != std::sregex_iterator(); ++it)
    keys.push_back((*it)[1]);
  return keys;
}

}  // namespace pellicle::test
