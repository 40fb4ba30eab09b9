#include "pellicle/lines/photon_source.hpp"

#include <algorithm>
#include <cctype>
#include <cmath>
#include <vector>

#include "base/csv.hpp"
#include "base/nearest.hpp"
#include "pellicle/base/error.hpp"
#include "pellicle/base/number.hpp"

namespace pellicle {
namespace {

/// Letters only, lower case, "alpha" and "α" both read as "a": "Al K-alpha" and "AlKa" are one name.
std::string plain_name(std::string_view name) {
  std::string text(name);
  for (const std::string_view alpha : {"\xCE\xB1", "alpha", "Alpha"}) {
    for (std::size_t at = text.find(alpha); at != std::string::npos; at = text.find(alpha)) {
      text.replace(at, alpha.size(), "a");
    }
  }
  std::string plain;
  for (const char c : text) {
    if (std::isalnum(static_cast<unsigned char>(c))) {
      plain.push_back(static_cast<char>(std::tolower(static_cast<unsigned char>(c))));
    }
  }
  return plain;
}

}  // namespace

std::span<const PhotonSource> photon_sources() {
  static const std::vector<PhotonSource> all = [] {
    std::vector<PhotonSource> sources;
    detail::for_each_record("photon_sources", [&](const detail::CsvRecord& row) {
      sources.push_back({row.text("name"), row.number("photon_energy_ev")});
    });
    std::stable_sort(sources.begin(), sources.end(), [](const PhotonSource& a, const PhotonSource& b) {
      return a.photon_energy_ev < b.photon_energy_ev;
    });
    return sources;
  }();
  return all;
}

const PhotonSource& photon_source(std::string_view name) {
  const std::string wanted = plain_name(name);
  std::vector<std::string> names;
  for (const PhotonSource& source : photon_sources()) {
    if (plain_name(source.name) == wanted) return source;
    names.push_back(source.name);
  }
  throw InputError("", "unknown photon source \"" + std::string(name) + "\"",
                   "expected one of: " + detail::join_names(names) + "; or give the photon energy");
}

PhotonSource photon_source_of_energy(double photon_energy_ev) {
  if (!(photon_energy_ev >= 20.0 && photon_energy_ev <= 30000.0)) {
    throw InputError("photon_energy_ev", number_text(photon_energy_ev) + " eV is out of range", "expected 20 to 30000 eV");
  }
  for (const PhotonSource& source : photon_sources()) {
    if (std::abs(source.photon_energy_ev - photon_energy_ev) < 0.05) return source;
  }
  return {number_text(photon_energy_ev) + " eV", photon_energy_ev};
}

}  // namespace pellicle
