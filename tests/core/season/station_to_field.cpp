// From the station to the field (science §4) against its table.
#include "scene.hpp"
#include "support/table.hpp"

using namespace antherd;
using namespace antherd::season;
using namespace antherd::season::scene;

TEST_CASE("temperature and humidity at the field agree with their table") {
  for (const auto& row : tables::read("season-station-to-field.csv")) {
    Plan plan = plan_at_greenwich();
    plan.stations[0].place.elevation = Metre(row.number("station_elevation"));
    plan.field.elevation = Metre(row.number("field_elevation"));
    if (row.has("offset_day")) {
      plan.field.offset = field::Offset{CelsiusDifference(row.number("offset_day")),
                                        CelsiusDifference(row.number("offset_night"))};
    }
    const Weather weather{row.number("temperature"), row.number("humidity")};
    const int clock = static_cast<int>(row.number("clock"));
    const auto measured = hours_of(plan, clock + 1, [&](int) { return weather; });
    const Air air = air_at_field(plan, measured.back().start, &measured.back(), 0);
    REQUIRE((air.temperature && air.humidity));
    tables::check(
        row, row.text("formula") == "temperature" ? air.temperature->value : air.humidity->value);
  }
}
