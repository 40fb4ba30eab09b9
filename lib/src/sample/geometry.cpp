#include "pellicle/sample/geometry.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <string>
#include <vector>

#include "base/nearest.hpp"
#include "pellicle/base/constants.hpp"
#include "pellicle/base/error.hpp"
#include "pellicle/base/number.hpp"
#include "pellicle/sample/emission.hpp"

namespace pellicle {
namespace {

constexpr std::array kAreas = {SignalArea::analyser, SignalArea::x_ray_spot};
constexpr std::array kDirections = {TiltDirection::toward_source, TiltDirection::away_from_source, TiltDirection::across};

template <typename Enum, std::size_t N>
Enum by_name(const std::array<Enum, N>& all, const char* (*name_of)(Enum) noexcept, std::string_view name, const char* what) {
  std::vector<std::string> names;
  for (const Enum value : all) {
    if (name == name_of(value)) return value;
    names.emplace_back(name_of(value));
  }
  throw InputError("", std::string("unknown ") + what + " \"" + std::string(name) + "\"", "expected one of: " + detail::join_names(names));
}

double cos_incidence(const Geometry& g, double emission_deg) {
  if (!g.tilt_direction) {
    throw InputError("tilt_direction", "it is not stated", "expected toward-source, away-from-source or across");
  }
  if (!g.source_analyser_angle_deg) {
    throw InputError("source_analyser_angle_deg", "it is not stated", "the angle between X-rays and analyser is needed here");
  }
  const double psi = *g.source_analyser_angle_deg * kRadianPerDegree;
  const double theta = emission_deg * kRadianPerDegree;
  switch (*g.tilt_direction) {
    case TiltDirection::toward_source: return std::cos(psi - theta);
    case TiltDirection::away_from_source: return std::cos(psi + theta);
    case TiltDirection::across: break;
  }
  return std::cos(psi) * std::cos(theta);
}

}  // namespace

const char* signal_area_name(SignalArea area) noexcept { return area == SignalArea::analyser ? "analyser" : "x-ray-spot"; }

SignalArea signal_area(std::string_view name) { return by_name(kAreas, signal_area_name, name, "signal area"); }

const char* tilt_direction_name(TiltDirection direction) noexcept {
  switch (direction) {
    case TiltDirection::toward_source: return "toward-source";
    case TiltDirection::away_from_source: return "away-from-source";
    case TiltDirection::across: break;
  }
  return "across";
}

TiltDirection tilt_direction(std::string_view name) { return by_name(kDirections, tilt_direction_name, name, "tilt direction"); }

double emission_deg_of_tilt(const Geometry& geometry, double tilt_deg) {
  if (!geometry.tilt_direction) {
    throw InputError("tilt_deg", "a tilt needs the geometry that maps it to an emission angle",
                     "state tilt_direction under [instrument], or give emission_deg");
  }
  const double at_zero = geometry.emission_at_zero_tilt_deg;
  if (*geometry.tilt_direction == TiltDirection::across) {
    // The tilt turns about an axis at right angles to the plane in which the emission at zero tilt lies.
    const double cosine = std::cos(at_zero * kRadianPerDegree) * std::cos(tilt_deg * kRadianPerDegree);
    const double emission = at_zero == 0.0 ? std::abs(tilt_deg) : std::acos(std::clamp(cosine, -1.0, 1.0)) / kRadianPerDegree;
    check_emission_deg(emission);
    return emission;
  }
  const double emission = at_zero + tilt_deg;
  if (emission < 0.0 && geometry.signal_area != SignalArea::analyser) {
    throw InputError("tilt_deg", "a tilt of " + number_text(tilt_deg) + " deg turns the normal to the other side of the analyser, where the X-ray spot differs",
                     "count tilts in the direction named by tilt_direction");
  }
  check_emission_deg(std::abs(emission));
  return std::abs(emission);
}

double incidence_deg(const Geometry& geometry, double emission_deg) {
  const double cosine = cos_incidence(geometry, emission_deg);
  if (!(cosine > 1e-12)) {
    throw DomainError("emission_deg", "at " + number_text(emission_deg) + " deg the X-rays come from below the surface",
                      "check source_analyser_angle_deg and tilt_direction");
  }
  return std::acos(std::min(cosine, 1.0)) / kRadianPerDegree;
}

double tilt_factor(const Geometry& geometry, double emission_deg) {
  if (geometry.signal_area == SignalArea::analyser) return 1.0;
  (void)incidence_deg(geometry, emission_deg);  // refuses X-rays from below
  return std::cos(emission_deg * kRadianPerDegree) * cos_incidence(geometry, 0.0) / cos_incidence(geometry, emission_deg);
}

}  // namespace pellicle
