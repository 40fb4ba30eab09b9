#include <string>
#include <vector>

#include "base/csv.hpp"
#include "pellicle/base/error.hpp"
#include "support/close_to.hpp"

using namespace pellicle;

TEST_SUITE("comma-separated values") {

TEST_CASE("a row whose first field holds line breaks begins where its quotation mark opens") {
  std::vector<std::size_t> lines;
  detail::read_csv("a,b\n\"two\nlines\",2\n\"one\nmore\ntime\",3\n4,5\n", "t.csv",
                   [&](const detail::CsvRow& row) { lines.push_back(row.line); });
  REQUIRE(lines.size() == 4);
  CHECK(lines[1] == 2);
  CHECK(lines[2] == 4);
  CHECK(lines[3] == 7);
}

TEST_CASE("a quotation mark that is never closed is named where it opens") {
  const auto error =
      test::error_of<InputError>([] { detail::read_csv("a\nb\n\"c\nd\n", "t.csv", [](const detail::CsvRow&) {}); });
  CHECK(error.where() == "t.csv:3");
}

}  // TEST_SUITE("comma-separated values")
