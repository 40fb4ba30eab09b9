#pragma once
/// A picture as data: what is drawn and with which words, not how. One figure is drawn by figure_svg() in reports, by
/// gnuplot for the command, and from figure_json() by anything else.
///
/// What differs is told apart by shape, size or pattern, so that a grey print says as much as a coloured one.

#include <cstddef>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "pellicle/job/run.hpp"
#include "pellicle/job/thickness_job.hpp"
#include "pellicle/uncertainty/quantity.hpp"

namespace pellicle {

/// Shape of a point.
enum class Marker { disc, ring, square, diamond, triangle, cross };
/// Where a bound points: the true value lies on that side.
enum class Arrow { none, down, up };
/// Inside of a bar.
enum class Fill { solid, hatched };

struct FigureAxis {
  std::string label;               ///< "thickness"
  std::string unit;                ///< "nm"; empty for names and counts
  double low = 0.0, high = 1.0;    ///< left or lower end, right or upper end; low > high turns the axis around
  std::vector<std::string> names;  ///< of the positions 0, 1, 2, …; empty: an axis of numbers

  /// "thickness (nm)"
  [[nodiscard]] std::string text() const;
};

struct FigurePoint {
  double x = 0.0, y = 0.0;
  std::optional<Interval> interval = std::nullopt;  ///< thin bar with caps
  std::optional<Interval> inner = std::nullopt;     ///< thick bar within it
};

struct PointSeries {
  std::string name;  ///< for the key
  Marker marker = Marker::disc;
  Arrow arrow = Arrow::none;
  std::vector<FigurePoint> points;
  double shift = 0.0;  ///< sidestep when drawn, as a part of the axis, so that series do not hide one another
};

/// Horizontal, from zero.
struct FigureBar {
  double y = 0.0, length = 0.0;
};

struct BarSeries {
  std::string name;
  Fill fill = Fill::solid;
  std::vector<FigureBar> bars;
};

struct FigureLine {
  bool vertical = false;
  double at = 0.0;
  std::string name;  ///< for the key; empty: none
};

/// Horizontal stripe behind everything else.
struct FigureBand {
  double low = 0.0, high = 0.0;
  std::string name;
};

/// Words that begin at a place in the picture.
struct FigureText {
  double x = 0.0, y = 0.0;
  std::string text;
};

struct Figure {
  std::string title;
  std::string subtitle;
  std::string caption;  ///< what the picture shows, in words; also for those who cannot see it
  FigureAxis x, y;
  std::vector<FigureBand> bands;
  std::vector<FigureLine> lines;
  std::vector<BarSeries> bars;
  std::vector<PointSeries> points;
  std::vector<FigureText> texts;
};

/// Thickness with 95 % intervals, by spot, or against the emission angle when there are several; bounds as arrows,
/// mean and thickness scale of a single route. Beyond 60 results only what tells them apart, their repeatability, is
/// drawn at each; beyond 400 successive ones are drawn together.
/// @param route position in ThicknessResults::routes; nothing: all routes in one picture
[[nodiscard]] Figure thickness_figure(const Run& run, const ThicknessResults& results,
                                      std::optional<std::size_t> route = std::nullopt);

/// Budget of one result: the share of each input in the variance, largest first. Inputs below 0.1 % are left out.
/// @param result position in ThicknessResults::results, which must have a thickness
/// @throws InputError when it has none
[[nodiscard]] Figure budget_figure(const Run& run, const ThicknessResults& results, std::size_t result);

/// The picture that says most: the budget of a single result, else the thicknesses.
[[nodiscard]] Figure result_figure(const Run& run, const ThicknessResults& results);

/// The figure as a whole SVG document without references to anything outside.
[[nodiscard]] std::string figure_svg(const Figure& figure);

/// The figure as JSON, schema "pellicle.figure/1".
[[nodiscard]] std::string figure_json(const Figure& figure);

/// What gnuplot can draw a figure as.
enum class PlotFormat { svg, png, pdf, terminal };

/// Format of a file by its extension, .svg, .png or .pdf; nothing for any other.
[[nodiscard]] std::optional<PlotFormat> plot_format(std::string_view path);

/// A script for `gnuplot --default-settings` that sends the picture to its standard output. It names no file, because
/// gnuplot takes some names for commands; no text of the figure can end its quotes. PNG and PDF show scripts beyond the
/// European ones as question marks, SVG shows all.
/// @param columns, rows size of the terminal, for PlotFormat::terminal
[[nodiscard]] std::string gnuplot_script(const Figure& figure, PlotFormat format, int columns = 79, int rows = 24);

}  // namespace pellicle
