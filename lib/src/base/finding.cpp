#include "pellicle/base/finding.hpp"

#include <algorithm>

namespace pellicle {

const char* severity_name(Severity severity) noexcept {
  switch (severity) {
    case Severity::note: return "note";
    case Severity::warning: return "warning";
    case Severity::error: return "error";
  }
  return "error";
}

void add_finding(Findings& findings, Finding finding) {
  const bool present = std::any_of(findings.begin(), findings.end(), [&](const Finding& f) {
    return f.code == finding.code && f.text == finding.text;
  });
  if (!present) findings.push_back(std::move(finding));
}

void add_findings(Findings& findings, const Findings& more) {
  for (const Finding& finding : more) add_finding(findings, finding);
}

bool has_finding(const Findings& findings, const std::string& code) noexcept {
  return std::any_of(findings.begin(), findings.end(), [&](const Finding& f) { return f.code == code; });
}

}  // namespace pellicle
