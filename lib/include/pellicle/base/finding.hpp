#pragma once
/// Findings: what a reader of a result must know besides the number.

#include <optional>
#include <string>
#include <vector>

namespace pellicle {

enum class Severity { note, warning, error };

/// "note", "warning" or "error".
[[nodiscard]] const char* severity_name(Severity severity) noexcept;

/// A stable code for scripts, a sentence for people, and the number that raised it.
struct Finding {
  std::string code;
  Severity severity = Severity::note;
  std::string text;
  std::optional<double> value = std::nullopt;  ///< the number that triggered it, unit as in `text`
  std::optional<double> limit = std::nullopt;  ///< the limit it was compared with, same unit
};

using Findings = std::vector<Finding>;

/// Appends `finding` unless one with the same code and text is there already.
void add_finding(Findings& findings, Finding finding);

/// Appends every finding of `more` that is not there already.
void add_findings(Findings& findings, const Findings& more);

/// True when some finding has this code.
[[nodiscard]] bool has_finding(const Findings& findings, const std::string& code) noexcept;

}  // namespace pellicle
