#include "bind.hpp"

namespace pellicle::python {

void raise_for_status(const char* function, std::span<const Status> status) {
  std::size_t bad = 0, first = 0;
  for (std::size_t i = status.size(); i-- > 0;) {
    if (status[i] != Status::ok) {
      ++bad;
      first = i;
    }
  }
  if (bad == 0) return;
  const std::string fact = std::to_string(bad) + " of " + std::to_string(status.size()) + " elements failed, first at flat index " +
                           std::to_string(first) + ": " + status_text(status[first]);
  const std::string hint = "call it with status=True to get a status per element";
  if (status[first] == Status::invalid_input) throw InputError(function, fact, hint);
  if (status[first] == Status::not_converged) throw ConvergenceError(function, fact, hint);
  throw DomainError(function, fact, hint);
}

void register_base(py::module_& m) {
  auto error = py::register_exception<Error>(m, "Error", PyExc_Exception);
  error.attr("__doc__") = "Any error of pellicle; str() is one line of place, fact and hint.";
  auto input = py::register_exception<InputError>(m, "InputError", py::make_tuple(error, py::handle(PyExc_ValueError)));
  input.attr("__doc__") = "A file, key, name or value is wrong. Also a ValueError.";
  auto domain = py::register_exception<DomainError>(m, "DomainError", py::make_tuple(error, py::handle(PyExc_ArithmeticError)));
  domain.attr("__doc__") = "Legal input for which no answer exists. Also an ArithmeticError.";
  auto convergence = py::register_exception<ConvergenceError>(m, "ConvergenceError", py::make_tuple(error, py::handle(PyExc_ArithmeticError)));
  convergence.attr("__doc__") = "A solver stopped before its tolerance. Also an ArithmeticError.";

  // Tracebacks name the package, where users find the types.
  for (py::handle type : {py::handle(error), py::handle(input), py::handle(domain), py::handle(convergence)}) type.attr("__module__") = "pellicle";

  py::class_<Finding>(m, "Finding", "What a reader of a result must know besides the number.")
      .def_readonly("code", &Finding::code, "Stable code for scripts.")
      .def_property_readonly("severity", [](const Finding& f) { return severity_name(f.severity); }, "'note', 'warning' or 'error'.")
      .def_readonly("text", &Finding::text, "One sentence for people.")
      .def_readonly("value", &Finding::value, "The number that raised it, or None.")
      .def_readonly("limit", &Finding::limit, "The limit it was compared with, or None.")
      .def("__repr__", [](const Finding& f) { return std::string("<") + severity_name(f.severity) + " " + f.code + ": " + f.text + ">"; });
}

}  // namespace pellicle::python
