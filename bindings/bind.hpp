#pragma once
/// Included first by every binding file: one order of pybind11's headers and the registering functions.

#include <pybind11/numpy.h>
#include <pybind11/pybind11.h>
#include <pybind11/stl.h>

#include <variant>

#include "pellicle/pellicle.hpp"

namespace pellicle::python {

namespace py = pybind11;
using namespace pybind11::literals;

void register_base(py::module_& m);
void register_uncertainty(py::module_& m);
void register_matter(py::module_& m);
void register_lines(py::module_& m);
void register_transport(py::module_& m);
void register_signal(py::module_& m);
void register_estimate(py::module_& m);
void register_job(py::module_& m);

/// Array that NumPy hands over without a copy when it already is contiguous doubles.
using DoubleArray = py::array_t<double, py::array::c_style | py::array::forcecast>;

inline std::span<const double> span_of(const DoubleArray& array) {
  return {array.data(), static_cast<std::size_t>(array.size())};
}

/// @throws InputError, DomainError or ConvergenceError for the first element whose status is not ok
void raise_for_status(const char* function, std::span<const Status> status);

/// A quantity in Python is a number, or a pair (value, standard uncertainty).
using PyQuantity = std::variant<double, std::pair<double, std::optional<double>>>;
Quantity quantity_of(const PyQuantity& q);
std::optional<Quantity> quantity_of(const std::optional<PyQuantity>& q);

/// A material in Python is a Material or the name of one.
using PyMaterial = std::variant<Material, std::string>;
Material material_of(const PyMaterial& m);

}  // namespace pellicle::python
