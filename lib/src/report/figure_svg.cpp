// Draws figures as SVG. Coordinates are pixels of a canvas of fixed width; y grows downward.

#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <cmath>
#include <functional>

#include "pellicle/report/figure.hpp"
#include "report/wording.hpp"

namespace pellicle {
namespace {

using detail::characters;
using detail::escaped;
using detail::printable;
using detail::shortened;

constexpr double kWidth = 860.0;
constexpr double kRight = 26.0;
constexpr double kTickSize = 13.0;
constexpr double kTextSize = 14.0;
constexpr double kTitleSize = 17.0;
constexpr double kRowHeight = 21.0;
constexpr double kKeySymbol = 34.0;
constexpr double kPlotHeight = 320.0;
constexpr double kMarkerRadius = 4.5;
constexpr double kBarPitch = 36.0;
constexpr const char* kInk = "#17222b";
constexpr const char* kSoft = "#55636d";
constexpr const char* kGrid = "#dde4e8";
constexpr const char* kBand = "#e3eaee";
/// Apart in lightness as well as in hue; the marker says the same once more.
constexpr std::array kColours = {"#0b4f79", "#c0560c", "#5d7f1f", "#7a3f86", "#17222b"};

/// Average width of a character, in units of the font size; measured on common sans-serif fonts, rounded up.
constexpr double kCharacterWidth = 0.56;

double text_width(std::string_view text, double size) {
  return static_cast<double>(characters(text)) * size * kCharacterWidth;
}

std::size_t fitting(double width, double size) {
  return static_cast<std::size_t>(std::max(4.0, width / (size * kCharacterWidth)));
}

/// Coordinate to a tenth of a pixel.
std::string px(double value) {
  std::string text = fmt::format("{:.1f}", value);
  if (text.ends_with(".0")) text.resize(text.size() - 2);
  return text == "-0" ? "0" : text;
}

std::string words(double x, double y, std::string_view text, double size, const char* more = "") {
  return fmt::format("<text x=\"{}\" y=\"{}\" font-size=\"{}\"{}>{}</text>\n", px(x), px(y), size, more, escaped(text));
}

constexpr const char* kMiddle = " text-anchor=\"middle\"";
constexpr const char* kEnd = " text-anchor=\"end\"";

struct Ticks {
  std::vector<double> values;
  int decimals = 0;
};

/// Round numbers within an axis, about `about` of them.
Ticks round_ticks(double low, double high, int about) {
  Ticks ticks;
  const double span = high - low;
  if (!(span > 0.0) || !std::isfinite(span)) return ticks;
  const double rough = span / about;
  const double power = std::pow(10.0, std::floor(std::log10(rough)));
  const double lead = rough / power;
  const double step = power * (lead < 1.5 ? 1.0 : lead < 3.5 ? 2.0 : lead < 7.5 ? 5.0 : 10.0);
  ticks.decimals = std::max(0, -static_cast<int>(std::floor(std::log10(step) + 1e-9)));
  for (double k = std::ceil(low / step - 1e-9); k * step <= high + 1e-9 * span; k += 1.0)
    ticks.values.push_back(k * step);
  return ticks;
}

std::string tick_words(double value, int decimals) {
  std::string text = fmt::format("{:.{}f}", value == 0.0 ? 0.0 : value, decimals);
  if (text.starts_with('-')) text.replace(0, 1, "−");
  return text;
}

/// The rectangle in which data are drawn.
struct Area {
  const Figure& figure;
  double left, top, width, height;

  double x(double value) const { return left + (value - figure.x.low) / (figure.x.high - figure.x.low) * width; }
  double y(double value) const {
    return top + height - (value - figure.y.low) / (figure.y.high - figure.y.low) * height;
  }
  double right() const { return left + width; }
  double bottom() const { return top + height; }
  double inside_y(double value) const { return std::clamp(y(value), top, bottom()); }
};

/// Outline of a marker, to be appended to the path of its series. @param r half its size
std::string marker_path(Marker marker, double x, double y, double r) {
  switch (marker) {
    case Marker::square:
      return fmt::format("M{0} {1}h{2}v{2}h-{2}z", px(x - 0.9 * r), px(y - 0.9 * r), px(1.8 * r));
    case Marker::diamond:
      return fmt::format("M{0} {1}l{2} {2} -{2} {2} -{2} -{2}z", px(x), px(y - 1.2 * r), px(1.2 * r));
    case Marker::triangle:
      return fmt::format("M{} {}l{} {}h-{}z", px(x), px(y - 1.2 * r), px(1.1 * r), px(2.0 * r), px(2.2 * r));
    case Marker::cross:
      return fmt::format("M{0} {1}l{2} {2}m0-{2}l-{2} {2}", px(x - 0.9 * r), px(y - 0.9 * r), px(1.8 * r));
    case Marker::disc:
    case Marker::ring:
      break;
  }
  return fmt::format("M{0} {1}a{2} {2} 0 1 0 {3} 0a{2} {2} 0 1 0-{3} 0", px(x - r), px(y), px(r), px(2.0 * r));
}

std::string marker_style(Marker marker, const char* colour) {
  if (marker == Marker::cross) return fmt::format("fill=\"none\" stroke=\"{}\" stroke-width=\"2\"", kInk);
  if (marker == Marker::ring) return fmt::format("fill=\"#fff\" stroke=\"{}\" stroke-width=\"2\"", colour);
  return fmt::format("fill=\"{}\"", colour);
}

/// A bar across the bound and an arrow away from it.
std::string arrow_path(Arrow arrow, double x, double y, double length) {
  const double sign = arrow == Arrow::down ? 1.0 : -1.0;
  const double tip = y + sign * length;
  return fmt::format("M{} {}h12M{} {}V{}M{} {}L{} {}L{} {}", px(x - 6), px(y), px(x), px(y), px(tip), px(x - 4.5),
                     px(tip - sign * 7), px(x), px(tip), px(x + 4.5), px(tip - sign * 7));
}

std::string path(const std::string& outline, const std::string& style) {
  return outline.empty() ? "" : "<path d=\"" + outline + "\" " + style + "/>\n";
}

std::string stroke(const char* colour, double width) {
  return fmt::format("fill=\"none\" stroke=\"{}\" stroke-width=\"{}\"", colour, width);
}

/// Rectangle with its fill; hatching is drawn line by line, because a pattern needs an id and a page may hold several
/// figures.
std::string bar(double x, double y, double width, double height, Fill fill) {
  const char* colour = fill == Fill::solid ? kColours[0] : kColours[1];
  std::string svg = fmt::format(
      "<rect x=\"{}\" y=\"{}\" width=\"{}\" height=\"{}\" fill=\"{}\" stroke=\"{}\" stroke-width=\"1.5\"/>\n", px(x),
      px(y), px(width), px(height), fill == Fill::solid ? colour : "#fff", colour);
  if (fill == Fill::solid) return svg;
  std::string lines;
  constexpr double kPitch = 7.0;
  for (double offset = kPitch; offset < width + height; offset += kPitch) {
    // From the upper or right edge down to the left or lower one.
    const double x1 = std::min(offset, width), y1 = offset - x1;
    const double y2 = std::min(offset, height), x2 = offset - y2;
    lines += fmt::format("M{} {}L{} {}", px(x + x1), px(y + y1), px(x + x2), px(y + y2));
  }
  return svg + path(lines, stroke(colour, 1.5));
}

struct KeyEntry {
  std::string text;
  std::function<std::string(double x, double y)> symbol;  ///< drawn from x to x + kKeySymbol, about y
};

std::vector<KeyEntry> key_of(const Figure& figure) {
  std::vector<KeyEntry> key;
  for (std::size_t i = 0; i < figure.points.size(); ++i) {
    const PointSeries& s = figure.points[i];
    const char* colour = kColours[i % kColours.size()];
    const bool bars =
        std::any_of(s.points.begin(), s.points.end(), [](const FigurePoint& p) { return p.interval.has_value(); });
    key.push_back({s.name, [&s, colour, bars](double x, double y) {
                     const double middle = x + 13;
                     if (s.arrow != Arrow::none) {
                       return path(arrow_path(s.arrow, middle, s.arrow == Arrow::down ? y - 7 : y + 7, 14),
                                   stroke(colour, 2));
                     }
                     std::string svg;
                     if (bars)
                       svg = path(fmt::format("M{} {}v16m-4 0h8m-8-16h8", px(middle), px(y - 8)), stroke(colour, 1.5));
                     return svg + path(marker_path(s.marker, middle, y, kMarkerRadius), marker_style(s.marker, colour));
                   }});
  }
  for (const FigureLine& line : figure.lines) {
    if (line.name.empty()) continue;
    key.push_back({line.name, [&line](double x, double y) {
                     const std::string outline = line.vertical ? fmt::format("M{} {}v16", px(x + 13), px(y - 8))
                                                               : fmt::format("M{} {}h26", px(x), px(y));
                     return path(outline, stroke(kInk, 1.5) + (line.vertical ? " stroke-dasharray=\"5 4\"" : ""));
                   }});
  }
  for (const FigureBand& band : figure.bands) {
    key.push_back({band.name, [](double x, double y) {
                     return fmt::format(
                         "<rect x=\"{}\" y=\"{}\" width=\"26\" height=\"12\" fill=\"{}\" stroke=\"{}\" "
                         "stroke-dasharray=\"2 3\"/>\n",
                         px(x), px(y - 6), kBand, kSoft);
                   }});
  }
  for (const BarSeries& s : figure.bars) {
    key.push_back({s.name, [&s](double x, double y) { return bar(x, y - 6, 26, 12, s.fill); }});
  }
  return key;
}

/// Entries of the key side by side, in as many rows as they need.
std::string draw_key(const std::vector<KeyEntry>& key, double left, double top, double& height) {
  std::string svg;
  double x = left;
  double y = top + 0.5 * kRowHeight;
  const double room = kWidth - kRight;
  for (const KeyEntry& entry : key) {
    const std::string text = shortened(printable(entry.text), fitting(room - left - kKeySymbol, kTickSize));
    const double width = kKeySymbol + text_width(text, kTickSize);
    if (x > left && x + width > room) {
      x = left;
      y += kRowHeight;
    }
    svg += entry.symbol(x, y) + words(x + kKeySymbol, y + 4.5, text, kTickSize);
    x += width + 18.0;
  }
  height = key.empty() ? 0.0 : y - top + 0.5 * kRowHeight;
  return svg;
}

std::string draw_bands_and_grid(const Figure& figure, const Area& area, const Ticks& x_ticks, const Ticks& y_ticks) {
  std::string svg, grid, edges;
  for (const FigureBand& band : figure.bands) {
    const double top = area.inside_y(band.high), bottom = area.inside_y(band.low);
    svg += fmt::format("<rect x=\"{}\" y=\"{}\" width=\"{}\" height=\"{}\" fill=\"{}\"/>\n", px(area.left), px(top),
                       px(area.width), px(bottom - top), kBand);
    edges += fmt::format("M{} {}H{}M{} {}H{}", px(area.left), px(top), px(area.right()), px(area.left), px(bottom),
                         px(area.right()));
  }
  for (const double v : y_ticks.values)
    grid += fmt::format("M{} {}H{}", px(area.left), px(area.y(v)), px(area.right()));
  if (figure.points.empty()) {
    for (const double v : x_ticks.values)
      grid += fmt::format("M{} {}V{}", px(area.x(v)), px(area.top), px(area.bottom()));
  }
  return svg + path(grid, stroke(kGrid, 1)) + path(edges, stroke(kSoft, 1) + " stroke-dasharray=\"2 3\"");
}

std::string draw_series(const PointSeries& s, const char* colour, const Area& area) {
  std::string thin, thick, markers;
  // Many points are drawn small, so that they stay apart.
  const double pitch = area.width / std::max(1.0, static_cast<double>(s.points.size()));
  const double radius = std::clamp(0.5 * pitch, 2.2, kMarkerRadius);
  for (const FigurePoint& p : s.points) {
    const double x = area.x(p.x) + s.shift * area.width, y = area.y(p.y);
    if (p.interval) {
      const double low = area.inside_y(p.interval->low95), high = area.inside_y(p.interval->high95);
      thin += fmt::format("M{} {}V{}", px(x), px(low), px(high));
      if (radius == kMarkerRadius) thin += fmt::format("M{} {}h8M{} {}h8", px(x - 4), px(low), px(x - 4), px(high));
    }
    if (p.inner)
      thick += fmt::format("M{} {}V{}", px(x), px(area.inside_y(p.inner->low95)), px(area.inside_y(p.inner->high95)));
    if (s.arrow != Arrow::none) {
      // An arrow stays within the picture; a bound near zero still shows its head.
      const double room = s.arrow == Arrow::down ? area.bottom() - y : y - area.top;
      markers += arrow_path(s.arrow, x, y, std::clamp(room, 12.0, 26.0));
    } else {
      markers += marker_path(s.marker, x, y, radius);
    }
  }
  const std::string style = s.arrow != Arrow::none ? stroke(colour, 2) : marker_style(s.marker, colour);
  return path(thin, stroke(colour, 1.5)) + path(thick, stroke(colour, 5)) + path(markers, style);
}

}  // namespace

std::string figure_svg(const Figure& figure) {
  const auto longest = [](const std::vector<std::string>& names) {
    double width = 0.0;
    for (const std::string& name : names) width = std::max(width, text_width(printable(name), kTickSize));
    return width;
  };
  constexpr double kLongestName = 250.0, kLongestTilted = 118.0;
  const bool named_y = !figure.y.names.empty();
  const Ticks y_ticks =
      named_y ? Ticks{} : round_ticks(std::min(figure.y.low, figure.y.high), std::max(figure.y.low, figure.y.high), 6);
  const Ticks x_ticks = figure.x.names.empty() ? round_ticks(std::min(figure.x.low, figure.x.high),
                                                             std::max(figure.x.low, figure.x.high), 8)
                                               : Ticks{};

  Area area{figure, 0.0, 0.0, 0.0, 0.0};
  area.left = named_y ? 22.0 + std::min(longest(figure.y.names), kLongestName) : 78.0;
  area.top = figure.subtitle.empty() ? 42.0 : 62.0;
  area.width = kWidth - kRight - area.left;
  area.height = named_y ? kBarPitch * static_cast<double>(figure.y.names.size()) : kPlotHeight;
  const double per_name = area.width / std::max(1.0, static_cast<double>(figure.x.names.size()));
  const bool tilted = longest(figure.x.names) > per_name - 8.0;
  constexpr double kTilt = 50.0, kRadian = 3.14159265358979 / 180.0;
  const double names_height =
      tilted ? 12.0 + std::min(longest(figure.x.names), kLongestTilted) * std::sin(kTilt * kRadian) : 20.0;
  const double label_y = area.bottom() + names_height + 20.0;

  std::string body = draw_bands_and_grid(figure, area, x_ticks, y_ticks);
  std::string frame = fmt::format("M{} {}V{}H{}", px(area.left), px(area.top), px(area.bottom()), px(area.right()));
  for (const FigureLine& line : figure.lines) {
    const std::string outline = line.vertical
                                    ? fmt::format("M{} {}V{}", px(area.x(line.at)), px(area.top), px(area.bottom()))
                                    : fmt::format("M{} {}H{}", px(area.left), px(area.y(line.at)), px(area.right()));
    body += path(outline, stroke(kInk, 1.5) + (line.vertical && !line.name.empty() ? " stroke-dasharray=\"5 4\"" : ""));
  }
  for (const BarSeries& series : figure.bars) {
    for (const FigureBar& b : series.bars) {
      const double from = area.x(std::min(0.0, b.length)), to = area.x(std::max(0.0, b.length));
      body += bar(from, area.y(b.y) - 11.0, to - from, 22.0, series.fill);
    }
  }
  for (std::size_t i = 0; i < figure.points.size(); ++i)
    body += draw_series(figure.points[i], kColours[i % kColours.size()], area);
  for (const FigureText& t : figure.texts) body += words(area.x(t.x) + 8.0, area.y(t.y) + 4.5, t.text, kTickSize);

  std::string ticks;
  for (const double v : y_ticks.values) {
    frame += fmt::format("M{} {}h-5", px(area.left), px(area.y(v)));
    ticks += words(area.left - 9.0, area.y(v) + 4.5, tick_words(v, y_ticks.decimals), kTickSize, kEnd);
  }
  for (std::size_t i = 0; i < figure.y.names.size(); ++i) {
    ticks += words(area.left - 9.0, area.y(static_cast<double>(i)) + 4.5,
                   shortened(printable(figure.y.names[i]), fitting(kLongestName, kTickSize)), kTickSize, kEnd);
  }
  for (const double v : x_ticks.values) {
    frame += fmt::format("M{} {}v5", px(area.x(v)), px(area.bottom()));
    ticks += words(area.x(v), area.bottom() + 19.0, tick_words(v, x_ticks.decimals), kTickSize, kMiddle);
  }
  for (std::size_t i = 0; i < figure.x.names.size(); ++i) {
    const double x = area.x(static_cast<double>(i));
    frame += fmt::format("M{} {}v5", px(x), px(area.bottom()));
    if (tilted) {
      const std::string turn =
          fmt::format(" text-anchor=\"end\" transform=\"rotate(-{} {} {})\"", kTilt, px(x + 4), px(area.bottom() + 16));
      ticks +=
          words(x + 4, area.bottom() + 16, shortened(printable(figure.x.names[i]), fitting(kLongestTilted, kTickSize)),
                kTickSize, turn.c_str());
    } else {
      ticks += words(x, area.bottom() + 19.0, printable(figure.x.names[i]), kTickSize, kMiddle);
    }
  }
  body += path(frame, stroke(kInk, 1.2)) + ticks;

  body += words(area.left + 0.5 * area.width, label_y, figure.x.text(), kTextSize, kMiddle);
  if (!named_y) {
    const double middle = area.top + 0.5 * area.height;
    const std::string turn = fmt::format(" text-anchor=\"middle\" transform=\"rotate(-90 22 {})\"", px(middle));
    body += words(22.0, middle, figure.y.text(), kTextSize, turn.c_str());
  }
  const double from = named_y ? 22.0 : area.left;
  const double room = kWidth - kRight - 22.0;
  body += words(22.0, 24.0, shortened(printable(figure.title), fitting(room, kTitleSize)), kTitleSize,
                " font-weight=\"bold\"");
  if (!figure.subtitle.empty()) {
    const std::string soft = fmt::format(" fill=\"{}\"", kSoft);
    body += words(22.0, 45.0, shortened(printable(figure.subtitle), fitting(room, kTextSize)), kTextSize, soft.c_str());
  }
  double key_height = 0.0;
  body += draw_key(key_of(figure), from, label_y + 14.0, key_height);
  const double height = label_y + 14.0 + key_height + 10.0;

  return fmt::format(
      "<svg xmlns=\"http://www.w3.org/2000/svg\" viewBox=\"0 0 {0} {1}\" width=\"{0}\" height=\"{1}\" role=\"img\" "
      "aria-label=\"{2}\" font-family=\"Helvetica, Arial, 'DejaVu Sans', sans-serif\" fill=\"{3}\">\n"
      "<title>{2}</title>\n<desc>{4}</desc>\n<rect width=\"{0}\" height=\"{1}\" fill=\"#fff\"/>\n{5}</svg>\n",
      px(kWidth), px(std::ceil(height)), escaped(figure.title), kInk, escaped(figure.caption), body);
}

}  // namespace pellicle
