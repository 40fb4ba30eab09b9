#include "pellicle/base/status.hpp"

namespace pellicle {

const char* status_text(Status status) noexcept {
  switch (status) {
    case Status::ok: return "done";
    case Status::invalid_input: return "an input is not a number or lies outside its legal range";
    case Status::out_of_range: return "the formula is not valid for this input";
    case Status::no_solution: return "no finite answer exists for this input";
    case Status::not_converged: return "the solver stopped before its tolerance";
  }
  return "unknown status";
}

}  // namespace pellicle
