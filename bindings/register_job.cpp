#include "bind.hpp"

namespace pellicle::python {

void register_job(py::module_& m) {
  py::class_<pellicle::Run>(m, "Run", "One measurement set, read from a run file.")
      .def_static("read", [](const py::object& path) {
        const std::string name = py::module_::import("os").attr("fspath")(path).cast<std::string>();
        const py::gil_scoped_release release;
        return read_run_file(name);
      }, "path"_a, R"(Reads a run file (TOML) and the area table it names.

Raises
------
InputError
    With file, line, key, what was wrong and what was expected.
)")
      .def_readonly("title", &pellicle::Run::title, "Title of the run.")
      .def_property_readonly("lines", [](const pellicle::Run& r) {
        std::vector<std::string> labels;
        for (const Line& line : r.lines) labels.push_back(line.label);
        return labels;
      }, "Labels of the lines.")
      .def("__repr__", [](const pellicle::Run& r) { return "<Run " + r.place + ": " + std::to_string(r.areas.size()) + " areas>"; });
  m.def("_thickness_json", [](const pellicle::Run& run) {
    const py::gil_scoped_release release;
    return thickness_json(run, run_thickness(run));
  });
}

}  // namespace pellicle::python
