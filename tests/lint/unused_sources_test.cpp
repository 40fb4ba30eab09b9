// The bibliography: every key that is in it is used.

#include <regex>
#include <set>
#include <string>

#include "lint/source_files.hpp"
#include "support/close_to.hpp"

using namespace pellicle::test;

TEST_SUITE("sources") {

TEST_CASE("every publication of the bibliography is used somewhere") {
  std::set<std::string> words;
  static const std::regex word("[a-z][a-z0-9-]*");
  for (const SourceFile& file : source_files(top_entries())) {
    if (file.path == "reference/sources.bib" || file.path.starts_with("tests/lint/")) continue;
    for (auto it = std::sregex_iterator(file.text.begin(), file.text.end(), word); it != std::sregex_iterator(); ++it)
      words.insert(it->str());
  }
  for (const std::string& key : bibliography_keys()) CHECK_MESSAGE(words.contains(key), key);
}

}  // TEST_SUITE("sources")
