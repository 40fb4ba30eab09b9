#include "bind.hpp"

namespace pellicle::python {
namespace {

py::dict model_values(const std::vector<ModelValue>& models) {
  py::dict values;
  for (const ModelValue& m : models) values[py::str(m.model)] = m.value_nm;
  return values;
}

py::dict refusals(const AttenuationLength& length) {
  py::dict reasons;
  for (const auto* models : {&length.imfp, &length.models}) {
    for (const ModelValue& m : *models) {
      if (!m.value_nm) reasons[py::str(m.model)] = m.refusal;
    }
  }
  return reasons;
}

/// Values and status codes of the shape of the energies.
py::tuple imfp_arrays(const PyMaterial& which, const DoubleArray& energy_ev, const std::string& model_name) {
  const Material material = material_of(which);
  const ImfpModel model = imfp_model(model_name);
  const std::vector<py::ssize_t> shape(energy_ev.shape(), energy_ev.shape() + energy_ev.ndim());
  py::array_t<double> values(shape);
  py::array_t<std::uint8_t> codes(shape);
  const std::span<double> out(values.mutable_data(), static_cast<std::size_t>(values.size()));
  const std::span<Status> status(reinterpret_cast<Status*>(codes.mutable_data()), static_cast<std::size_t>(codes.size()));
  {
    const py::gil_scoped_release release;
    imfp_nm(material, span_of(energy_ev), model, out, status);
  }
  return py::make_tuple(values, codes);
}

}  // namespace

void register_transport(py::module_& m) {
  py::class_<AttenuationLength>(m, "AttenuationLength", "The attenuation length to use, how far to trust it, and what was weighed.")
      .def_readonly("value_nm", &AttenuationLength::value_nm, "Effective attenuation length [nm].")
      .def_readonly("standard_uncertainty_nm", &AttenuationLength::standard_uncertainty_nm,
                    "max(0.10 L, sample standard deviation of the in-range, non-legacy models) [nm].")
      .def_readonly("model", &AttenuationLength::model, "The attenuation model chosen.")
      .def_readonly("imfp_model", &AttenuationLength::imfp_model, "The IMFP it rests on; empty when it rests on none.")
      .def_property_readonly("models", [](const AttenuationLength& l) { return model_values(l.models); },
                             "Every attenuation model: name to length [nm], None where it refuses.")
      .def_property_readonly("imfp_nm", [](const AttenuationLength& l) { return model_values(l.imfp); },
                             "Every IMFP model: name to IMFP [nm], None where it refuses.")
      .def_property_readonly("refusals", &refusals, "Reasons of the models that refuse.")
      .def_readonly("findings", &AttenuationLength::findings, "What to know besides the number.")
      .def("__repr__", [](const AttenuationLength& l) {
        return "<AttenuationLength " + value_with_uncertainty(l.value_nm, l.standard_uncertainty_nm) + " nm, " + l.model + ">";
      });
  m.def("_imfp_arrays", &imfp_arrays);
  m.def("_imfp_scalar", [](const PyMaterial& material, double energy, const std::string& model) {
    return imfp_nm(material_of(material), energy, imfp_model(model));
  });
  m.def("attenuation_length", [](const PyMaterial& material, double energy) { return attenuation_length(material_of(material), energy); },
        "material"_a, "energy_ev"_a,
        R"(Predicted effective attenuation length for film thickness, with its uncertainty.

Parameters
----------
material : str or Material
energy_ev : float
    Kinetic energy [eV], > 0.

Raises
------
InputError
    Unknown material, or an energy that is not a number > 0.
DomainError
    No model holds there.

References
----------
Seah and Gilmore, Surf. Interface Anal. 31 (2001) 835; Seah, Surf. Interface Anal. 44 (2012) 1353;
Cumpson and Seah, Surf. Interface Anal. 25 (1997) 430; Seah and Spencer, Surf. Interface Anal. 43 (2011) 744.

Examples
--------
>>> import pellicle
>>> length = pellicle.attenuation_length("SiO2", 1387.1)
>>> round(length.value_nm, 2), round(length.standard_uncertainty_nm, 2)
(3.52, 0.35)
)");
}

}  // namespace pellicle::python
