#pragma once

#include <cstdint>
#include <string>
#include <unordered_map>

#include "pellicle/base/finding.hpp"

namespace pellicle::detail {

/// Findings kept once however many results share them.
class FindingPool {
 public:
  explicit FindingPool(Findings& findings) : findings_(findings) {}

  std::uint32_t add(const Finding& finding) {
    key_.assign(finding.code).push_back('\0');
    key_ += finding.text;
    if (finding.value) key_.append(reinterpret_cast<const char*>(&*finding.value), sizeof(double));
    const auto [found, fresh] = index_.try_emplace(key_, static_cast<std::uint32_t>(findings_.size()));
    if (fresh) findings_.push_back(finding);
    return found->second;
  }

 private:
  Findings& findings_;
  std::unordered_map<std::string, std::uint32_t> index_;
  std::string key_;
};

}  // namespace pellicle::detail
