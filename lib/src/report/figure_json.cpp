#include <nlohmann/json.hpp>

#include "pellicle/report/figure.hpp"

namespace pellicle {
namespace {

const char* marker_name(Marker marker) {
  switch (marker) {
    case Marker::disc:
      return "disc";
    case Marker::ring:
      return "ring";
    case Marker::square:
      return "square";
    case Marker::diamond:
      return "diamond";
    case Marker::triangle:
      return "triangle";
    case Marker::cross:
      break;
  }
  return "cross";
}

const char* arrow_name(Arrow arrow) { return arrow == Arrow::none ? "none" : arrow == Arrow::down ? "down" : "up"; }

using Json = nlohmann::ordered_json;

Json axis_json(const FigureAxis& axis) {
  return {{"label", axis.label}, {"unit", axis.unit}, {"low", axis.low}, {"high", axis.high}, {"names", axis.names}};
}

Json interval_json(const std::optional<Interval>& interval) {
  if (!interval) return nullptr;
  return {interval->low95, interval->high95};
}

}  // namespace

std::string figure_json(const Figure& figure) {
  Json bands = Json::array(), lines = Json::array(), bars = Json::array(), points = Json::array(),
       texts = Json::array();
  for (const FigureBand& b : figure.bands) bands.push_back({{"low", b.low}, {"high", b.high}, {"name", b.name}});
  for (const FigureLine& l : figure.lines) lines.push_back({{"vertical", l.vertical}, {"at", l.at}, {"name", l.name}});
  for (const BarSeries& s : figure.bars) {
    Json all = Json::array();
    for (const FigureBar& b : s.bars) all.push_back({{"y", b.y}, {"length", b.length}});
    bars.push_back({{"name", s.name}, {"fill", s.fill == Fill::solid ? "solid" : "hatched"}, {"bars", all}});
  }
  for (const PointSeries& s : figure.points) {
    Json all = Json::array();
    for (const FigurePoint& p : s.points) {
      all.push_back(
          {{"x", p.x}, {"y", p.y}, {"interval", interval_json(p.interval)}, {"inner", interval_json(p.inner)}});
    }
    points.push_back(
        {{"name", s.name}, {"marker", marker_name(s.marker)}, {"arrow", arrow_name(s.arrow)}, {"points", all}});
  }
  for (const FigureText& t : figure.texts) texts.push_back({{"x", t.x}, {"y", t.y}, {"text", t.text}});
  const Json doc = {{"schema", "pellicle.figure/1"},
                    {"title", figure.title},
                    {"subtitle", figure.subtitle},
                    {"caption", figure.caption},
                    {"x", axis_json(figure.x)},
                    {"y", axis_json(figure.y)},
                    {"bands", bands},
                    {"lines", lines},
                    {"bars", bars},
                    {"points", points},
                    {"texts", texts}};
  return doc.dump(2, ' ', false, Json::error_handler_t::replace) + "\n";
}

}  // namespace pellicle
