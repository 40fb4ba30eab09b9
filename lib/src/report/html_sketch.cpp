#include "report/html_sketch.hpp"

#include <fmt/format.h>

#include <cmath>

#include "pellicle/base/constants.hpp"
#include "report/wording.hpp"

namespace pellicle::detail {
namespace {

constexpr double kWidth = 520.0;
constexpr double kSurface = 132.0;
constexpr double kLayer = 27.0;
constexpr double kFoot = 200.0;  ///< where the electrons leave the surface
/// Drawn angle; any would do that keeps the words apart.
constexpr double kEmissionDeg = 50.0;
constexpr std::size_t kMostLayers = 5;

std::string text(double x, double y, std::string_view words, const char* more = "") {
  return fmt::format("<text x=\"{:.0f}\" y=\"{:.0f}\"{}>{}</text>\n", x, y, more, escaped(words));
}

/// Part of a circle about the foot, angles from the normal toward the analyser.
std::string arc(double radius, double from_deg, double to_deg) {
  const auto at = [&](double deg) {
    const double a = deg * kRadianPerDegree;
    return fmt::format("{:.1f} {:.1f}", kFoot + radius * std::sin(a), kSurface - radius * std::cos(a));
  };
  return fmt::format("<path d=\"M{}A{} {} 0 0 1 {}\" fill=\"none\" stroke=\"#17222b\"/>\n", at(from_deg), radius,
                     radius, at(to_deg));
}

}  // namespace

std::string geometry_sketch(const Stack& sample) {
  std::string layers;
  double y = kSurface;
  const auto stripe = [&](const std::string& words, double height, const char* fill) {
    layers +=
        fmt::format("<rect x=\"10\" y=\"{:.0f}\" width=\"{:.0f}\" height=\"{:.0f}\" fill=\"{}\" stroke=\"#17222b\"/>\n",
                    y, kWidth - 20.0, height, fill);
    layers += text(22.0, y + 0.5 * height + 5.0, shortened(printable(words), 58));
    y += height;
  };
  std::size_t drawn = 0;
  for (const Layer& layer : sample.layers) {
    if (++drawn > kMostLayers) break;
    const std::string& material = layer.material.id;
    stripe(material == layer.name ? layer.name : layer.name + ": " + material, kLayer,
           drawn % 2 == 1 ? "#f1f4f6" : "#dbe3e8");
  }
  if (sample.layers.size() > kMostLayers)
    stripe(fmt::format("{} more layers", sample.layers.size() - kMostLayers), kLayer, "#fff");
  stripe("substrate: " + sample.substrate.id, 44.0, "#c3ced5");

  const double angle = kEmissionDeg * kRadianPerDegree;
  const double tip_x = kFoot + 130.0 * std::sin(angle), tip_y = kSurface - 130.0 * std::cos(angle);
  std::string rays =
      fmt::format("<path d=\"M{0} {1}V14\" stroke=\"#17222b\" stroke-dasharray=\"5 4\"/>\n", kFoot, kSurface);
  rays += fmt::format("<path d=\"M{0} {1}L{2:.1f} {3:.1f}\" stroke=\"#0b4f79\" stroke-width=\"2.5\"/>\n", kFoot,
                      kSurface, tip_x, tip_y);
  rays += fmt::format(
      "<path d=\"M{0:.1f} {1:.1f}l-2 13m2-13l-12 6\" fill=\"none\" stroke=\"#0b4f79\" stroke-width=\"2.5\"/>\n", tip_x,
      tip_y);
  rays += fmt::format("<path d=\"M40 34L{0} {1}\" stroke=\"#c0560c\" stroke-width=\"2\" stroke-dasharray=\"7 4\"/>\n",
                      kFoot - 10.0, kSurface - 6.0);
  rays += fmt::format("<path d=\"M{0} {1}l-13 1m13-1l-7-11\" fill=\"none\" stroke=\"#c0560c\" stroke-width=\"2\"/>\n",
                      kFoot - 4.0, kSurface - 3.0);
  rays += arc(56.0, 0.0, kEmissionDeg) + arc(84.0, kEmissionDeg, 90.0);
  rays += text(kFoot - 8.0, 22.0, "surface normal", " text-anchor=\"end\"");
  rays += text(tip_x + 10.0, tip_y + 4.0, "electrons to the analyser");
  rays += text(kFoot + 5.0, kSurface - 66.0, "emission");
  rays += text(kFoot + 90.0, kSurface - 28.0, "take-off angle, from the plane");
  rays += text(14.0, 28.0, "X-rays");
  const std::string about =
      "Layers of the sample; the emission angle counts from the surface normal, the take-off angle from the surface "
      "plane";
  return fmt::format(
      "<svg xmlns=\"http://www.w3.org/2000/svg\" viewBox=\"0 0 {0:.0f} {1:.0f}\" width=\"{0:.0f}\" height=\"{1:.0f}\" "
      "role=\"img\" aria-label=\"{2}\" "
      "font-family=\"Helvetica, Arial, 'DejaVu Sans', sans-serif\" font-size=\"13\" "
      "fill=\"#17222b\">\n<title>{2}</title>\n{3}{4}</svg>\n",
      kWidth, y + 8.0, about, layers, rays);
}

}  // namespace pellicle::detail
