// See plan.hpp.
#include "core/season/plan.hpp"

#include <cmath>

#include "core/weather/air.hpp"
#include "core/weather/evaporation.hpp"
#include "core/weather/sun.hpp"

namespace antherd::season {
namespace {

double rounded(double value) { return std::round(value * 1e6) / 1e6; }

CelsiusDifference offset_of(const Plan& plan, int station, bool daylight) {
  if (station == 0 && plan.field.offset) {
    return daylight ? plan.field.offset->day : plan.field.offset->night;
  }
  const double per_km = daylight ? 6.5 : 3.0;
  const Metre rise =
      plan.stations[static_cast<std::size_t>(station)].place.elevation - plan.field.elevation;
  return CelsiusDifference(per_km * rise.value / 1000.0);
}

}  // namespace

HourStart Plan::first_hour() const {
  return std::chrono::ceil<std::chrono::hours>(calendar.start_of(field.sown));
}

Air air_at_field(const Plan& plan, HourStart start, const weather::Hour* hour, int station) {
  Air air;
  air.start = start;
  const weather::Place place = plan.place();
  air.daylight = weather::sun_is_up(middle_of(start), place);
  air.extraterrestrial = weather::extraterrestrial_radiation(start, place);
  if (hour == nullptr) return air;
  air.station = station;
  air.measured = hour;
  air.wind = hour->wind;
  if (hour->solar) air.solar = hour->solar->value;
  air.rain = hour->rain;
  air.rain_for_wetness = hour->rain_for_wetness.value_or(Millimetre(0));
  air.wet_minutes = hour->wet_minutes;
  air.whole_degrees = hour->whole_degrees;
  if (!hour->has_temperature()) return air;
  const CelsiusDifference offset = offset_of(plan, station, air.daylight);
  air.temperature = Celsius(rounded((*hour->temperature + offset).value));
  if (!hour->valid()) return air;
  air.humidity = hour->humidity;
  if (offset.value != 0) {
    const auto vapour = weather::vapour_pressure(*hour->temperature, *hour->humidity);
    air.humidity = Percent(rounded(weather::relative_humidity(*air.temperature, vapour).value));
  }
  air.dew_point = weather::dew_point(*air.temperature, *air.humidity);
  air.vpd = weather::vapour_pressure_deficit(*air.temperature, *air.humidity);
  return air;
}

HourPicker::Pick HourPicker::pick(HourStart start) {
  Pick fallback;
  for (std::size_t i = 0; i < hours_.size(); ++i) {
    auto& at = at_[i];
    while (at < hours_[i].size() && hours_[i][at].start < start) ++at;
    if (at == hours_[i].size() || hours_[i][at].start != start) continue;
    const weather::Hour* hour = &hours_[i][at];
    if (hour->valid()) return {hour, static_cast<int>(i)};
    const bool better =
        fallback.hour == nullptr || (hour->has_temperature() && !fallback.hour->has_temperature());
    if (better) fallback = {hour, static_cast<int>(i)};
  }
  return fallback;
}

}  // namespace antherd::season
