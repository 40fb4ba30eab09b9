// The bibliography: every key that is used is in it.

#include <algorithm>
#include <map>
#include <regex>
#include <set>
#include <string>

#include "base/csv.hpp"
#include "lint/source_files.hpp"
#include "support/check_rows.hpp"
#include "support/close_to.hpp"

using pellicle::test::bibliography_keys;
using pellicle::test::source_files;
using pellicle::test::SourceFile;
using pellicle::test::split;

namespace {

std::set<std::string> known_keys() {
  const auto keys = bibliography_keys();
  return {keys.begin(), keys.end()};
}

/// A use of a key and where.
struct Use {
  std::string key, place;
};

/// Keys after @cite, "@cite hill1976 jcgm100 (eq. 3)", and in brackets, "[hill1976]".
std::vector<Use> uses_in_comments(const SourceFile& file) {
  static const std::regex cite("@cite((?: +[a-z][a-z0-9-]*)+)");
  static const std::regex bracket("\\[([a-z][a-z-]*[0-9]{3,5}[a-z]*)\\]");
  std::vector<Use> uses;
  std::size_t number = 0;
  for (const std::string& line : file.lines()) {
    const std::string place = file.path + ":" + std::to_string(++number);
    for (auto it = std::sregex_iterator(line.begin(), line.end(), cite); it != std::sregex_iterator(); ++it) {
      const std::string keys = (*it)[1];
      for (const std::string& key : split(keys, ' ')) {
        if (!key.empty()) uses.push_back({key, place});
      }
    }
    for (auto it = std::sregex_iterator(line.begin(), line.end(), bracket); it != std::sregex_iterator(); ++it)
      uses.push_back({(*it)[1], place});
  }
  return uses;
}

/// A column that holds keys: "source", "density_source"; not "photon_source", which holds X-ray lines.
bool holds_keys(const std::string& column) {
  return column == "source" || (column.ends_with("_source") && column != "photon_source");
}

/// Calls `visit(row place, column, cell)` for every cell of every table of a folder.
template <typename Visit>
void for_each_cell(const std::string& folder, Visit&& visit) {
  for (const SourceFile& file : source_files({folder})) {
    if (!file.path.ends_with(".csv")) continue;
    std::vector<std::string> header;
    pellicle::detail::read_csv(file.text, file.path, [&](const pellicle::detail::CsvRow& row) {
      if (header.empty()) {
        header.assign(row.fields.begin(), row.fields.end());
        return;
      }
      REQUIRE_MESSAGE(row.fields.size() == header.size(), file.path << ":" << row.line);
      for (std::size_t i = 0; i < header.size(); ++i)
        visit(file.path + ":" + std::to_string(row.line), header, row.fields, i);
    });
  }
}

}  // namespace

TEST_SUITE("sources") {

TEST_CASE("the bibliography names each publication once and with a title") {
  const auto keys = bibliography_keys();
  CHECK(keys.size() > 20);
  CHECK(known_keys().size() == keys.size());
  const std::string text = pellicle::test::read_whole_file(pellicle::test::source_folder() + "/reference/sources.bib");
  CHECK(static_cast<std::size_t>(std::count(text.begin(), text.end(), '@')) == keys.size());
  static const std::regex entry("@[a-z]+\\{([^,]+),([^@]*)");
  for (auto it = std::sregex_iterator(text.begin(), text.end(), entry); it != std::sregex_iterator(); ++it) {
    const std::string body = (*it)[2];
    CHECK_MESSAGE(std::regex_search(body, std::regex("\\btitle\\s*=")), (*it)[1].str());
    CHECK_MESSAGE(std::count(body.begin(), body.end(), '{') + 1 == std::count(body.begin(), body.end(), '}'),
                  (*it)[1].str());
  }
}

TEST_CASE("every key in a comment is in the bibliography") {
  const auto known = known_keys();
  std::size_t uses = 0;
  for (const SourceFile& file : source_files({"lib", "cli", "bindings", "tests"})) {
    if (!file.is_cpp() || file.path.starts_with("tests/lint/")) continue;
    for (const Use& use : uses_in_comments(file)) {
      ++uses;
      CHECK_MESSAGE(known.contains(use.key), use.place << ": " << use.key);
    }
  }
  CHECK(uses > 60);
}

TEST_CASE("every row of every table names sources of the bibliography") {
  const auto known = known_keys();
  for (const std::string folder : {"reference/data", "reference/published"}) {
    std::size_t cells = 0;
    for_each_cell(folder, [&](const std::string& place, const std::vector<std::string>& header,
                              std::span<const std::string> row, std::size_t column) {
      if (!holds_keys(header[column])) return;
      ++cells;
      // A material without a band gap has no source of one.
      if (header[column] == "gap_source" && row[column].empty()) {
        const auto gap =
            static_cast<std::size_t>(std::find(header.begin(), header.end(), "band_gap_ev") - header.begin());
        CHECK_MESSAGE(row[gap].empty(), place);
        return;
      }
      for (const std::string& key : split(row[column], ';'))
        CHECK_MESSAGE(known.contains(key), place << ": \"" << key << "\"");
    });
    CHECK(cells > 500);
  }
}

TEST_CASE("every table has a column of sources") {
  for (const std::string folder : {"reference/data", "reference/published"}) {
    for (const SourceFile& file : source_files({folder})) {
      if (!file.path.ends_with(".csv")) continue;
      const auto columns = split(file.lines().at(0), ',');
      CHECK_MESSAGE(std::any_of(columns.begin(), columns.end(), holds_keys), file.path);
    }
  }
}

TEST_CASE("the check tables have the columns that are agreed on") {
  for (const SourceFile& file : source_files({"reference/published"})) {
    if (file.path.ends_with(".csv"))
      CHECK_MESSAGE(file.lines().at(0) == "id,quantity,inputs,expected,tolerance,tolerance_kind,source,mark,note",
                    file.path);
  }
}

}  // TEST_SUITE("sources")
