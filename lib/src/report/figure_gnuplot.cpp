// Writes figures as gnuplot scripts. Numbers go through inline data blocks. Text from outside stands between single
// quotes alone: there gnuplot expands neither backquotes nor backslashes nor macros, and '' is the only escape.

#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <cctype>
#include <cmath>

#include "pellicle/report/figure.hpp"
#include "report/wording.hpp"

namespace pellicle {
namespace {

using detail::printable;
using detail::shortened;

constexpr std::array kColours = {"#0b4f79", "#c0560c", "#5d7f1f", "#7a3f86", "#17222b"};

std::string quoted(std::string_view text, std::size_t most = 120) {
  std::string result = "'";
  for (const char c : shortened(printable(text), most)) {
    if (c == '\'') result += '\'';
    result += c;
  }
  return result + "'";
}

/// Name at a tick: gnuplot takes it for a format, so that % must be doubled.
std::string tick_name(std::string_view text, std::size_t most) {
  std::string doubled;
  for (const char c : shortened(printable(text), most)) {
    if (c == '%') doubled += '%';
    doubled += c;
  }
  return quoted(doubled, 4 * most);
}

std::string names(const std::vector<std::string>& all, std::size_t most) {
  std::string list;
  for (std::size_t i = 0; i < all.size(); ++i)
    list += fmt::format("{}{} {}", i == 0 ? "" : ", ", tick_name(all[i], most), i);
  return list;
}

int point_type(Marker marker) {
  switch (marker) {
    case Marker::disc:
      return 7;
    case Marker::ring:
      return 6;
    case Marker::square:
      return 5;
    case Marker::diamond:
      return 13;
    case Marker::triangle:
      return 9;
    case Marker::cross:
      break;
  }
  return 2;
}

std::string terminal_line(const Figure& figure, PlotFormat format, int columns, int rows) {
  const int bars = static_cast<int>(figure.y.names.size());
  const int height = figure.y.names.empty() ? 540 : std::min(200 + 40 * bars, 4000);
  switch (format) {
    case PlotFormat::svg:
      return fmt::format(
          "set terminal svg noenhanced size 860,{} font 'Helvetica,Arial,sans-serif,14' background rgb 'white'\n",
          height);
    case PlotFormat::png:
      return fmt::format(
          "set terminal pngcairo noenhanced size 1720,{} fontscale 1.0 font 'sans,24' linewidth 2 pointscale 2 "
          "background rgb 'white'\n",
          2 * height);
    case PlotFormat::pdf:
      return fmt::format("set terminal pdfcairo noenhanced size 18cm,{:.1f}cm font 'sans,10' background rgb 'white'\n",
                         18.0 * height / 860.0);
    case PlotFormat::terminal:
      break;
  }
  return fmt::format("set terminal dumb nofeed noenhanced mono size {},{}\n", std::clamp(columns, 40, 400),
                     std::clamp(rows, 16, 200));
}

/// One element of the plot command, and the data block it reads.
struct Plots {
  std::string blocks, commands;
  std::size_t count = 0;

  void add(const std::string& data, const std::string& how) {
    const std::string name = fmt::format("$data{}", count++);
    blocks += name + " << END\n" + data + "END\n";
    commands += (commands.empty() ? "plot " : ", \\\n     ") + name + " " + how;
  }
};

std::string title_of(const std::string& name) { return name.empty() ? " notitle" : " title " + quoted(name); }

double shifted(const Figure& figure, const PointSeries& s, double x) {
  return x + s.shift * (figure.x.high - figure.x.low);
}

void add_points(const Figure& figure, Plots& plots) {
  const double arrow = 0.07 * (figure.y.high - figure.y.low);
  for (std::size_t i = 0; i < figure.points.size(); ++i) {
    const PointSeries& s = figure.points[i];
    const std::string colour = fmt::format("lc rgb '{}'", kColours[i % kColours.size()]);
    std::string marks, thin, thick, arrows;
    for (const FigurePoint& p : s.points) {
      const double x = shifted(figure, s, p.x);
      marks += fmt::format("{} {}\n", x, p.y);
      if (p.interval) thin += fmt::format("{} {} {} {}\n", x, p.y, p.interval->low95, p.interval->high95);
      if (p.inner) thick += fmt::format("{} {} 0 {}\n", x, p.inner->low95, p.inner->high95 - p.inner->low95);
      const double to = std::clamp(s.arrow == Arrow::down ? p.y - arrow : p.y + arrow, figure.y.low, figure.y.high);
      arrows += fmt::format("{} {} 0 {}\n", x, p.y, to - p.y);
    }
    if (s.arrow != Arrow::none) {
      plots.add(arrows, "using 1:2:3:4 with vectors head filled lw 2 " + colour + title_of(s.name));
      continue;
    }
    if (!thick.empty()) plots.add(thick, "using 1:2:3:4 with vectors nohead lw 5 " + colour + " notitle");
    const double size = s.points.size() > 60 ? 0.6 : 1.1;
    const std::string point = fmt::format(" pt {} ps {} {}", point_type(s.marker), size, colour);
    if (thin.empty()) {
      plots.add(marks, "using 1:2 with points lw 2" + point + title_of(s.name));
    } else {
      plots.add(thin, "using 1:2:3:4 with yerrorbars lw 1.5" + point + title_of(s.name));
    }
  }
}

void add_bars(const Figure& figure, Plots& plots) {
  for (const BarSeries& s : figure.bars) {
    std::string data;
    for (const FigureBar& b : s.bars) {
      data += fmt::format("{} {} {} {} {} {}\n", b.length, b.y, std::min(0.0, b.length), std::max(0.0, b.length),
                          b.y - 0.3, b.y + 0.3);
    }
    const std::string fill = s.fill == Fill::solid ? "fillstyle solid 1.0 border" : "fillstyle pattern 4 border";
    plots.add(data, fmt::format("using 1:2:3:4:5:6 with boxxyerror {} lw 1.5 lc rgb '{}'{}", fill,
                                kColours[s.fill == Fill::solid ? 0 : 1], title_of(s.name)));
  }
}

void add_bands_and_lines(const Figure& figure, Plots& plots) {
  for (const FigureBand& band : figure.bands) {
    plots.add(fmt::format("{0} {2} {3}\n{1} {2} {3}\n", figure.x.low, figure.x.high, band.low, band.high),
              "using 1:2:3 with filledcurves fc rgb '#e3eaee' fs solid border lc rgb '#55636d'" + title_of(band.name));
  }
  for (const FigureLine& line : figure.lines) {
    const std::string data = line.vertical ? fmt::format("{0} {1}\n{0} {2}\n", line.at, figure.y.low, figure.y.high)
                                           : fmt::format("{1} {0}\n{2} {0}\n", line.at, figure.x.low, figure.x.high);
    plots.add(data, std::string("using 1:2 with lines lw 1.5 lc rgb '#17222b' dt ") + (line.vertical ? "2" : "1") +
                        title_of(line.name));
  }
}

/// On a terminal everything is a row or column of one character.
class CharacterPlots {
 public:
  CharacterPlots(const Figure& figure, int columns, int rows, Plots& plots) : figure_(figure), plots_(plots) {
    // Finer than one character, so that no gap is left.
    step_x_ = 0.5 * std::abs(figure.x.high - figure.x.low) / columns;
    step_y_ = 0.5 * std::abs(figure.y.high - figure.y.low) / rows;
  }

  void add_all() {
    for (const FigureBand& band : figure_.bands) {
      add(horizontal(band.low, figure_.x.low, figure_.x.high) + horizontal(band.high, figure_.x.low, figure_.x.high),
          '.', band.name);
    }
    for (const FigureLine& line : figure_.lines) {
      if (line.vertical)
        add(vertical(line.at, figure_.y.low, figure_.y.high), ':', line.name);
      else
        add(horizontal(line.at, figure_.x.low, figure_.x.high), '-', line.name);
    }
    for (const BarSeries& s : figure_.bars) {
      std::string data;
      for (const FigureBar& b : s.bars) data += horizontal(b.y, std::min(0.0, b.length), std::max(0.0, b.length));
      add(data, s.fill == Fill::solid ? '#' : '/', s.name);
    }
    std::string intervals;
    for (const PointSeries& s : figure_.points) {
      for (const FigurePoint& p : s.points) {
        if (p.interval) intervals += vertical(shifted(figure_, s, p.x), p.interval->low95, p.interval->high95);
      }
    }
    if (!intervals.empty()) add(intervals, '|', "");
    for (const PointSeries& s : figure_.points) {
      std::string data;
      for (const FigurePoint& p : s.points) data += fmt::format("{} {}\n", shifted(figure_, s, p.x), p.y);
      add(data, s.arrow == Arrow::down ? 'v' : s.arrow == Arrow::up ? '^' : character(s.marker), s.name);
    }
  }

 private:
  static char character(Marker marker) {
    switch (marker) {
      case Marker::disc:
        return 'o';
      case Marker::ring:
        return 'O';
      case Marker::square:
        return 'H';
      case Marker::diamond:
        return 'V';
      case Marker::triangle:
        return 'A';
      case Marker::cross:
        break;
    }
    return 'x';
  }
  std::string horizontal(double y, double from, double to) const {
    std::string data;
    for (double x = from; x <= to; x += step_x_) data += fmt::format("{} {}\n", x, y);
    return data;
  }
  std::string vertical(double x, double from, double to) const {
    std::string data;
    for (double y = std::min(from, to); y <= std::max(from, to); y += step_y_) data += fmt::format("{} {}\n", x, y);
    return data;
  }
  void add(const std::string& data, char mark, const std::string& name) {
    plots_.add(data, fmt::format("using 1:2 with points pt '{}'{}", mark, title_of(name)));
  }

  const Figure& figure_;
  Plots& plots_;
  double step_x_, step_y_;
};

Figure with_european_text(Figure figure) {
  for (std::string* text : {&figure.title, &figure.subtitle, &figure.x.label, &figure.y.label})
    *text = detail::european(*text);
  for (FigureAxis* axis : {&figure.x, &figure.y}) {
    for (std::string& name : axis->names) name = detail::european(name);
  }
  for (PointSeries& s : figure.points) s.name = detail::european(s.name);
  for (FigureText& t : figure.texts) t.text = detail::european(t.text);
  return figure;
}

/// Names along the horizontal axis: flat where they fit, tilted where not; counted where neither is possible.
std::string name_ticks(const Figure& figure, bool terminal, int columns) {
  constexpr std::size_t kTilted = 18;
  const std::size_t count = figure.x.names.size();
  const std::size_t room = static_cast<std::size_t>(terminal ? std::max(columns - 14, 20) : 92) / count;
  std::size_t longest = 0;
  for (const std::string& name : figure.x.names) longest = std::max(longest, detail::characters(printable(name)));
  if (longest < room) return "set xtics (" + names(figure.x.names, room) + ")\n";
  if (!terminal) return "set xtics rotate by 50 right (" + names(figure.x.names, kTilted) + ")\n";
  if (room >= 12) return "set xtics (" + names(figure.x.names, room - 2) + ")\n";
  std::string numbers;
  const std::size_t step = 1 + 4 * count / static_cast<std::size_t>(columns);
  for (std::size_t i = 0; i < count; i += step) numbers += fmt::format("{}'{}' {}", i == 0 ? "" : ", ", i + 1, i);
  return "set xlabel 'spot, by its position in the table'\nset xtics (" + numbers + ")\n";
}

std::string axis_lines(const Figure& figure, bool terminal, int columns) {
  std::string text;
  const std::size_t most = terminal ? 24 : 32;
  text += "set xlabel " + quoted(figure.x.text()) + (terminal ? "" : " offset 0,0.6") + "\n";
  if (figure.y.names.empty()) text += "set ylabel " + quoted(figure.y.text()) + "\n";
  text +=
      fmt::format("set xrange [{}:{}]\nset yrange [{}:{}]\n", figure.x.low, figure.x.high, figure.y.low, figure.y.high);
  if (!figure.x.names.empty()) text += name_ticks(figure, terminal, columns);
  if (!figure.y.names.empty()) text += "set ytics (" + names(figure.y.names, most) + ")\n";
  return text;
}

}  // namespace

std::optional<PlotFormat> plot_format(std::string_view path) {
  const std::size_t dot = path.find_last_of("./");
  if (dot == std::string_view::npos || path[dot] != '.') return std::nullopt;
  std::string extension(path.substr(dot + 1));
  std::transform(extension.begin(), extension.end(), extension.begin(),
                 [](unsigned char c) { return static_cast<char>(std::tolower(c)); });
  if (extension == "svg") return PlotFormat::svg;
  if (extension == "png") return PlotFormat::png;
  if (extension == "pdf") return PlotFormat::pdf;
  return std::nullopt;
}

std::string gnuplot_script(const Figure& original, PlotFormat format, int columns, int rows) {
  // Where a font lacks a character, the cairo terminals draw a box as large as the picture.
  const bool cairo = format == PlotFormat::png || format == PlotFormat::pdf;
  const Figure figure = cairo ? with_european_text(original) : original;
  const bool terminal = format == PlotFormat::terminal;
  columns = std::clamp(columns, 40, 400);
  rows = std::clamp(rows, 16, 200);
  std::string script = "set encoding utf8\n" + terminal_line(figure, format, columns, rows);
  script += "set title " + quoted(figure.title, terminal ? static_cast<std::size_t>(columns) - 4 : 92);
  if (!figure.subtitle.empty() && !terminal) script += ".\"\\n\"." + quoted(figure.subtitle, 92);
  script += "\n" + axis_lines(figure, terminal, columns);
  script +=
      "set border 3\nset tics nomirror out\nset key below left reverse Left width 1 height 1\nset bars 0.6\nset "
      "pointintervalbox 0\n";
  for (const FigureText& t : figure.texts) {
    script += fmt::format("set label {} at {},{} left offset 1,0\n", quoted(t.text), t.x, t.y);
  }
  Plots plots;
  if (terminal) {
    CharacterPlots(figure, columns, rows, plots).add_all();
  } else {
    script +=
        figure.points.empty() ? "set grid xtics lc rgb '#dde4e8' lt 1\n" : "set grid ytics lc rgb '#dde4e8' lt 1\n";
    add_bands_and_lines(figure, plots);
    add_bars(figure, plots);
    add_points(figure, plots);
  }
  // A figure without data still has its axes.
  if (plots.count == 0) plots.add("0 0\n", "using (NaN):2 notitle");
  return script + plots.blocks + plots.commands + "\n";
}

}  // namespace pellicle
