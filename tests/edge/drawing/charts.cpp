// The chart of a week: what stands on it, and that a gap is a gap.
#include "core/letters/charts.hpp"

#include <algorithm>

#include "edge/drawing/drawing.hpp"
#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::letters;
using risk::Level;

namespace {

CivilDay july(int day) {
  return std::chrono::local_days(std::chrono::year(2026) / 7 / 1) + std::chrono::days{day - 1};
}

season::HeatDay warm(int day, double t_max, Level level) {
  season::HeatDay heat;
  heat.date = july(day);
  heat.t_max = Celsius(t_max);
  heat.level = level;
  return heat;
}

season::HumidDay humid(int day, double infection, bool water) {
  season::HumidDay result;
  result.date = july(day);
  result.infection = infection;
  result.water = water;
  return result;
}

std::vector<std::string> words_of(const Drawing& drawing) {
  std::vector<std::string> words;
  for (const Mark& mark : drawing.marks) {
    if (const auto* label = std::get_if<Label>(&mark)) words.push_back(label->text);
  }
  return words;
}

long count(const Drawing& drawing, const std::string& text) {
  const auto words = words_of(drawing);
  return std::count(words.begin(), words.end(), text);
}

template <class Kind>
std::vector<Kind> marks_of(const Drawing& drawing, Role role) {
  std::vector<Kind> found;
  for (const Mark& mark : drawing.marks) {
    if (const auto* it = std::get_if<Kind>(&mark); it && it->role == role) found.push_back(*it);
  }
  return found;
}

ChartReader reader(Units units = Units::us) {
  ChartReader result;
  result.field = "north bench";
  result.units = units;
  return result;
}

}  // namespace

TEST_CASE("thresholds and figures are in the reader's units") {
  const std::vector<season::HeatDay> days{warm(13, 36.4, Level::severe)};
  const Drawing us = week_chart(reader(), days, {});
  CHECK(count(us, "90 °F  hours count") == 1);  // 32.2 °C is 89.96 °F
  CHECK(count(us, "95 °F  Severe") == 1);
  CHECK(count(us, "100.4 °F  Extreme") == 1);
  CHECK(count(us, "98°") == 1);  // 36.4 °C is 97.52 °F
  const Drawing metric = week_chart(reader(Units::metric), days, {});
  CHECK(count(metric, "32.2 °C  hours count") == 1);
  CHECK(count(metric, "36.4°") == 1);
  CHECK(us.title == "north bench, 13 Jul 2026");
}

TEST_CASE("rounding carries no figure across a threshold that was not reached") {
  const std::vector<season::HeatDay> days{warm(13, 34.9, Level::moderate),
                                          warm(14, 35.0, Level::severe)};
  const Drawing drawing = week_chart(reader(), days, std::vector{humid(13, 0.97, true)});
  CHECK(count(drawing, "94.8°") == 1);  // 94.82 °F
  CHECK(count(drawing, "95°") == 1);
  CHECK(count(drawing, "0.9") == 1);
}

TEST_CASE("a day without data is a gap: no line crosses it") {
  const std::vector<season::HeatDay> days{warm(13, 30, Level::none), warm(14, 31, Level::none),
                                          warm(16, 33, Level::none), warm(17, 34, Level::none)};
  const Drawing drawing = week_chart(reader(), days, {});
  const auto lines = marks_of<Line>(drawing, Role::temperature);
  REQUIRE(lines.size() == 2);
  CHECK(lines[0].points.size() == 2);
  CHECK(lines[1].points.size() == 2);
  CHECK(lines[0].points.back().x < lines[1].points.front().x);
  CHECK(lines[0].points[0].y > lines[0].points[1].y);  // warmer stands higher
  CHECK(count(drawing, "no data") == 1 + 5);           // the 15th, and no morning was judged
}

TEST_CASE("the window is one band over its days; bars tell water from dew") {
  std::vector<season::HeatDay> days;
  for (int day = 13; day <= 19; ++day) days.push_back(warm(day, 30, Level::none));
  for (int day = 2; day < 6; ++day) days[static_cast<std::size_t>(day)].in_window = true;
  const Drawing drawing =
      week_chart(reader(), days, std::vector{humid(13, 1.5, true), humid(14, 0.5, false)});
  const auto bands = marks_of<Area>(drawing, Role::flower);
  REQUIRE(bands.size() == 1);
  CHECK(bands[0].outline[1].x - bands[0].outline[0].x == Approx(4.0 / 7.0 * (578 - 46)));
  CHECK(count(drawing, "flowering window") == 1);
  const auto water = marks_of<Area>(drawing, Role::water), dew = marks_of<Area>(drawing, Role::dew);
  REQUIRE(water.size() == 2);  // a bar and its key
  REQUIRE(dew.size() == 2);
  const auto tall = [](const Area& bar) { return bar.outline[2].y - bar.outline[0].y; };
  CHECK(tall(water[0]) == Approx(3 * tall(dew[0])));
}

TEST_CASE("levels are said in words, nights of water by a dot") {
  season::HumidDay spell = humid(13, 1.2, true);
  spell.level = Level::moderate;
  spell.night_set = true;
  const Drawing drawing =
      week_chart(reader(), std::vector{warm(13, 39, Level::extreme)}, std::vector{spell});
  CHECK(count(drawing, "Extreme") == 1);
  CHECK(count(drawing, "Moderate") == 1);
  CHECK(marks_of<Dot>(drawing, Role::water).size() == 1);
  CHECK(drawing.description.find("13 Jul 102 (Extreme)") != std::string::npos);
  ChartReader spanish = reader();
  spanish.language = Language::spanish;
  CHECK(count(week_chart(spanish, std::vector{warm(13, 39, Level::extreme)}, {}), "Extremo") == 1);
}

TEST_CASE("every word stays on the paper, for a day, a week and a season") {
  for (const int length : {1, 2, 7, 14, 40, 200}) {
    std::vector<season::HeatDay> days;
    std::vector<season::HumidDay> mornings;
    for (int day = 1; day <= length; ++day) {
      days.push_back(warm(day, 20 + day % 25, Level::none));
      mornings.push_back(humid(day, day % 7, false));
    }
    const Drawing drawing = week_chart(reader(), days, mornings);
    for (const Mark& mark : drawing.marks) {
      if (const auto* label = std::get_if<Label>(&mark)) {
        CHECK((label->at.x > 10 && label->at.x < drawing.width - 20));
        CHECK((label->at.y > 10 && label->at.y < drawing.height));
      }
    }
    CHECK(drawing::to_png(drawing, 1));
  }
}

TEST_CASE("without any day the chart says so") {
  const Drawing drawing = week_chart(reader(), {}, {});
  CHECK(count(drawing, "Nothing was measured in this time.") == 1);
  CHECK(drawing.description == "Nothing was measured in this time.");
}
