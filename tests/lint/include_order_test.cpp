// What may include what. The parts of the library form a chain; nothing points back.

#include <map>
#include <optional>
#include <regex>
#include <string>

#include "lint/source_files.hpp"
#include "support/close_to.hpp"

using pellicle::test::contains;
using pellicle::test::source_files;
using pellicle::test::SourceFile;

namespace {

/// Place of a part in the chain; what reads and what writes results share the last one.
const std::map<std::string, int> kRank = {{"base", 0},   {"uncertainty", 1}, {"matter", 2}, {"lines", 3},
                                          {"sample", 4}, {"transport", 5},   {"signal", 6}, {"estimate", 7},
                                          {"plan", 8},   {"job", 9},         {"io", 10},    {"report", 10}};

/// Part of a file of the library, or nothing for a file outside all parts.
std::optional<std::string> part_of_file(const std::string& path) {
  static const std::regex pattern("lib/(?:include/pellicle|src)/([a-z_]+)/.+");
  std::smatch match;
  if (std::regex_match(path, match, pattern)) return match[1];
  return std::nullopt;
}

struct Include {
  std::size_t line;
  std::string target;
  bool quoted;
};

std::vector<Include> includes_of(const SourceFile& file) {
  static const std::regex pattern("\\s*#\\s*include\\s*([\"<])([^\">]+)[\">].*");
  std::vector<Include> all;
  std::size_t number = 0;
  for (const std::string& line : file.lines()) {
    ++number;
    std::smatch match;
    if (std::regex_match(line, match, pattern)) all.push_back({number, match[2], match[1] == "\""});
  }
  return all;
}

/// Part an include of ours points to, "pellicle/matter/element.hpp" or "base/csv.hpp".
std::optional<std::string> part_of_include(const std::string& target) {
  static const std::regex pattern("(?:pellicle/)?([a-z_]+)/[a-z0-9_]+\\.hpp");
  std::smatch match;
  if (std::regex_match(target, match, pattern) && kRank.contains(match[1])) return match[1];
  return std::nullopt;
}

}  // namespace

TEST_SUITE("includes") {

TEST_CASE("every file of the library belongs to a part of the chain") {
  std::size_t seen = 0;
  for (const SourceFile& file : source_files({"lib/include", "lib/src"})) {
    if (file.path == "lib/include/pellicle/pellicle.hpp") continue;
    ++seen;
    const auto part = part_of_file(file.path);
    REQUIRE_MESSAGE(part.has_value(), file.path);
    CHECK_MESSAGE(kRank.contains(*part), file.path);
  }
  CHECK(seen > 50);
}

TEST_CASE("a part includes only itself and parts before it") {
  std::size_t seen = 0;
  for (const SourceFile& file : source_files({"lib/include", "lib/src"})) {
    const auto part = part_of_file(file.path);
    if (!part || !kRank.contains(*part)) continue;
    for (const Include& include : includes_of(file)) {
      const auto target = part_of_include(include.target);
      if (!target) continue;
      ++seen;
      CHECK_MESSAGE(kRank.at(*target) <= kRank.at(*part),
                    file.path << ":" << include.line << ": " << *part << " includes " << include.target);
    }
  }
  CHECK(seen > 100);
}

TEST_CASE("quoted includes of the library are its own headers") {
  for (const SourceFile& file : source_files({"lib/include", "lib/src"})) {
    for (const Include& include : includes_of(file)) {
      if (!include.quoted) continue;
      CHECK_MESSAGE(part_of_include(include.target).has_value(),
                    file.path << ":" << include.line << ": " << include.target);
    }
  }
}

TEST_CASE("public headers need the standard library alone") {
  static const std::regex standard("[a-z_0-9]+");
  for (const SourceFile& file : source_files({"lib/include"})) {
    for (const Include& include : includes_of(file)) {
      const bool fine =
          include.quoted ? include.target.starts_with("pellicle/") : std::regex_match(include.target, standard);
      CHECK_MESSAGE(fine, file.path << ":" << include.line << ": " << include.target);
    }
  }
}

TEST_CASE("command line and bindings use public headers alone") {
  for (const SourceFile& file : source_files({"cli", "bindings"})) {
    if (!file.is_cpp()) continue;
    for (const Include& include : includes_of(file)) {
      const bool private_header = part_of_include(include.target) && !include.target.starts_with("pellicle/");
      CHECK_MESSAGE(!private_header, file.path << ":" << include.line << ": " << include.target);
    }
  }
}

TEST_CASE("the header of all headers includes every one of them") {
  const auto whole = source_files({"lib/include/pellicle/pellicle.hpp"});
  REQUIRE(whole.size() == 1);
  for (const SourceFile& file : source_files({"lib/include"})) {
    if (file.path == whole[0].path) continue;
    CHECK_MESSAGE(contains(whole[0].text, "\"" + file.path.substr(std::string("lib/include/").size()) + "\""),
                  file.path);
  }
}

TEST_CASE("every header guards itself") {
  for (const SourceFile& file : source_files({"lib", "cli", "bindings", "tests"})) {
    if (file.path.ends_with(".hpp")) CHECK_MESSAGE(file.text.starts_with("#pragma once\n"), file.path);
  }
}

}  // TEST_SUITE("includes")
