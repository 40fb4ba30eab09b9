#include "base/csv.hpp"

#include <string>
#include <vector>

#include "base/embedded.hpp"
#include "pellicle/base/error.hpp"
#include "support/check_rows.hpp"
#include "support/close_to.hpp"

using namespace pellicle;
using test::contains;
using test::error_of;

namespace {

using Row = std::vector<std::string>;

struct Read {
  std::vector<std::size_t> lines;
  std::vector<Row> rows;
};

Read read(const std::string& text) {
  Read all;
  detail::read_csv(text, "t.csv", [&](const detail::CsvRow& row) {
    all.lines.push_back(row.line);
    all.rows.emplace_back(row.fields.begin(), row.fields.end());
  });
  return all;
}

}  // namespace

TEST_SUITE("comma-separated values") {

TEST_CASE("rows come with their fields and the line they begin on") {
  const Read r = read("a,b\n1,2\n\n  3 , 4 \n5,\n");
  CHECK(r.rows == std::vector<Row>{{"a", "b"}, {"1", "2"}, {"3", "4"}, {"5", ""}});
  CHECK(r.lines == std::vector<std::size_t>{1, 2, 4, 5});
}

TEST_CASE("any line ending and a last line without one are read") {
  for (const std::string text : {"a,b\r\n1,2\r\n", "a,b\n1,2", "a,b\r\n1,2"}) {
    CAPTURE(text);
    CHECK(read(text).rows == std::vector<Row>{{"a", "b"}, {"1", "2"}});
  }
  CHECK(read("").rows.empty());
  CHECK(read("\n\n").rows.empty());
}

TEST_CASE("quoted fields keep commas and quotes and line breaks and blanks") {
  const Read r = read("\"a,b\",\"say \"\"x\"\"\",\" c \"\n\"two\nlines\",2\n3,4\n");
  REQUIRE(r.rows.size() == 3);
  CHECK(r.rows[0] == Row{"a,b", "say \"x\"", " c "});
  CHECK(r.rows[1] == Row{"two\nlines", "2"});
}

TEST_CASE("a stray or unclosed quotation mark is named with its line") {
  CHECK(error_of<InputError>([] { read("a,b\n1,x\"y\n"); }).where() == "t.csv:2");
  CHECK(error_of<InputError>([] { read("a\n\"b\"c\n"); }).where() == "t.csv:2");
  CHECK(error_of<InputError>([] { read("a\nb\n\"c\n"); }).where() == "t.csv:3");
}

TEST_CASE("a cell is read as text or number and its place is in the error") {
  const std::vector<std::string> header = {"z", "energy_ev"};
  const std::string table = "levels";
  const std::vector<std::string> fields = {"13", "7x"};
  const detail::CsvRow row{5, fields};
  const detail::CsvRecord record(header, row, table);
  CHECK(record.text("z") == "13");
  CHECK(record.number("z") == 13.0);
  CHECK(error_of<InputError>([&] { (void)record.number("energy_ev"); }).where() == "levels:5: energy_ev");
  CHECK(contains(error_of<InputError>([&] { (void)record.text("mark"); }).what(),
                 "levels:5: column \"mark\" is missing"));
  const std::vector<std::string> empty = {"", ""};
  const detail::CsvRow empty_row{6, empty};
  CHECK_FALSE(detail::CsvRecord(header, empty_row, table).optional_number("z").has_value());
}

TEST_CASE("the tables compiled in are those of the sources") {
  for (const std::string name : {"elements", "materials", "core_levels", "photoionisation", "asymmetry",
                                 "calibrated_lengths", "defaults", "imfp_cautions", "photon_sources"}) {
    CAPTURE(name);
    CHECK(std::string(detail::embedded_table(name)) ==
          test::read_whole_file(test::source_folder() + "/reference/data/" + name + ".csv"));
  }
  CHECK(detail::embedded_table("no such table").empty());
}

}  // TEST_SUITE("comma-separated values")
