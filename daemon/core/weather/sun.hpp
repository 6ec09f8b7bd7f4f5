// Where the sun is (science §2): Meeus, Astronomical Algorithms, ch. 25, low accuracy.
#pragma once

#include <optional>

#include "core/units/quantity.hpp"
#include "core/units/time.hpp"
#include "core/weather/station.hpp"

namespace antherd::weather {

struct SunPosition {
  Degree right_ascension;  // 0…360
  Degree declination;      // −23.5…23.5
};

/// Apparent position of the sun, 1900…2100. Source: Meeus ch. 25.
/// 1992-10-13 0h TD: declination −7.78507°, right ascension 198.38083° (from memory of ex. 25.a).
SunPosition sun_position(Instant at);

/// True altitude of the sun's centre, no refraction, −90…90°. Good to about 0.02°.
/// Source: Meeus eq. 13.6, mean sidereal time by eq. 12.4.
Degree sun_altitude(Instant at, const Place& place);

/// Up means above −0.833°. Source: Meeus ch. 15 (refraction 34', radius 16').
bool sun_is_up(Instant at, const Place& place);

struct SunDay {
  std::optional<Instant> rise;  // none where the sun does not rise or set that day
  std::optional<Instant> set;
};

/// Rise and set nearest to the solar noon of a mean local solar day: the first second at which the
/// sun is up and the first at which it is down again. Source: Meeus ch. 15, by bisection.
/// @param solar_day  the day in UTC + longitude / 15 h
SunDay sun_day(CivilDay solar_day, const Place& place);

/// Mean local solar time of an instant: UTC + longitude / 15 h (to the second).
CivilTime solar_time(Instant at, Degree longitude);
/// The instant of a mean local solar time.
Instant from_solar_time(CivilTime reading, Degree longitude);

/// Day length in hours by the same rise and set; 24 or 0 where there is none. On the day of an
/// equinox at the equator 12.11 h, not 12: the disc is seen before it is there.
/// Source: Meeus ch. 15, by sun_day.
double day_length_hours(CivilDay solar_day, const Place& place);

}  // namespace antherd::weather
