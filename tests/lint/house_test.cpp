// House rules that a person forgets: no paths of one machine, tables that are whole, test names that ctest can carry.

#include <map>
#include <regex>
#include <set>
#include <string>

#include "base/csv.hpp"
#include "lint/source_files.hpp"
#include "support/check_rows.hpp"
#include "support/close_to.hpp"

using namespace pellicle::test;

TEST_SUITE("house rules") {

TEST_CASE("no file of the sources names a folder of one machine") {
  // Put together here, so that this file passes its own check.
  const std::vector<std::string> folders = {std::string("/ho") + "me/", std::string("/ro") + "ot/",
                                            std::string("/wo") + "rk/", std::string("/Us") + "ers/"};
  for (const SourceFile& file : source_files(top_entries())) {
    std::size_t number = 0;
    for (const std::string& line : file.lines()) {
      ++number;
      for (const std::string& folder : folders)
        CHECK_MESSAGE(!contains(line, folder), file.path << ":" << number << ": " << folder);
    }
  }
}

TEST_CASE("rows of every table are as wide as its header and none stands twice") {
  for (const SourceFile& file : source_files({"reference/data", "reference/published"})) {
    if (!file.path.ends_with(".csv")) continue;
    std::size_t width = 0;
    std::set<std::vector<std::string>> rows;
    pellicle::detail::read_csv(file.text, file.path, [&](const pellicle::detail::CsvRow& row) {
      if (width == 0) width = row.fields.size();
      CHECK_MESSAGE(row.fields.size() == width, file.path << ":" << row.line);
      CHECK_MESSAGE(rows.insert({row.fields.begin(), row.fields.end()}).second, file.path << ":" << row.line);
    });
    CHECK_MESSAGE(rows.size() > 1, file.path);
    CHECK_MESSAGE(file.text.find('\r') == std::string::npos, file.path);
    CHECK_MESSAGE(file.text.ends_with('\n'), file.path);
  }
}

TEST_CASE("numbers of the tables are written with a point and without a unit") {
  // Columns whose names end in a unit hold numbers alone.
  static const std::regex unit(".*_(ev|nm|deg|g_cm3|g_mol|barn|sd)$");
  static const std::regex number("-?[0-9]+(\\.[0-9]+)?([eE][-+]?[0-9]+)?");
  for (const SourceFile& file : source_files({"reference/data"})) {
    if (!file.path.ends_with(".csv")) continue;
    std::vector<std::string> header;
    pellicle::detail::read_csv(file.text, file.path, [&](const pellicle::detail::CsvRow& row) {
      if (header.empty()) {
        header.assign(row.fields.begin(), row.fields.end());
        return;
      }
      for (std::size_t i = 0; i < header.size() && i < row.fields.size(); ++i) {
        if (!std::regex_match(header[i], unit) || row.fields[i].empty()) continue;
        CHECK_MESSAGE(std::regex_match(row.fields[i], number),
                      file.path << ":" << row.line << ": " << header[i] << " = " << row.fields[i]);
      }
    });
  }
}

TEST_CASE("every test has a name of its own that ctest can carry") {
  static const std::regex test_case("(?:^|\n)TEST_CASE\\(\"((?:[^\"\\\\\n]|\\\\.)*)\"\\)");
  std::map<std::string, std::set<std::string>> names;
  std::size_t seen = 0;
  for (const SourceFile& file : source_files({"tests"})) {
    if (!file.path.ends_with("_test.cpp")) continue;
    const std::string label = split(file.path, '/').at(1);
    for (auto it = std::sregex_iterator(file.text.begin(), file.text.end(), test_case); it != std::sregex_iterator();
         ++it) {
      const std::string name = (*it)[1];
      ++seen;
      CHECK_MESSAGE(names[label].insert(name).second, file.path << ": " << name);
      CHECK_MESSAGE(name.find_first_of(",;[]*?\\\"$") == std::string::npos, file.path << ": " << name);
      CHECK_MESSAGE(name.find(' ') != std::string::npos, file.path << ": " << name);  // a sentence, not a word
    }
  }
  CHECK(seen > 200);
}

}  // TEST_SUITE("house rules")
