#include "pellicle/sample/stack.hpp"

#include "base/nearest.hpp"
#include "pellicle/base/error.hpp"

namespace pellicle {

std::size_t Stack::position(std::string_view name) const {
  if (name == kSubstrate) return layers.size();
  std::vector<std::string> names;
  for (std::size_t i = 0; i < layers.size(); ++i) {
    if (layers[i].name == name) return i;
    names.push_back(layers[i].name);
  }
  names.emplace_back(kSubstrate);
  throw InputError("", "the sample has no layer \"" + std::string(name) + "\"", detail::name_hint(name, names));
}

const Material& Stack::material(std::string_view name) const {
  const std::size_t at = position(name);
  return at == layers.size() ? substrate : layers[at].material;
}

}  // namespace pellicle
