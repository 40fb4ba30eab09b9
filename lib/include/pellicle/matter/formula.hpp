#pragma once
/// Chemical formulas: nested groups, decimal counts, hydrates.

#include <span>
#include <string>
#include <string_view>
#include <vector>

#include "pellicle/matter/element.hpp"

namespace pellicle {

/// How many atoms of one element a formula unit holds.
struct FormulaTerm {
  const Element* element = nullptr;
  double count = 0.0;
};

/// A parsed formula. Terms are merged per element and kept in the order of first appearance.
class Formula {
 public:
  /// Reads a formula such as "Al2O3", "Ca10(PO4)6(OH)2", "TiC0.95", "CuSO4·5H2O" or "CuSO4*5H2O".
  /// Brackets ( ), [ ] and { } nest to 32 levels; counts lie in 0 < n <= 1e6; Unicode subscript digits count as digits.
  /// @throws InputError with the 1-based character position of the fault.
  static Formula parse(std::string_view text);

  /// As it was written.
  [[nodiscard]] const std::string& text() const noexcept { return text_; }
  /// Elements and their counts per formula unit, in the order of first appearance.
  [[nodiscard]] std::span<const FormulaTerm> terms() const noexcept { return terms_; }

  /// Molar mass of a formula unit [g/mol].
  [[nodiscard]] double molar_mass_g_mol() const noexcept;
  /// Atoms per formula unit.
  [[nodiscard]] double atoms() const noexcept;
  /// Atom-averaged atomic number Σ nᵢ Zᵢ / Σ nᵢ.
  [[nodiscard]] double mean_atomic_number() const noexcept;
  /// Atoms of this element per formula unit; 0 when absent.
  [[nodiscard]] double count(std::string_view symbol) const noexcept;
  /// True when both hold the same elements in the same proportion, in any spelling ("SiO2", "O4Si2").
  [[nodiscard]] bool same_composition(const Formula& other) const noexcept;

 private:
  std::string text_;
  std::vector<FormulaTerm> terms_;
};

}  // namespace pellicle
