#include "io/digest.hpp"

// libmd's header uses size_t and uint8_t without including them.
#include <cstddef>
#include <cstdint>
#include <sys/types.h>

#include <sha2.h>

namespace pellicle::detail {

std::string sha256_hex(std::string_view text) {
  char hex[SHA256_DIGEST_STRING_LENGTH];
  SHA256Data(reinterpret_cast<const uint8_t*>(text.data()), text.size(), hex);
  return hex;
}

}  // namespace pellicle::detail
