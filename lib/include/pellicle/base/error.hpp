#pragma once
/// Errors: one exception type per kind, each a single line of place, fact and hint.
///
/// | type             | meaning                                   | exit code | Python                 |
/// |------------------|-------------------------------------------|-----------|------------------------|
/// | InputError       | a file, key, name or value is wrong       | 3         | pellicle.InputError    |
/// | DomainError      | legal input, but no answer exists         | 1         | pellicle.DomainError   |
/// | ConvergenceError | a solver stopped before its tolerance     | 1         | pellicle.ConvergenceError |
///
/// Functions over arrays never throw for one element: they return a status per element.

#include <stdexcept>
#include <string>

namespace pellicle {

/// Common base. `what()` reads "where: fact; hint" with empty parts left out.
class Error : public std::runtime_error {
 public:
  Error(std::string where, std::string fact, std::string hint = {});

  /// Place: file, line, field, option or argument.
  [[nodiscard]] const std::string& where() const noexcept { return where_; }
  /// What was found.
  [[nodiscard]] const std::string& fact() const noexcept { return fact_; }
  /// What was expected, or how to mend it.
  [[nodiscard]] const std::string& hint() const noexcept { return hint_; }

 private:
  std::string where_, fact_, hint_;
};

class InputError : public Error {
 public:
  using Error::Error;
};

class DomainError : public Error {
 public:
  using Error::Error;
};

class ConvergenceError : public Error {
 public:
  using Error::Error;
};

}  // namespace pellicle
