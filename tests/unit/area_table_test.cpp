#include "pellicle/io/area_table.hpp"

#include <string>
#include <vector>

#include "pellicle/base/error.hpp"
#include "support/close_to.hpp"

using namespace pellicle;
using test::contains;
using test::error_of;

TEST_SUITE("area table") {

TEST_CASE("every column arrives where it belongs in any order") {
  const auto rows = read_area_table(
      "step_ev,area,line,spot,emission_deg,area_sd,background_counts,dwell_s\n"
      "0.1,4210,Al 2p oxide,A,34,65,120,2.5\n",
      "t.csv").rows;
  REQUIRE(rows.size() == 1);
  const AreaRow& r = rows.front();
  CHECK(r.spot == "A");
  CHECK(r.emission_deg == 34.0);
  CHECK(r.line == "Al 2p oxide");
  CHECK(r.area == 4210.0);
  CHECK(r.area_sd == 65.0);
  CHECK(r.counting.background_counts == 120.0);
  CHECK(r.counting.dwell_s == 2.5);
  CHECK(r.counting.step_ev == 0.1);
  CHECK(r.line_number == 2);
}

TEST_CASE("columns that are none of ours are left unread and named") {
  const AreaTable table = read_area_table("line,Remark,area,Operator\nSi 2p,\"a, b\",100,x\n", "t.csv");
  REQUIRE(table.rows.size() == 1);
  CHECK(table.rows[0].area == 100.0);
  CHECK(table.unread_columns == std::vector<std::string>{"Remark", "Operator"});
}

TEST_CASE("a mapped column of a wide table takes its standard uncertainty along") {
  AreaTableOptions options;
  options.wide = true;
  options.labels = {"Al 2p oxide"};
  options.columns = {{"Al 2p oxide", "ox"}};
  const auto rows = read_area_table("spot,ox,ox sd\nA,100,3\n", "t.csv", options).rows;
  REQUIRE(rows.size() == 1);
  CHECK(rows[0].line == "Al 2p oxide");
  CHECK(rows[0].area_sd == 3.0);
}

TEST_CASE("line and area are enough") {
  const auto rows = read_area_table("line,area\nSi 2p,100\n\nO 1s,0\n", "t.csv").rows;
  REQUIRE(rows.size() == 2);
  CHECK(rows[0].spot == "1");
  CHECK_FALSE(rows[0].emission_deg.has_value());
  CHECK_FALSE(rows[0].area_sd.has_value());
  CHECK_FALSE(rows[0].counting.dwell_s.has_value());
  CHECK(rows[1].area == 0.0);
  CHECK(rows[1].line_number == 4);
}

TEST_CASE("a take-off angle becomes an emission angle and an empty cell the angle of the run") {
  const auto rows = read_area_table("takeoff_deg,line,area\n56,a,1\n,a,1\n", "t.csv").rows;
  CHECK(rows[0].emission_deg == 34.0);
  CHECK_FALSE(rows[1].emission_deg.has_value());
}

TEST_CASE("an area below zero within three of its uncertainties is data") {
  const auto rows = read_area_table("line,area,area_sd\na,-29.9,10\na,-0,\n", "t.csv").rows;
  CHECK(rows[0].area == -29.9);
  CHECK_FALSE(std::signbit(*rows[1].area));
}

TEST_CASE("every fault of a table is named with file and line and column") {
  struct Fault {
    std::string text, where, fact;
  };
  const std::string head = "spot,emission_deg,line,area,area_sd,background_counts,dwell_s,step_ev\n";
  const std::string takeoff = "takeoff_deg,line,area\n";
  const std::vector<Fault> faults = {
      {head + "1,0,a,1,,,,\n1,0,a,x,,,,\n", "t.csv:3: area", "\"x\" is not a number"},
      {head + "1,0,a,,,,,\n", "t.csv:2: area", "empty"},
      {head + "1,0,a,nan,,,,\n", "t.csv:2: area", "not a number"},
      {head + "1,0,a,inf,,,,\n", "t.csv:2: area", "not a number"},
      {head + "1,0,,1,,,,\n", "t.csv:2: line", "empty"},
      {head + "1,x,a,1,,,,\n", "t.csv:2: emission_deg", "\"x\" is not a number"},
      {head + "1,90,a,1,,,,\n", "t.csv:2: emission_deg", "not an emission angle"},
      {head + "1,-1,a,1,,,,\n", "t.csv:2: emission_deg", "not an emission angle"},
      {takeoff + "0,a,1\n", "t.csv:2: takeoff_deg", "not a take-off angle"},
      {takeoff + "91,a,1\n", "t.csv:2: takeoff_deg", "not a take-off angle"},
      {head + "1,0,a,1,0,,,\n", "t.csv:2: area_sd", "out of range"},
      {head + "1,0,a,1,-1,,,\n", "t.csv:2: area_sd", "out of range"},
      {head + "1,0,a,1,,-1,,\n", "t.csv:2: background_counts", "out of range"},
      {head + "1,0,a,1,,,0,\n", "t.csv:2: dwell_s", "out of range"},
      {head + "1,0,a,1,,,,0\n", "t.csv:2: step_ev", "out of range"},
      {head + "1,0,a,1,,,,x\n", "t.csv:2: step_ev", "not a number"},
      {head + "1,0,a,1\n", "t.csv:2", "4 fields where the header has 8"},
      {"line,area\na,1,5\n", "t.csv:2", "3 fields where the header has 2"},
      {"line,area\na,\"1,5\"\n", "t.csv:2: area", "\"1,5\" is not a number"},
      {"line,aera\n", "t.csv:1", "unknown column \"aera\""},
      {"line,area,line\n", "t.csv:1", "stands twice"},
      {"line\na\n", "t.csv:1", "column \"area\" is missing"},
      {"area\n1\n", "t.csv:1", "column \"line\" is missing"},
      {"line,area,emission_deg,takeoff_deg\n", "t.csv:1", "both emission_deg and takeoff_deg"},
      {"", "t.csv", "the table is empty"},
      {"\n\n", "t.csv", "the table is empty"},
      {"line,area\n", "t.csv", "no rows"},
      {"line,area\na,\"1\n", "t.csv:2", "quotation mark"},
  };
  for (const Fault& fault : faults) {
    CAPTURE(fault.text);
    const auto error = error_of<InputError>([&] { (void)read_area_table(fault.text, "t.csv"); });
    CHECK(error.where() == fault.where);
    CHECK_MESSAGE(contains(error.fact(), fault.fact), error.fact());
  }
}

TEST_CASE("hints lead from the fault to the remedy") {
  const auto hint = [](const std::string& text) {
    return error_of<InputError>([&] { (void)read_area_table(text, "t.csv"); }).hint();
  };
  CHECK(contains(hint("line,aera\n"), "did you mean \"area\"?"));
  CHECK(contains(hint("line,area,emmision_deg\n"), "did you mean \"emission_deg\"?"));
  CHECK(contains(hint("line,area\na,\"1,5\"\n"), "decimal sign as a point"));
  CHECK(contains(hint("line,area\na,1,5\n"), "decimal comma"));
  CHECK(contains(hint("line,area,emission_deg,takeoff_deg\n"), "90 - takeoff_deg"));
}

}  // TEST_SUITE("area table")
