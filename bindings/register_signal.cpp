#include "bind.hpp"

namespace pellicle::python {

void register_signal(py::module_& m) {
  m.def("ratio_of_film", [](const DoubleArray& thickness, double reference_ratio, double film_length, std::optional<double> substrate_length,
                            double emission) -> py::object {
          const double substrate = substrate_length.value_or(film_length);
          if (thickness.ndim() == 0) return py::float_(ratio_of_film(*thickness.data(), reference_ratio, film_length, substrate, emission));
          py::array_t<double> out(std::vector<py::ssize_t>(thickness.shape(), thickness.shape() + thickness.ndim()));
          for (py::ssize_t i = 0; i < thickness.size(); ++i) {
            out.mutable_data()[i] = ratio_of_film(thickness.data()[i], reference_ratio, film_length, substrate, emission);
          }
          return out;
        },
        "thickness_nm"_a, py::kw_only(), "reference_ratio"_a, "film_line_length_nm"_a, "substrate_line_length_nm"_a = py::none(), "emission_deg"_a = 0.0,
        R"(Ratio of film area to substrate area of a flat, uniform film: the forward model of thickness_nm().

Parameters
----------
thickness_nm : float or array
    >= 0 [nm].
reference_ratio : float
    Infinitely thick film over bare substrate, > 0.
film_line_length_nm, substrate_line_length_nm : float
    Attenuation lengths in the film of the film's and the substrate's line [nm]; None: the same.
emission_deg : float
    From the surface normal, 0 to below 90 [deg].

Raises
------
InputError, DomainError

Examples
--------
>>> import pellicle
>>> round(pellicle.ratio_of_film(2.0, reference_ratio=0.7, film_line_length_nm=3.0), 6)
0.663414
)");
}

}  // namespace pellicle::python
