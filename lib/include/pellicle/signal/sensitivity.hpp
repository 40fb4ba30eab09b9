#pragma once
/// What a relative sensitivity factor stands for.

#include <string_view>

namespace pellicle {

/// | kind           | area of a thick solid                                    | common name                        |
/// |----------------|----------------------------------------------------------|------------------------------------|
/// | atomic         | S · N · λ · W (S ∝ σ)                                    | per-atom factor                    |
/// | elemental      | S · (N λ)/(N λ of the pure element)                      | pure-element factor, ISO 18118     |
/// | average_matrix | S · X · (N_tot λ)/(N_tot λ of an average matrix)         | average-matrix factor, ISO 18118   |
///
/// N atoms of the element per volume, X its atomic fraction, λ the IMFP at the line's energy, W the
/// asymmetry at the angle between X-rays and analyser. @cite iso18118
enum class SensitivityKind { atomic, elemental, average_matrix };

/// "atomic", "elemental" or "average-matrix".
[[nodiscard]] const char* sensitivity_kind_name(SensitivityKind kind) noexcept;
/// @throws InputError with the known names.
[[nodiscard]] SensitivityKind sensitivity_kind(std::string_view name);

}  // namespace pellicle
