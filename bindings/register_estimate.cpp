#include "bind.hpp"

namespace pellicle::python {
namespace {

/// Thickness of broadcast arrays. The Python layer has broadcast every argument to one shape or to one element.
py::object thickness_arrays(const DoubleArray& ratio, const DoubleArray& reference, const DoubleArray& film_length,
                            const std::optional<DoubleArray>& substrate_length, const DoubleArray& emission,
                            const std::vector<py::ssize_t>& shape, bool want_status) {
  py::array_t<double> values(shape);
  py::array_t<std::uint8_t> codes(shape);
  const std::span<double> out(values.mutable_data(), static_cast<std::size_t>(values.size()));
  const std::span<Status> status(reinterpret_cast<Status*>(codes.mutable_data()), static_cast<std::size_t>(codes.size()));
  RatioArrays input{span_of(ratio), span_of(reference), span_of(film_length), {}, span_of(emission)};
  if (substrate_length) input.substrate_line_length_nm = span_of(*substrate_length);
  {
    const py::gil_scoped_release release;
    thickness_nm(input, out, status);
  }
  if (want_status) return py::make_tuple(values, codes);
  raise_for_status("thickness_nm", status);
  return values;
}

}  // namespace

void register_estimate(py::module_& m) {
  py::class_<Thickness>(m, "Thickness", "A film thickness with its uncertainty (GUM), budget and findings.")
      .def_readonly("value_nm", &Thickness::value_nm, "Thickness [nm].")
      .def_readonly("standard_uncertainty_nm", &Thickness::standard_uncertainty_nm, "Combined standard uncertainty [nm].")
      .def_property_readonly("low95_nm", [](const Thickness& t) { return t.interval_nm.low95; }, "Lower end of the 95 % interval [nm], never below 0.")
      .def_property_readonly("high95_nm", [](const Thickness& t) { return t.interval_nm.high95; }, "Upper end of the 95 % interval [nm].")
      .def_readonly("reduced_thickness", &Thickness::reduced_thickness, "Thickness over (film line length times cos emission angle).")
      .def_property_readonly("repeatability_nm", [](const Thickness& t) { return t.budget.repeatability; }, "What varies from measurement to measurement [nm].")
      .def_property_readonly("scale_nm", [](const Thickness& t) -> std::optional<double> {
        if (!t.scale_stated) return std::nullopt;
        return t.budget.scale;
      }, "What is common to all measurements [nm]; None when a length came without uncertainty.")
      .def_property_readonly("budget", [](const Thickness& t) { return t.budget.rows; }, "Contributions, largest share first.")
      .def_readonly("findings", &Thickness::findings, "What to know besides the number.")
      .def("__repr__", [](const Thickness& t) { return "<Thickness " + value_with_uncertainty(t.value_nm, t.standard_uncertainty_nm) + " nm>"; });
  m.def("_thickness_arrays", &thickness_arrays);
  m.def("thickness_from_ratio",
        [](const PyQuantity& ratio, const PyQuantity& reference, const PyQuantity& film_length, const std::optional<PyQuantity>& substrate_length,
           const PyQuantity& emission, double correlation) {
          return thickness_from_ratio({quantity_of(ratio), quantity_of(reference), quantity_of(film_length), quantity_of(substrate_length),
                                       quantity_of(emission), correlation});
        },
        py::kw_only(), "ratio"_a, "reference_ratio"_a, "film_line_length_nm"_a, "substrate_line_length_nm"_a = py::none(), "emission_deg"_a = 0.0,
        "length_correlation"_a = 0.0,
        R"(Film thickness with its uncertainty from one ratio of areas.

Each quantity is a number, or a pair (value, standard uncertainty). A bare number adds nothing to the
uncertainty and raises the finding `uncertainty_not_given`.

Parameters
----------
ratio : quantity
    Film area over substrate area, >= 0.
reference_ratio : quantity
    The same for an infinitely thick film and the bare substrate, > 0.
film_line_length_nm, substrate_line_length_nm : quantity
    Attenuation lengths in the film [nm], > 0; None: the same line, hence the same length.
emission_deg : quantity
    From the surface normal, 0 to below 90 [deg].
length_correlation : float
    Correlation of the two lengths, -1 to 1.

Raises
------
InputError
    A value outside its range.
DomainError
    An infinite ratio: only a bound could be given.

References
----------
Hill et al., Chem. Phys. Lett. 44 (1976) 225; JCGM 100:2008, eq. (16).

Examples
--------
>>> import pellicle
>>> t = pellicle.thickness_from_ratio(ratio=(2.0, 0.024), reference_ratio=(0.9329, 0.047),
...                                   film_line_length_nm=(3.448, 0.345), emission_deg=(34.0, 1.0))
>>> t
<Thickness 3.27 ± 0.34 nm>
)");
  m.def("thickness_from_areas",
        [](const PyQuantity& film, const PyQuantity& substrate, const std::optional<PyQuantity>& ratio, const std::optional<PyQuantity>& reference_film,
           const std::optional<PyQuantity>& reference_substrate, const PyQuantity& film_length, const std::optional<PyQuantity>& substrate_length,
           const PyQuantity& emission, double correlation) {
          return thickness_from_areas({quantity_of(film), quantity_of(substrate), quantity_of(ratio), quantity_of(reference_film),
                                       quantity_of(reference_substrate), quantity_of(film_length), quantity_of(substrate_length),
                                       quantity_of(emission), correlation});
        },
        py::kw_only(), "film_area"_a, "substrate_area"_a, "reference_ratio"_a = py::none(), "reference_film_area"_a = py::none(),
        "reference_substrate_area"_a = py::none(), "film_line_length_nm"_a, "substrate_line_length_nm"_a = py::none(), "emission_deg"_a = 0.0,
        "length_correlation"_a = 0.0,
        R"(Film thickness with its uncertainty from the areas of film and substrate.

Quantities as in thickness_from_ratio(). Give reference_ratio, or both reference areas.

Raises
------
InputError
    A value outside its range, or no reference, or both kinds.
DomainError
    No substrate area: only a bound could be given.

Examples
--------
>>> import pellicle
>>> t = pellicle.thickness_from_areas(film_area=(20000, 142), substrate_area=(10000, 100), reference_ratio=(0.9329, 0.047),
...                                   film_line_length_nm=(3.448, 0.345), emission_deg=(34.0, 1.0))
>>> t.budget[0].name
'length_nm'
)");
}

}  // namespace pellicle::python
