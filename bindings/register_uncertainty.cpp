#include "bind.hpp"

namespace pellicle::python {

Quantity quantity_of(const PyQuantity& q) {
  if (const double* value = std::get_if<double>(&q)) return *value;
  const auto& [value, sd] = std::get<std::pair<double, std::optional<double>>>(q);
  Quantity quantity = value;
  quantity.standard_uncertainty = sd;
  return quantity;
}

std::optional<Quantity> quantity_of(const std::optional<PyQuantity>& q) {
  if (!q) return std::nullopt;
  return quantity_of(*q);
}

void register_uncertainty(py::module_& m) {
  py::class_<BudgetRow>(m, "BudgetRow", "One contribution to a standard uncertainty.")
      .def_readonly("name", &BudgetRow::name, "Name of the input.")
      .def_property_readonly("kind", [](const BudgetRow& r) { return contribution_kind_name(r.kind); },
                             "'repeatability' (varies from measurement to measurement) or 'scale' (common to all).")
      .def_readonly("contribution_nm", &BudgetRow::contribution, "|sensitivity| times standard uncertainty [nm].")
      .def_readonly("share", &BudgetRow::share, "Part of the variance, 0 to 1; correlation included.")
      .def("__repr__", [](const BudgetRow& r) {
        return "<" + r.name + ": " + rounded_text(r.contribution, 3) + " nm, " + rounded_text(100.0 * r.share, 3) + " %>";
      });
}

}  // namespace pellicle::python
