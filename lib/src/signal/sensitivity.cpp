#include "pellicle/signal/sensitivity.hpp"

#include <array>
#include <string>
#include <vector>

#include "base/nearest.hpp"
#include "pellicle/base/error.hpp"

namespace pellicle {

const char* sensitivity_kind_name(SensitivityKind kind) noexcept {
  switch (kind) {
    case SensitivityKind::atomic: return "atomic";
    case SensitivityKind::elemental: return "elemental";
    case SensitivityKind::average_matrix: break;
  }
  return "average-matrix";
}

SensitivityKind sensitivity_kind(std::string_view name) {
  std::vector<std::string> names;
  for (const SensitivityKind kind : {SensitivityKind::atomic, SensitivityKind::elemental, SensitivityKind::average_matrix}) {
    if (name == sensitivity_kind_name(kind)) return kind;
    names.emplace_back(sensitivity_kind_name(kind));
  }
  throw InputError("", "unknown sensitivity kind \"" + std::string(name) + "\"", "expected one of: " + detail::join_names(names));
}

}  // namespace pellicle
