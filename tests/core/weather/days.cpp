// FAO-56's examples of whole days and months, worked out from the same terms as our hours.
#include "core/weather/air.hpp"
#include "core/weather/evaporation.hpp"
#include "support/table.hpp"

using namespace antherd;
using namespace antherd::weather;

namespace {

double mean_saturation(const tables::Row& row) {
  return (saturation_pressure(Celsius(row.number("high"))).value +
          saturation_pressure(Celsius(row.number("low"))).value) /
         2;
}

/// FAO-56 eq. 17: the lower humidity belongs to the warmer temperature.
double mean_vapour(const tables::Row& row) {
  const Kilopascal warm =
      vapour_pressure(Celsius(row.number("high")), Percent(row.number("humidity_low")));
  const Kilopascal cool =
      vapour_pressure(Celsius(row.number("low")), Percent(row.number("humidity_high")));
  return (warm.value + cool.value) / 2;
}

/// A day's net radiation as 24 equal hours, half at each extreme: eq. 39 takes the mean of T⁴.
double net_of_day(const tables::Row& row) {
  double sum = 0;
  for (const char* extreme : {"high", "low"}) {
    const Celsius t(row.number(extreme));
    HourAir air;
    air.temperature = t;
    air.humidity = Percent(100 * row.number("vapour") / saturation_pressure(t).value);
    air.solar = row.number("solar") / 24;
    air.clear_sky = row.number("clear_sky") / 24;
    air.elevation = Metre(row.number("elevation"));
    sum += 12 * net_radiation(air);
  }
  return sum;
}

/// FAO-56 eq. 6, the daily form; every term of it is the program's.
double reference_of_day(const tables::Row& row) {
  const double mean = (row.number("high") + row.number("low")) / 2;
  const double slope = saturation_slope(Celsius(mean));
  const double gamma = psychrometric_constant(air_pressure(Metre(row.number("elevation"))));
  const double wind = row.number("wind");
  const double deficit = mean_saturation(row) - row.number("vapour");
  return (0.408 * slope * (net_of_day(row) - row.number("ground")) +
          gamma * 900 / (mean + 273) * wind * deficit) /
         (slope + gamma * (1 + 0.34 * wind));
}

double worked_out(const tables::Row& row) {
  const std::string& formula = row.text("formula");
  if (formula == "mean_saturation") return mean_saturation(row);
  if (formula == "mean_vapour") return mean_vapour(row);
  if (formula == "net_radiation") return net_of_day(row);
  if (formula == "reference") return reference_of_day(row);
  if (formula == "clear_sky") {
    return clear_sky_radiation(row.number("solar"), Metre(row.number("elevation")));
  }
  if (formula == "solar_of_range") {
    const CelsiusDifference range(row.number("high") - row.number("low"));
    return estimated_solar(row.number("solar"), range, 0.16);
  }
  REQUIRE(formula == "wet_bulb_of_vapour");
  const Celsius t(row.number("high"));
  const auto bulb = wet_bulb(t, relative_humidity(t, Kilopascal(row.number("vapour"))),
                             air_pressure(Metre(row.number("elevation"))));
  REQUIRE(bulb);
  return bulb->value;
}

}  // namespace

TEST_CASE("whole days agree with the worked examples") {
  for (const auto& row : tables::read("weather-days.csv")) tables::check(row, worked_out(row));
}
