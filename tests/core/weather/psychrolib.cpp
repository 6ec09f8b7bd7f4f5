// Moist air against the npm package psychrolib (ASHRAE's formulas): on the recorded grid always,
// on a denser one where tests/outside/psychrolib.sh has just made it.
#include <cstdlib>

#include "core/weather/air.hpp"
#include "support/table.hpp"

using namespace antherd;
using namespace antherd::weather;

namespace {

/// One row of the grid.
struct Point {
  Celsius t;
  Percent humidity;
  Kilopascal pressure;
  double vapour, dew_point, wet_bulb;  // the library's
  /// The library takes ice below freezing, we take water always (FAO-56): other curves there.
  bool freezing() const { return dew_point <= 0.01 || wet_bulb <= 0.01; }
};

/// One number of ours beside the library's, the bound on it, and a mistake the bound must refuse.
struct Comparison {
  const char* what;
  double bound, bound_in_frost;
  const char* unit;
  double (*ours)(const Point&);
  double (*theirs)(const Point&);
  double (*mistaken)(const Point&);
};

double one(const Point&) { return 1.0; }
/// The ice point in the place of Tetens' 237.3.
double mixed_up(double t) { return 0.6108 * std::exp(17.27 * t / (t + 273.15)); }

// Bounds: two saturation curves differ by 0.12 % above freezing, which is 0.02 °C of dew point and
// 0.04 % of humidity. A ventilated psychrometer's coefficient is not the thermodynamic bulb: 0.31
// °C at 50 °C, 5 % and 78 kPa. In frost water and ice differ by 10 % at −10 °C, and a humidity of
// 5 % over water is another dew point than one over ice.
const Comparison comparisons[] = {
    {"vapour pressure", 0.0015, 0.11, "of itself",
     [](const Point& p) { return vapour_pressure(p.t, p.humidity).value / p.vapour; }, one,
     [](const Point& p) { return mixed_up(p.t.value) * p.humidity.value / 100 / p.vapour; }},
    {"dew point", 0.02, 3.1, "degC",
     [](const Point& p) { return dew_point(p.t, p.humidity).value; },
     [](const Point& p) { return p.dew_point; },
     [](const Point& p) { return p.t.value - (100 - p.humidity.value) / 5; }},
    {"wet bulb", 0.33, 0.85, "degC",
     [](const Point& p) { return wet_bulb(p.t, p.humidity, p.pressure)->value; },
     [](const Point& p) { return p.wet_bulb; },
     [](const Point& p) { return (p.t.value + dew_point(p.t, p.humidity).value) / 2; }},
    {"humidity from a dew point", 0.04, 4.4, "%",
     [](const Point& p) {
       return relative_humidity(p.t, saturation_pressure(Celsius(p.dew_point))).value;
     },
     [](const Point& p) { return p.humidity.value; },
     [](const Point& p) { return 100 - 5 * (p.t.value - p.dew_point); }},
};

std::vector<Point> points_of(const std::vector<tables::Row>& rows) {
  std::vector<Point> points;
  for (const tables::Row& row : rows) {
    points.push_back({Celsius(row.number("temperature")), Percent(row.number("humidity")),
                      Kilopascal(row.number("pressure")), row.number("vapour_pressure"),
                      row.number("dew_point"), row.number("wet_bulb")});
  }
  return points;
}

void compare(const std::vector<Point>& points, bool freezing, const std::string& grid) {
  for (const Comparison& each : comparisons) {
    outside::Largest largest, mistaken;
    for (const Point& point : points) {
      if (point.freezing() != freezing) continue;
      largest.see(each.ours(point), each.theirs(point));
      mistaken.see(each.mistaken(point), each.theirs(point));
    }
    const double bound = freezing ? each.bound_in_frost : each.bound;
    INFO(each.what << (freezing ? " in frost: " : ": ") << largest.value() << " " << each.unit);
    CHECK(largest.compared() >= 100);
    CHECK(largest.value() <= bound);
    CHECK(mistaken.value() > bound);
    outside::report(std::string(each.what) + (freezing ? " in frost (water here; ice there)" : ""),
                    "psychrolib 1.1.1; " + grid, largest, bound, each.unit);
  }
}

}  // namespace

TEST_CASE("moist air agrees with psychrolib on the recorded grid") {
  const auto points = points_of(tables::read("weather-psychrolib.csv"));
  compare(points, false, "recorded");
  compare(points, true, "recorded");
}

TEST_CASE("moist air agrees with psychrolib on a dense grid made just now", "[.]") {
  const char* grid = std::getenv("ANTHERD_PSYCHROLIB_GRID");
  REQUIRE(grid != nullptr);
  const auto points = points_of(tables::read_file(grid));
  CHECK(points.size() > 5000);
  compare(points, false, "live");
  compare(points, true, "live");
}
