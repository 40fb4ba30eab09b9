#include "pellicle/base/version.hpp"

namespace pellicle {

std::string_view version() noexcept { return PELLICLE_VERSION; }

}  // namespace pellicle
