#include "pellicle/base/error.hpp"

#include <string>

#include "base/nearest.hpp"
#include "pellicle/base/finding.hpp"
#include "pellicle/base/status.hpp"
#include "pellicle/base/version.hpp"
#include "support/check_rows.hpp"
#include "support/close_to.hpp"

using namespace pellicle;

TEST_SUITE("errors and findings") {

TEST_CASE("an error reads place then fact then hint with empty parts left out") {
  CHECK(std::string(InputError("run.toml:3:1", "a fact", "a hint").what()) == "run.toml:3:1: a fact; a hint");
  CHECK(std::string(InputError("", "a fact", "a hint").what()) == "a fact; a hint");
  CHECK(std::string(InputError("a place", "a fact").what()) == "a place: a fact");
  const DomainError error("a place", "a fact", "a hint");
  CHECK(error.where() == "a place");
  CHECK(error.fact() == "a fact");
  CHECK(error.hint() == "a hint");
}

TEST_CASE("an error stays one line whatever it quotes") {
  const std::string text = InputError("a\nplace", "fact\twith\r\ncontrols", "hint\x01").what();
  for (const char c : text) CHECK(static_cast<unsigned char>(c) >= 0x20);
  CHECK(text == "a place: fact with  controls; hint ");
}

TEST_CASE("input and domain and convergence errors are told apart") {
  CHECK_THROWS_AS(throw InputError("", "x"), Error);
  CHECK_THROWS_AS(throw DomainError("", "x"), Error);
  CHECK_THROWS_AS(throw ConvergenceError("", "x"), Error);
  static_assert(!std::is_base_of_v<InputError, DomainError>);
  static_assert(!std::is_base_of_v<DomainError, ConvergenceError>);
}

TEST_CASE("a finding is listed once however often it is raised") {
  Findings findings;
  add_finding(findings, {"assumed", Severity::note, "one"});
  add_finding(findings, {"assumed", Severity::note, "one"});
  add_finding(findings, {"assumed", Severity::note, "another"});
  CHECK(findings.size() == 2);
  add_findings(findings, {{"assumed", Severity::note, "one"}, {"third", Severity::error, "one"}});
  CHECK(findings.size() == 3);
  CHECK(has_finding(findings, "third"));
  CHECK_FALSE(has_finding(findings, "fourth"));
}

TEST_CASE("severities and statuses have the words that scripts read") {
  CHECK(std::string(severity_name(Severity::note)) == "note");
  CHECK(std::string(severity_name(Severity::warning)) == "warning");
  CHECK(std::string(severity_name(Severity::error)) == "error");
  CHECK(static_cast<int>(Status::ok) == 0);
  std::set<std::string> texts;
  for (const Status s :
       {Status::ok, Status::invalid_input, Status::out_of_range, Status::no_solution, Status::not_converged}) {
    texts.insert(status_text(s));
  }
  CHECK(texts.size() == 5);
}

TEST_CASE("the version is the one of the build") {
  const std::string lists = test::read_whole_file(test::source_folder() + "/CMakeLists.txt");
  CHECK(test::contains(lists, "VERSION " + std::string(version()) + " "));
}

TEST_CASE("the edit distance counts single changes and ignores letter case") {
  using detail::edit_distance;
  CHECK(edit_distance("kitten", "sitting") == 3);
  CHECK(edit_distance("", "abc") == 3);
  CHECK(edit_distance("abc", "") == 3);
  CHECK(edit_distance("Emission", "emission") == 0);
  CHECK(edit_distance("emision", "emission") == 1);
}

TEST_CASE("a hint names the nearest word or lists what is known") {
  const std::vector<std::string> known = {"emission_deg", "takeoff_deg", "source"};
  CHECK(detail::name_hint("emmision_deg", known) == "did you mean \"emission_deg\"?");
  CHECK(detail::name_hint("xyz", known) == "expected one of: emission_deg, takeoff_deg, source");
  std::vector<std::string> many;
  for (char c = 'a'; c <= 'p'; ++c) many.push_back(std::string(8, c));
  const std::string hint = detail::name_hint("0123", many);
  CHECK(test::contains(hint, "llllllll, …"));
  CHECK_FALSE(test::contains(hint, "mmmmmmmm"));
}

}  // TEST_SUITE("errors and findings")
