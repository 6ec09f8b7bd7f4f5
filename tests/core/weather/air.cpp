// Moist air against published tables and a general library.
#include "core/weather/air.hpp"

#include "support/table.hpp"

using namespace antherd;
using namespace antherd::weather;

namespace {

double worked_out(const tables::Row& row) {
  const std::string& formula = row.text("formula");
  if (formula == "air_pressure") return air_pressure(Metre(row.number("other"))).value;
  if (formula == "psychrometric_constant") {
    return psychrometric_constant(Kilopascal(row.number("other")));
  }
  const Celsius t(row.number("temperature"));
  if (formula == "saturation_pressure") return saturation_pressure(t).value;
  if (formula == "saturation_slope") return saturation_slope(t);
  if (formula == "relative_humidity") {
    return relative_humidity(t, Kilopascal(row.number("other"))).value;
  }
  const Percent humidity(row.number("humidity"));
  if (formula == "vapour_pressure") return vapour_pressure(t, humidity).value;
  if (formula == "vapour_pressure_deficit") return vapour_pressure_deficit(t, humidity).value;
  if (formula == "dew_point") return dew_point(t, humidity).value;
  REQUIRE(formula == "wet_bulb");
  const auto bulb = wet_bulb(t, humidity, Kilopascal(row.number("other")));
  REQUIRE(bulb);
  return bulb->value;
}

}  // namespace

TEST_CASE("moist air agrees with published numbers and another library") {
  for (const auto& row : tables::read("weather-moist-air.csv")) tables::check(row, worked_out(row));
}

TEST_CASE("there is no wet bulb without humidity") {
  CHECK_FALSE(wet_bulb(Celsius(20), Percent(0), Kilopascal(101.3)));
  CHECK_FALSE(wet_bulb(Celsius(20), Percent(-1), Kilopascal(101.3)));
  CHECK(wet_bulb(Celsius(20), Percent(0.1), Kilopascal(101.3)));
}

TEST_CASE("dew point, wet bulb and temperature stand in this order") {
  for (double t = -20; t <= 50; t += 2.5) {
    for (double humidity = 5; humidity <= 100; humidity += 5) {
      const Celsius air(t);
      const auto bulb = wet_bulb(air, Percent(humidity), Kilopascal(95));
      REQUIRE(bulb);
      INFO(t << " °C, " << humidity << " %");
      CHECK(dew_point(air, Percent(humidity)).value <= bulb->value + 1e-9);
      CHECK(bulb->value <= t + 1e-9);
    }
  }
}

TEST_CASE("humidity returns from its dew point") {
  for (double humidity = 5; humidity <= 100; humidity += 5) {
    const Celsius dew = dew_point(Celsius(24), Percent(humidity));
    const Percent back = relative_humidity(Celsius(24), saturation_pressure(dew));
    CHECK(back.value == Approx(humidity).epsilon(1e-9));
  }
}

TEST_CASE("the wet bulb stays near a published fit") {
  // Stull 2011, eq. 1: fitted for sea level, 5…99 %, −20…50 °C, errors −1…+0.65 °C.
  const auto stull = [](double t, double rh) {
    return t * std::atan(0.151977 * std::sqrt(rh + 8.313659)) + std::atan(t + rh) -
           std::atan(rh - 1.676331) + 0.00391838 * std::pow(rh, 1.5) * std::atan(0.023101 * rh) -
           4.686035;
  };
  for (double t = 5; t <= 40; t += 5) {
    for (double rh = 20; rh <= 95; rh += 15) {
      INFO(t << " °C, " << rh << " %");
      const auto bulb = wet_bulb(Celsius(t), Percent(rh), Kilopascal(101.325));
      REQUIRE(bulb);
      CHECK(std::abs(bulb->value - stull(t, rh)) < 1.0);
    }
  }
}
