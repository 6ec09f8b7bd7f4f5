// Where the sun is; see sun.hpp. Meeus, Astronomical Algorithms (2nd ed. 1998), ch. 12 and 25.
// This file must not know civil time zones: the sun's day is the mean local solar one.
#include "core/weather/sun.hpp"

#include <algorithm>
#include <cmath>
#include <numbers>

namespace antherd::weather {
namespace {

constexpr double radians = std::numbers::pi / 180.0;
constexpr double horizon = -0.833;  // refraction 34' and the sun's radius 16' (Meeus ch. 15)
constexpr double julian_day_of_1970 = 2440587.5;
constexpr double julian_day_of_2000 = 2451545.0;

/// Days since 2000-01-01 12:00. The minute between UTC and dynamical time moves the sun by less
/// than 0.001°, a tenth of this method's accuracy, and is left out.
double days_since_2000(Instant at) {
  return static_cast<double>(at.time_since_epoch().count()) / 86400.0 +
         (julian_day_of_1970 - julian_day_of_2000);
}

/// To −180…180.
double wrapped(double degrees) { return std::remainder(degrees, 360.0); }

/// Mean sidereal time at Greenwich, degrees. Source: Meeus eq. 12.4.
double sidereal_degrees(double days) {
  const double t = days / 36525.0;
  return 280.46061837 + 360.98564736629 * days + 0.000387933 * t * t - t * t * t / 38710000.0;
}

/// The sun's hour angle, −180…180°, 0 at true noon, and its position.
double hour_angle(Instant at, Degree longitude, const SunPosition& sun) {
  return wrapped(sidereal_degrees(days_since_2000(at)) + longitude.value -
                 sun.right_ascension.value);
}

/// Seconds by which mean solar time runs ahead of UTC.
Seconds solar_offset(Degree longitude) { return Seconds{std::llround(longitude.value * 240.0)}; }

/// The true noon nearest to a mean one.
Instant true_noon(Instant mean_noon, Degree longitude) {
  Instant at = mean_noon;
  for (int step = 0; step < 2; ++step) {
    const double angle = hour_angle(at, longitude, sun_position(at));
    at -= Seconds{std::llround(angle * 240.0)};
  }
  return at;
}

/// The first second from which the sun's state is `state_at(after)`, given that it is another at
/// `before`: between noon and the midnights beside it the altitude passes the horizon once.
Instant turning_second(Instant before, Instant after, const Place& place) {
  const bool wanted = sun_is_up(after, place);
  while (after - before > Seconds{1}) {
    const Instant middle = before + (after - before) / 2;
    (sun_is_up(middle, place) == wanted ? after : before) = middle;
  }
  return after;
}

constexpr Seconds half_day{12 * 3600};

}  // namespace

SunPosition sun_position(Instant at) {
  const double t = days_since_2000(at) / 36525.0;
  const double mean_longitude = 280.46646 + t * (36000.76983 + t * 0.0003032);
  const double anomaly = (357.52911 + t * (35999.05029 - t * 0.0001537)) * radians;
  const double centre = (1.914602 - t * (0.004817 + t * 0.000014)) * std::sin(anomaly) +
                        (0.019993 - t * 0.000101) * std::sin(2.0 * anomaly) +
                        0.000289 * std::sin(3.0 * anomaly);
  const double node = (125.04 - 1934.136 * t) * radians;
  const double apparent = (mean_longitude + centre - 0.00569 - 0.00478 * std::sin(node)) * radians;
  const double mean_obliquity =
      23.439291111 - t * (0.013004167 + t * (1.638889e-7 - t * 5.036111e-7));
  const double obliquity = (mean_obliquity + 0.00256 * std::cos(node)) * radians;
  const double longitude_sine = std::sin(apparent);
  double ascension = std::atan2(std::cos(obliquity) * longitude_sine, std::cos(apparent)) / radians;
  if (ascension < 0.0) ascension += 360.0;
  return {Degree(ascension), Degree(std::asin(std::sin(obliquity) * longitude_sine) / radians)};
}

Degree sun_altitude(Instant at, const Place& place) {
  const SunPosition sun = sun_position(at);
  const double angle = hour_angle(at, place.longitude, sun) * radians;
  const double latitude = place.latitude.value * radians;
  const double declination = sun.declination.value * radians;
  const double sine = std::sin(latitude) * std::sin(declination) +
                      std::cos(latitude) * std::cos(declination) * std::cos(angle);
  return Degree(std::asin(std::clamp(sine, -1.0, 1.0)) / radians);
}

bool sun_is_up(Instant at, const Place& place) { return sun_altitude(at, place).value > horizon; }

SunDay sun_day(CivilDay solar_day, const Place& place) {
  const Instant noon =
      true_noon(from_solar_time(CivilTime(solar_day) + half_day, place.longitude), place.longitude);
  SunDay day;
  if (!sun_is_up(noon, place)) return day;
  if (!sun_is_up(noon - half_day, place)) day.rise = turning_second(noon - half_day, noon, place);
  // From noon to midnight: the first second at which it is down.
  if (!sun_is_up(noon + half_day, place)) day.set = turning_second(noon, noon + half_day, place);
  return day;
}

CivilTime solar_time(Instant at, Degree longitude) {
  return CivilTime((at + solar_offset(longitude)).time_since_epoch());
}

Instant from_solar_time(CivilTime reading, Degree longitude) {
  return Instant(reading.time_since_epoch()) - solar_offset(longitude);
}

double day_length_hours(CivilDay solar_day, const Place& place) {
  const Instant noon =
      true_noon(from_solar_time(CivilTime(solar_day) + half_day, place.longitude), place.longitude);
  if (!sun_is_up(noon, place)) return 0.0;
  const SunDay day = sun_day(solar_day, place);
  // On the days on which midnight sun comes or goes one side of noon has no end.
  const Instant rise = day.rise.value_or(noon - half_day);
  const Instant set = day.set.value_or(noon + half_day);
  return static_cast<double>((set - rise).count()) / 3600.0;
}

}  // namespace antherd::weather
