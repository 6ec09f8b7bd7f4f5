// Radiation and evaporation terms against FAO-56's worked examples.
#include "core/weather/evaporation.hpp"

#include "support/table.hpp"

using namespace antherd;
using namespace antherd::weather;

namespace {

HourAir air_of(const tables::Row& row) {
  return {Celsius(row.number("temperature")),
          Percent(row.number("humidity")),
          MetrePerSecond(row.number("wind")),
          row.number("solar"),
          row.number("clear_sky"),
          Metre(row.number("elevation"))};
}

double worked_out(const tables::Row& row) {
  const std::string& formula = row.text("formula");
  if (formula == "clear_sky_radiation") {
    return clear_sky_radiation(row.number("solar"), Metre(row.number("elevation")));
  }
  if (formula == "wind_at_2m") {
    return wind_at_2m(MetrePerSecond(row.number("wind")), Metre(row.number("elevation"))).value;
  }
  if (formula == "estimated_solar") {
    std::optional<CelsiusDifference> range;
    if (row.has("temperature")) range = CelsiusDifference(row.number("temperature"));
    return estimated_solar(row.number("solar"), range, row.number("humidity"));
  }
  if (formula == "net_radiation") return net_radiation(air_of(row));
  if (formula == "potential_drying") return potential_drying(air_of(row)).value;
  REQUIRE(formula == "reference_evapotranspiration");
  return reference_evapotranspiration(air_of(row)).value;
}

}  // namespace

TEST_CASE("evaporation terms agree with the worked examples") {
  for (const auto& row : tables::read("weather-evaporation.csv")) {
    tables::check(row, worked_out(row));
  }
}

TEST_CASE("drying grows with wind, sun and dryness") {
  const HourAir calm{Celsius(22), Percent(70), MetrePerSecond(1), 1.0, 2.0, Metre(100)};
  HourAir windy = calm, sunny = calm, dry = calm;
  windy.wind = MetrePerSecond(4);
  sunny.solar = 1.8;
  dry.humidity = Percent(40);
  const double least = potential_drying(calm).value;
  CHECK(least > 0.1);
  CHECK(potential_drying(windy).value > least + 0.05);
  CHECK(potential_drying(sunny).value > least + 0.1);
  CHECK(potential_drying(dry).value > least + 0.02);
  // A crop's stomata hold back what a wet leaf gives away.
  CHECK(reference_evapotranspiration(calm).value < least);
}

TEST_CASE("there is no radiation at night") {
  const Place place{Degree(46.73), Degree(-117.18), Metre(780)};
  const auto day = std::chrono::sys_days{std::chrono::year{2026} / 7 / 1};
  const HourStart midnight = HourStart(day) + std::chrono::hours{8};  // near solar midnight
  CHECK(extraterrestrial_radiation(midnight, place) == 0.0);
  CHECK(extraterrestrial_radiation(midnight + std::chrono::hours{12}, place) > 4.0);
}
