// Words and closing times of hours; see hour.hpp.
// This file must not know how an hour is made.
#include "core/weather/hour.hpp"

#include <algorithm>

namespace antherd::weather {

Instant closes_at(HourStart hour, const Station& station) {
  return end_of(hour) + std::max(2 * station.interval, Seconds{600});
}

std::string describe(const Flag& flag) {
  switch (flag.reason) {
    case Reason::none:
      return "good";
    case Reason::out_of_range:
      return "out of range";
    case Reason::above_saturation:
      return "above 102 %, taken as 100";
    case Reason::spike:
      return flag.verdict == Verdict::wrong ? "spike, left out" : "spike";
    case Reason::unconfirmed:
      return "jump not yet confirmed, left out";
    case Reason::stuck:
      return flag.element == Element::humidity ? "stuck for 12 h or more" : "stuck for 6 h or more";
    case Reason::dew_above_temperature:
      return "dew point above air temperature, left out";
    case Reason::rain_in_dry_air:
      return "rain while the air reads dry";
    case Reason::not_air_temperature:
      return "cannot be air temperature, left out";
    case Reason::fahrenheit_as_celsius:
      return "looks like °F read as °C, left out";
    case Reason::celsius_as_fahrenheit:
      return "looks like °C read as °F, left out";
    case Reason::columns_swapped:
      return "looks swapped with humidity, left out";
    case Reason::clock_off:
      return "comes at the wrong time of day: clock or zone";
    case Reason::humidity_low_top:
      return "never near saturation in 30 humid nights";
    case Reason::humidity_high_top:
      return "stays at saturation in the sun";
  }
  return "good";
}

const char* name_of(Element element) {
  switch (element) {
    case Element::temperature:
      return "temperature";
    case Element::humidity:
      return "humidity";
    case Element::dew_point:
      return "dew point";
    case Element::rain:
      return "rain";
    case Element::wind:
      return "wind";
    case Element::solar:
      return "solar";
    case Element::wetness:
      return "wetness";
  }
  return "temperature";
}

const char* name_of(Verdict verdict) {
  switch (verdict) {
    case Verdict::good:
      return "good";
    case Verdict::suspect:
      return "suspect";
    case Verdict::wrong:
      return "wrong";
  }
  return "good";
}

const char* name_of(Reason reason) {
  switch (reason) {
    case Reason::none:
      return "none";
    case Reason::out_of_range:
      return "out of range";
    case Reason::above_saturation:
      return "above saturation";
    case Reason::spike:
      return "spike";
    case Reason::unconfirmed:
      return "unconfirmed";
    case Reason::stuck:
      return "stuck";
    case Reason::dew_above_temperature:
      return "dew point above temperature";
    case Reason::rain_in_dry_air:
      return "rain in dry air";
    case Reason::not_air_temperature:
      return "not air temperature";
    case Reason::fahrenheit_as_celsius:
      return "fahrenheit as celsius";
    case Reason::celsius_as_fahrenheit:
      return "celsius as fahrenheit";
    case Reason::columns_swapped:
      return "columns swapped";
    case Reason::clock_off:
      return "clock off";
    case Reason::humidity_low_top:
      return "humidity low at its top";
    case Reason::humidity_high_top:
      return "humidity high at its top";
  }
  return "none";
}

}  // namespace antherd::weather
