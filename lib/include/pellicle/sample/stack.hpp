#pragma once
/// Layers on a substrate.

#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "pellicle/matter/material.hpp"
#include "pellicle/uncertainty/quantity.hpp"

namespace pellicle {

/// The name by which the infinite bottom of a sample is called wherever layers are named.
inline constexpr std::string_view kSubstrate = "substrate";

struct Layer {
  std::string name;
  Material material;
  std::optional<Quantity> thickness_nm = std::nullopt;  ///< where it is known
};

/// A sample: layers from the outermost to the innermost, on an infinite substrate.
struct Stack {
  std::vector<Layer> layers;
  Material substrate;

  /// Position of the layer of this name, counted from the outermost; layers.size() for the substrate.
  /// @throws InputError with the known names.
  [[nodiscard]] std::size_t position(std::string_view name) const;
  /// Material of this layer or of the substrate. @throws InputError with the known names.
  [[nodiscard]] const Material& material(std::string_view name) const;
};

}  // namespace pellicle
