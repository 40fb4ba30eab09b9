// Every function that a user can call says what it does.

#include <regex>
#include <string>
#include <vector>

#include "lint/source_files.hpp"
#include "support/close_to.hpp"

using namespace pellicle::test;

namespace {

struct Function {
  std::size_t line = 0;
  std::string text;
  bool documented = false;
};

/// Functions declared in a header, outside function bodies and private sections. Constructors are left to the comment
/// of their class.
std::vector<Function> functions_of(const SourceFile& file) {
  enum class Scope { open, hidden, body };  // namespace or public members; private members; everything else in braces
  std::vector<Scope> scopes = {Scope::open};
  std::vector<Function> functions;
  std::string statement;
  std::size_t number = 0, begin = 0;
  bool comment_above = false, begins_documented = false, trailing = false;
  static const std::regex opens("^\\s*(namespace|struct|class)\\b[^()]*$");
  static const std::regex declares("[\\w>&*\\]]\\s+[&*]?(operator\\S+|\\w+)\\s*\\([^=]*");
  const auto finish = [&](bool has_body) {
    if (scopes.back() == Scope::open && std::regex_search(statement, declares) && !statement.starts_with("#") &&
        statement.find("static_assert") == std::string::npos && !statement.starts_with("using")) {
      const std::size_t parenthesis = statement.find('(');
      const std::size_t equals = statement.find('=');
      const bool constructor = std::regex_search(statement, std::regex("^(explicit |constexpr |inline )*(\\w+)\\("));
      if (!constructor && (equals == std::string::npos || parenthesis < equals)) {
        functions.push_back({begin, statement, begins_documented || trailing});
      }
    }
    if (has_body) {
      const bool is_scope = std::regex_match(statement, opens);
      scopes.push_back(is_scope && scopes.back() != Scope::body
                           ? (statement.find("class ") != std::string::npos ? Scope::hidden : scopes.back())
                           : Scope::body);
    }
    statement.clear();
    trailing = false;
  };
  for (const std::string& full : file.lines()) {
    ++number;
    std::string line = full;
    const std::size_t first = line.find_first_not_of(' ');
    if (first == std::string::npos) {
      comment_above = false;
      continue;
    }
    line.erase(0, first);
    if (line.starts_with("///")) {
      comment_above = true;
      continue;
    }
    if (line.starts_with("//") || line.starts_with("#")) continue;
    if (line == "public:" || line == "private:") {
      scopes.back() = line == "public:" ? Scope::open : Scope::hidden;
      comment_above = false;
      continue;
    }
    if (const std::size_t comment = line.find("//"); comment != std::string::npos) {
      trailing = trailing || line.compare(comment, 4, "///<") == 0;
      line.erase(comment);
    }
    for (const char c : line + " ") {
      if (statement.empty() && c != ' ') {
        begin = number;
        begins_documented = comment_above;
      }
      if (c == '{') {
        finish(true);
      } else if (c == '}') {
        statement.clear();
        if (scopes.size() > 1) scopes.pop_back();
      } else if (c == ';') {
        finish(false);
      } else if (!statement.empty() || c != ' ') {
        statement += c;
      }
    }
    comment_above = false;
  }
  return functions;
}

}  // namespace

TEST_SUITE("documentation") {

TEST_CASE("the reader of headers finds functions and their comments") {
  const SourceFile file{"x.hpp", R"(#pragma once
namespace n {
/// Documented.
[[nodiscard]] double one(double x);
double two(double x,
           double y);
double three(double x);  ///< documented
struct S {
  double value = f(3);
  S(double v);
  [[nodiscard]] double four() const { return g(value); }
  /// Documented.
  [[nodiscard]] const std::string& five() const noexcept;
};
class C {
  void hidden();
 public:
  void six();
 private:
  void seven();
};
}  // namespace n
)"};
  std::string found;
  for (const Function& f : functions_of(file)) found += std::to_string(f.line) + (f.documented ? "+ " : "- ");
  CHECK(found == "4+ 5- 7+ 11- 13+ 18- ");
}

TEST_CASE("every public function has a comment of its own") {
  std::size_t seen = 0;
  for (const SourceFile& file : source_files({"lib/include"})) {
    for (const Function& f : functions_of(file)) {
      ++seen;
      CHECK_MESSAGE(f.documented, file.path << ":" << f.line << ": " << f.text);
    }
  }
  CHECK(seen > 60);
}

}  // TEST_SUITE("documentation")
