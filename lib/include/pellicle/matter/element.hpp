#pragma once
/// Elements 1–92: standard atomic weights and valence electrons.

#include <span>
#include <string>
#include <string_view>

namespace pellicle {

/// How well the number of valence electrons of the plasmon model is known.
enum class ValenceStatus {
  optical_set,  ///< element of the optical data sets behind TPP-2M
  group_rule,   ///< from the rule of the periodic group
  doubtful,     ///< usable, raises the finding `valence_electrons_doubtful`
  undecided     ///< not to be used: TPP-2M is refused for solids that hold it
};

struct Element {
  int z = 0;
  std::string symbol;
  std::string name;
  double atomic_weight_g_mol = 0.0;  ///< IUPAC standard atomic weight
  int valence_electrons = 0;         ///< per atom, convention of the TPP papers
  ValenceStatus valence_status = ValenceStatus::undecided;
};

/// All elements, by rising atomic number.
[[nodiscard]] std::span<const Element> elements();

/// Element with this symbol ("Al"), or nullptr. Letter case matters.
[[nodiscard]] const Element* find_element(std::string_view symbol);

/// Element with this symbol. @throws InputError with the nearest symbol.
[[nodiscard]] const Element& element(std::string_view symbol);

/// Element with this atomic number. @throws InputError outside 1–92.
[[nodiscard]] const Element& element(int z);

}  // namespace pellicle
