#include "pellicle/report/figure.hpp"

#include <algorithm>
#include <cmath>
#include <cstdlib>
#include <nlohmann/json.hpp>
#include <string>

#include "pellicle/base/error.hpp"
#include "support/check_rows.hpp"
#include "support/close_to.hpp"
#include "support/markup.hpp"
#include "support/sample_run.hpp"
#include "support/scratch_folder.hpp"

using namespace pellicle;
using test::area;
using test::close_to;
using test::contains;
using test::count_of;
using test::rel;
using test::silica_run;

namespace {

constexpr double kNormal95 = 1.959963984540054;
const std::string kHostile = "it's \"x\" `touch hit` $(touch hit) $HOME @m {/Symbol a} 100 % \\n a_b^c <script>\nnext";

/// `count` spots on silica, a smooth trend of areas. Invented.
Run many_spots(std::size_t count) {
  Run run = silica_run();
  run.area_unit = AreaUnit::counts;
  run.lines[1].length_nm["oxide"] = Quantity(3.448, 0.1);
  run.references[0].ratio = Quantity(0.9329, 0.02);
  run.areas.clear();
  for (std::size_t i = 0; i < count; ++i) {
    const std::string spot = "s" + std::to_string(i + 1);
    run.areas.push_back(area(spot, "Si 2p oxide", 20000.0 + 40.0 * std::sin(static_cast<double>(i))));
    run.areas.push_back(area(spot, "Si 2p metal", 10000.0));
  }
  return run;
}

/// One spot of silica at several emission angles.
Run many_angles(const std::vector<double>& angles) {
  Run run = many_spots(0);
  for (const double angle : angles) {
    run.areas.push_back(area("1", "Si 2p oxide", 20000.0));
    run.areas.back().emission_deg = angle;
    run.areas.push_back(area("1", "Si 2p metal", 10000.0));
    run.areas.back().emission_deg = angle;
  }
  return run;
}

/// A spot each with a thickness, an upper bound, a lower bound and nothing at all.
Run bounds_run() {
  Run run = many_spots(4);
  for (AreaRow& row : run.areas) row.counting.background_counts = 900.0;
  run.areas[2].area.reset();
  run.areas[5].area.reset();
  run.areas.pop_back();
  return run;
}

const PointSeries* with_arrow(const Figure& figure, Arrow arrow) {
  const auto found =
      std::find_if(figure.points.begin(), figure.points.end(), [&](const auto& s) { return s.arrow == arrow; });
  return found == figure.points.end() ? nullptr : &*found;
}

const PointSeries* with_marker(const Figure& figure, Marker marker) {
  const auto found = std::find_if(figure.points.begin(), figure.points.end(),
                                  [&](const auto& s) { return s.arrow == Arrow::none && s.marker == marker; });
  return found == figure.points.end() ? nullptr : &*found;
}

/// A script with everything between single quotes taken out.
std::string outside_quotes(const std::string& script) {
  std::string outside;
  bool inside = false;
  for (const char c : script) {
    if (c == '\'')
      inside = !inside;
    else if (!inside)
      outside += c;
  }
  CHECK_FALSE(inside);
  return outside;
}

bool gnuplot_there() {
  static const bool there = std::system("gnuplot --version >/dev/null 2>&1") == 0;  // NOLINT(concurrency-mt-unsafe)
  return there;
}

/// What gnuplot sends to its output; it runs in the folder, so that whatever a script could write lands there.
std::string drawn(const test::ScratchFolder& folder, const std::string& script) {
  folder.write("script", script);
  const std::string command = "cd '" + folder.path() + "' && gnuplot --default-settings <script >out 2>err";
  const int status = std::system(command.c_str());  // NOLINT(concurrency-mt-unsafe)
  CHECK_MESSAGE(status == 0, test::read_whole_file(folder.file("err")));
  return test::read_whole_file(folder.file("out"));
}

}  // namespace

TEST_SUITE("figure") {

TEST_CASE("thickness by spot holds every value with its interval and the mean with the scale") {
  const Run run = many_spots(3);
  const ThicknessResults all = run_thickness(run);
  const Figure f = thickness_figure(run, all);
  CHECK(f.y.text() == "thickness (nm)");
  CHECK(f.x.names == std::vector<std::string>{"s1", "s2", "s3"});
  REQUIRE(f.points.size() == 1);
  REQUIRE(f.points[0].points.size() == 3);
  for (std::size_t i = 0; i < 3; ++i) {
    const FigurePoint& p = f.points[0].points[i];
    const ThicknessResult& r = all.results[i];
    CHECK(p.x == static_cast<double>(i));
    CHECK(p.y == r.thickness->value_nm);
    REQUIRE(p.interval.has_value());
    CHECK(p.interval->low95 == r.interval_nm().low95);
    CHECK(p.interval->high95 == r.interval_nm().high95);
    REQUIRE(p.inner.has_value());
    CHECK(close_to(p.inner->high95 - p.y, kNormal95 * r.thickness->budget.repeatability, rel(1e-9)));
    CHECK(p.interval->low95 > f.y.low);
    CHECK(p.interval->high95 < f.y.high);
  }
  REQUIRE(f.lines.size() == 1);
  CHECK(f.lines[0].at == all.summaries[0].mean_nm);
  REQUIRE(f.bands.size() == 1);
  CHECK(close_to(f.bands[0].high - f.bands[0].low, 2.0 * kNormal95 * all.summaries[0].scale_nm, rel(1e-12)));
  CHECK(contains(f.caption, "3 thicknesses against the spot"));
}

TEST_CASE("an axis of thickness begins at zero unless all lies far above") {
  Run run = many_spots(2);
  run.lines[1].length_nm["oxide"] = Quantity(3.448, 0.5);
  CHECK(thickness_figure(run, run_thickness(run)).y.low == 0.0);
  run.lines[1].length_nm["oxide"] = Quantity(3.448, 0.05);
  CHECK(thickness_figure(run, run_thickness(run)).y.low > 2.0);
}

TEST_CASE("a scale that is not stated has no band and says so") {
  Run run = many_spots(2);
  run.lines[1].length_nm["oxide"] = 3.448;
  const Figure f = thickness_figure(run, run_thickness(run));
  CHECK(f.bands.empty());
  REQUIRE(f.lines.size() == 1);
  CHECK(contains(f.lines[0].name, "thickness scale not stated"));
}

TEST_CASE("several angles of one film are drawn against the emission angle") {
  const Run run = many_angles({0.0, 30.0, 45.0, 65.0});
  const Figure f = thickness_figure(run, run_thickness(run));
  CHECK(f.x.text() == "emission angle from the surface normal (°)");
  CHECK(f.x.names.empty());
  REQUIRE(f.points.size() == 1);
  std::vector<double> angles;
  for (const FigurePoint& p : f.points[0].points) angles.push_back(p.x);
  CHECK(angles == std::vector<double>{0.0, 30.0, 45.0, 65.0});
  CHECK(std::any_of(f.lines.begin(), f.lines.end(), [](const FigureLine& l) { return l.vertical && l.at == 60.0; }));
  const Run steep = many_angles({0.0, 45.0});
  for (const FigureLine& l : thickness_figure(steep, run_thickness(steep)).lines) CHECK_FALSE(l.vertical);
}

TEST_CASE("bounds are arrows toward the truth and a failure is a cross at the foot") {
  const Run run = bounds_run();
  const ThicknessResults all = run_thickness(run);
  const Figure f = thickness_figure(run, all);
  const PointSeries* upper = with_arrow(f, Arrow::down);
  const PointSeries* lower = with_arrow(f, Arrow::up);
  const PointSeries* failed = with_marker(f, Marker::cross);
  REQUIRE(upper);
  REQUIRE(lower);
  REQUIRE(failed);
  CHECK(upper->points.at(0).x == 1.0);
  CHECK(upper->points.at(0).y == all.results[1].bound->at95_nm);
  CHECK(lower->points.at(0).x == 2.0);
  CHECK(lower->points.at(0).y == all.results[2].bound->at95_nm);
  CHECK(failed->points.at(0).x == 3.0);
  CHECK(failed->points.at(0).y < 0.0);  // no thickness is there, so it cannot be taken for one
  CHECK(contains(f.caption, "2 bounds as arrows, 1 cross without a thickness"));
}

TEST_CASE("an outlier is a ring") {
  Run run = many_spots(9);
  run.areas[8].area = 60000.0;
  const ThicknessResults all = run_thickness(run);
  REQUIRE(all.summaries[0].outliers == std::vector<std::size_t>{4});
  const Figure f = thickness_figure(run, all);
  const PointSeries* odd = with_marker(f, Marker::ring);
  REQUIRE(odd);
  REQUIRE(odd->points.size() == 1);
  CHECK(odd->points[0].x == 4.0);
}

TEST_CASE("routes of one spot stand side by side and name themselves") {
  Run run = many_spots(2);
  run.lines.push_back(test::line(run, "O 1s", "O 1s", "oxide"));
  run.references.push_back({"O 1s", "Si 2p metal", Quantity(2.0, 0.1)});
  for (const char* spot : {"s1", "s2"}) run.areas.push_back(area(spot, "O 1s", 40000.0));
  const ThicknessResults all = run_thickness(run);
  const Figure f = thickness_figure(run, all);
  REQUIRE(f.points.size() == 2);
  CHECK(f.points[0].shift == -f.points[1].shift);
  CHECK(f.points[0].shift != 0.0);
  CHECK(f.points[0].marker != f.points[1].marker);
  CHECK(contains(f.points[1].name, "O 1s over Si 2p metal"));
  CHECK(f.x.names.size() == 2);
  CHECK(thickness_figure(run, all, 1).points.size() == 1);
}

TEST_CASE("a figure of many spots stays readable and small") {
  Run run = many_spots(61);
  Figure f = thickness_figure(run, run_thickness(run));
  CHECK(f.x.names.empty());
  CHECK(f.points[0].points.front().x == 1.0);  // people count from one
  CHECK(contains(f.points[0].name, "repeatability"));
  CHECK_FALSE(f.points[0].points[0].inner.has_value());
  CHECK(contains(f.caption, "repeatability alone"));

  run = many_spots(5000);
  f = thickness_figure(run, run_thickness(run));
  REQUIRE(!f.points.empty());
  CHECK(f.points[0].points.size() == 200);
  CHECK(contains(f.points[0].name, "median of 25 successive results"));
  CHECK(figure_svg(f).size() < 60000);
}

TEST_CASE("a budget has one bar for each share and tells kinds apart by fill") {
  const Run run = many_spots(1);
  const ThicknessResults all = run_thickness(run);
  const Figure f = budget_figure(run, all, 0);
  const Budget& budget = all.results[0].thickness->budget;
  CHECK(f.x.unit == "%");
  double sum = 0.0;
  std::size_t bars = 0;
  for (const BarSeries& s : f.bars) {
    const ContributionKind kind = s.fill == Fill::solid ? ContributionKind::scale : ContributionKind::repeatability;
    for (const FigureBar& b : s.bars) {
      const auto& name = f.y.names.at(static_cast<std::size_t>(b.y));
      const auto row = std::find_if(budget.rows.begin(), budget.rows.end(), [&](const BudgetRow& r) {
        return r.kind == kind && close_to(100.0 * r.share, b.length, rel(1e-12)).close;
      });
      CHECK_MESSAGE(row != budget.rows.end(), name);
      sum += b.length;
      ++bars;
    }
  }
  CHECK(bars == f.y.names.size());
  CHECK(close_to(sum, 100.0, test::abs(0.5)));
  CHECK(f.y.names[0] == "attenuation length");
  CHECK(f.y.low > f.y.high);  // largest on top
  CHECK(contains(f.texts.at(0).text, " nm)"));
  CHECK(figure_svg(f) != figure_svg(thickness_figure(run, all)));
}

TEST_CASE("a budget keeps shares below zero and needs a thickness") {
  Run run = many_spots(1);
  ThicknessResults all = run_thickness(run);
  all.results[0].thickness->budget.rows = {{"a", ContributionKind::scale, 0.3, 1.2},
                                           {"b", ContributionKind::scale, 0.1, -0.2}};
  const Figure f = budget_figure(run, all, 0);
  CHECK(f.x.low < -20.0);
  CHECK(f.x.high > 120.0);
  CHECK(contains(f.caption, "below zero"));
  CHECK(!contains(figure_svg(f), "width=\"-"));
  all.results[0].thickness.reset();
  CHECK_THROWS_AS((void)budget_figure(run, all, 0), InputError);
}

TEST_CASE("one result is shown by its budget and several by their thicknesses") {
  Run run = many_spots(1);
  CHECK_FALSE(result_figure(run, run_thickness(run)).bars.empty());
  run = many_spots(2);
  CHECK(result_figure(run, run_thickness(run)).bars.empty());
  run = many_spots(1);
  run.areas.pop_back();
  const Figure f = result_figure(run, run_thickness(run));
  CHECK(with_marker(f, Marker::cross));
}

TEST_CASE("the JSON of a figure holds its numbers") {
  const Run run = bounds_run();
  const Figure f = thickness_figure(run, run_thickness(run));
  const auto json = nlohmann::json::parse(figure_json(f));
  CHECK(json["schema"] == "pellicle.figure/1");
  CHECK(json["y"]["unit"] == "nm");
  CHECK(json["x"]["names"].size() == 4);
  REQUIRE(json["points"].size() == f.points.size());
  for (std::size_t i = 0; i < f.points.size(); ++i) {
    CHECK(json["points"][i]["name"] == f.points[i].name);
    CHECK(json["points"][i]["points"][0]["y"].get<double>() == f.points[i].points[0].y);
  }
  CHECK(json["points"][0]["points"][0]["interval"][0].get<double>() == f.points[0].points[0].interval->low95);
}

TEST_CASE("an SVG is whole and needs nothing else and shows text as text") {
  Run run = bounds_run();
  run.title = kHostile;
  run.areas[0].spot = run.areas[1].spot = "<b>\"&'\x01";
  const ThicknessResults all = run_thickness(run);
  for (const Figure& f : {thickness_figure(run, all), budget_figure(run, all, 0)}) {
    const std::string svg = figure_svg(f);
    CHECK(test::unbalanced_tag(svg).empty());
    CHECK(svg.starts_with("<svg xmlns=\"http://www.w3.org/2000/svg\""));
    CHECK(contains(svg, "role=\"img\""));
    for (const char* bad : {"<script", "<b>", "href", "url(", "src=", "nan", "inf\"", "\x01"})
      CHECK_MESSAGE(!contains(svg, bad), bad);
    CHECK(contains(svg, "&lt;b&gt;&quot;&amp;&#39;"));
  }
}

TEST_CASE("names that do not fit are tilted and shortened within the picture") {
  Run run = many_spots(12);
  for (AreaRow& row : run.areas) row.spot += " of a plate with a very long name indeed";
  const std::string svg = figure_svg(thickness_figure(run, run_thickness(run)));
  CHECK(count_of(svg, "rotate(-50") == 12);
  CHECK(contains(svg, "…</text>"));
}

TEST_CASE("a figure knows the formats by their extensions") {
  CHECK(plot_format("a.svg") == PlotFormat::svg);
  CHECK(plot_format("b/c.PNG") == PlotFormat::png);
  CHECK(plot_format("x.y.pdf") == PlotFormat::pdf);
  for (const char* path : {"a", "a.gif", "svg", "a.svg/b", "", "a."})
    CHECK_MESSAGE(!plot_format(path).has_value(), path);
}

TEST_CASE("no text of a figure can leave the quotes of a gnuplot script") {
  Run run = many_spots(3);
  run.title = kHostile;
  for (AreaRow& row : run.areas) row.spot += kHostile;
  run.sample.layers[0].name = "ox'ide`";
  run.lines[0].from = "ox'ide`";
  run.lines[1].length_nm = {{"ox'ide`", Quantity(3.448, 0.1)}};
  const ThicknessResults all = run_thickness(run);
  for (const PlotFormat format : {PlotFormat::svg, PlotFormat::png, PlotFormat::pdf, PlotFormat::terminal}) {
    for (const Figure& f : {thickness_figure(run, all), budget_figure(run, all, 0)}) {
      const std::string script = gnuplot_script(f, format);
      const std::string outside = outside_quotes(script);
      for (const char* bad : {"`", "$(", "$HOME", "@m", "touch", "Symbol", "system", "set output", "load"}) {
        CHECK_MESSAGE(!contains(outside, bad), bad);
      }
      CHECK(contains(script, "noenhanced"));
      CHECK(contains(script, "it''s"));
    }
  }
  // A tick takes its name for a format.
  CHECK(contains(gnuplot_script(thickness_figure(many_spots(1), run_thickness(many_spots(1))), PlotFormat::svg),
                 "'s1' 0"));
  Run percent = many_spots(2);
  percent.areas[0].spot = percent.areas[1].spot = "5 %d";
  CHECK(contains(gnuplot_script(thickness_figure(percent, run_thickness(percent)), PlotFormat::svg), "'5 %%d' 0"));
}

TEST_CASE("pictures of gnuplot are what their format says") {
  if (!gnuplot_there()) return;  // a package of every build, but not of every machine
  Run run = bounds_run();
  run.title = kHostile;
  run.areas[0].spot = run.areas[1].spot = kHostile;
  const ThicknessResults all = run_thickness(run);
  const test::ScratchFolder folder;
  for (const Figure& f : {thickness_figure(run, all), budget_figure(run, all, 0)}) {
    const std::string svg = drawn(folder, gnuplot_script(f, PlotFormat::svg));
    CHECK(test::unbalanced_tag(svg).empty());
    CHECK(contains(svg, "`touch hit` $(touch hit) $HOME @m {/Symbol a}"));
    CHECK(!contains(svg, "<script"));
    CHECK(drawn(folder, gnuplot_script(f, PlotFormat::png)).starts_with("\x89PNG\r\n\x1a\n"));
    CHECK(drawn(folder, gnuplot_script(f, PlotFormat::pdf)).starts_with("%PDF-"));
    CHECK(contains(drawn(folder, gnuplot_script(f, PlotFormat::terminal)), f.x.label));
  }
  CHECK(folder.entries() == 3);  // script, out, err: nothing was touched
}

TEST_CASE("a figure without data still has its axes") {
  if (!gnuplot_there()) return;  // a package of every build, but not of every machine
  Figure f;
  f.title = "empty";
  f.x = {"x", "nm", 0.0, 1.0, {}};
  f.y = {"y", "", 0.0, 1.0, {}};
  const test::ScratchFolder folder;
  CHECK(contains(drawn(folder, gnuplot_script(f, PlotFormat::svg)), "x (nm)"));
  CHECK(test::unbalanced_tag(figure_svg(f)).empty());
}

}  // TEST_SUITE("figure")
