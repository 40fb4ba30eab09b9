#include "bind.hpp"

PYBIND11_MODULE(_core, m) {
  using namespace pellicle::python;
  m.doc() = "C++ core of pellicle. Import the package pellicle instead.";
  m.attr("__version__") = std::string(pellicle::version());
  register_base(m);
  register_uncertainty(m);
  register_matter(m);
  register_lines(m);
  register_transport(m);
  register_signal(m);
  register_estimate(m);
  register_job(m);
}
