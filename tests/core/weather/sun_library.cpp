// The sun against libnova, a general astronomy library whose sun is the full VSOP87: 30 years,
// every tenth day. Rise and set at every fifth degree of latitude, because each asks the library
// for a sun of its own; the altitude at every degree.
#if __has_include(<libnova/libnova.h>)
#include <libnova/libnova.h>

#include <chrono>
#include <cmath>
#include <string>

#include "core/weather/sun.hpp"
#include "support/catch.hpp"
#include "support/outside.hpp"

using namespace antherd;
using namespace antherd::weather;
using namespace std::chrono;

namespace {

const char* const library = "libnova";
constexpr local_days first_day{year{1996} / 1 / 1}, last_day{year{2025} / 12 / 31};
constexpr double horizon = -0.833;  // degrees; Meeus ch. 15

double julian_of(Instant at) {
  return static_cast<double>(at.time_since_epoch().count()) / 86400.0 + 2440587.5;
}

/// The library's sun by VSOP87. It speaks of the equinox of 2000; precession brings it to the date.
ln_equ_posn library_sun(Instant at) {
  ln_equ_posn of_2000{}, of_date{};
  ln_get_solar_equ_coords(julian_of(at), &of_2000);
  ln_get_equ_prec(&of_2000, julian_of(at), &of_date);
  return of_date;
}

double altitude(ln_equ_posn sun, double sidereal, const Place& place) {
  ln_lnlat_posn observer{place.longitude.value, place.latitude.value};
  ln_hrz_posn horizontal{};
  ln_get_hrz_from_equ_sidereal_time(&sun, &observer, sidereal, &horizontal);
  return horizontal.alt;
}

/// How far an instant lies from the library's crossing of the horizon.
struct Off {
  double degrees;  // the library's altitude there, above the horizon of rise and set
  double seconds;  // the same over the sky's speed, which hardly bends within such short times
};

Off off_horizon(Instant at, const Place& place) {
  const ln_equ_posn sun = library_sun(at);
  const double sidereal = ln_get_apparent_sidereal_time(julian_of(at));
  const double now = altitude(sun, sidereal, place);
  const double minute_later = altitude(sun, sidereal + 1.00274 / 60, place);
  return {now - horizon, (now - horizon) / ((minute_later - now) / 60.0)};
}

/// A longitude of its own for each latitude, so that rise and set fall on all times of the day.
Place at_latitude(int latitude) {
  const double longitude = std::remainder(137.5 * latitude, 360.0);
  return {Degree(latitude), Degree(longitude), Metre(0)};
}

}  // namespace

TEST_CASE("rise and set agree with libnova from 60 south to 65 north over 30 years") {
  outside::Largest rise, set, in_far_north, altitudes;
  for (int latitude = -60; latitude <= 65; latitude += 5) {
    const Place place = at_latitude(latitude);
    for (local_days day = first_day; day <= last_day; day += days{10}) {
      const SunDay sun = sun_day(day, place);
      REQUIRE((sun.rise && sun.set));
      const Off up = off_horizon(*sun.rise, place), down = off_horizon(*sun.set, place);
      (latitude == 65 ? in_far_north : rise).see(up.seconds, 0);
      (latitude == 65 ? in_far_north : set).see(down.seconds, 0);
      altitudes.see(up.degrees, 0);
      altitudes.see(down.degrees, 0);
    }
  }
  // 0.01° of the method (Meeus ch. 25) and 0.005° of nutation are 4 s at the equator, and the more
  // the flatter the sun comes up. A horizon for a star instead of the sun's upper edge is a minute
  // off, one without refraction two, a slip of 15 min 900 s.
  const double bound = 12, bound_north = 30, bound_altitude = 0.03;
  CHECK(rise.value() <= bound);
  CHECK(set.value() <= bound);
  CHECK(in_far_north.value() <= bound_north);
  CHECK(altitudes.value() <= bound_altitude);
  const Place equator = at_latitude(0);
  const Off star = off_horizon(*sun_day(first_day, equator).rise + seconds{64}, equator);
  CHECK(std::abs(star.seconds) > bound_north);
  CHECK(std::abs(star.degrees) > bound_altitude);
  outside::report("sunrise; latitudes -60...60 by 5; 1996-2025 by 10 d", library, rise, bound, "s");
  outside::report("sunset; latitudes -60...60 by 5; 1996-2025 by 10 d", library, set, bound, "s");
  outside::report("sunrise and sunset at latitude 65", library, in_far_north, bound_north, "s");
  outside::report("the sun's altitude at our rise and set", library, altitudes, bound_altitude,
                  "deg");
}

TEST_CASE("the altitude agrees with libnova at every latitude over 30 years") {
  // 0.03° is 7 s of the sky's turn; a longitude taken the wrong way round is off by tens of
  // degrees, mean instead of true solar time by up to 4°.
  const double bound = 0.03;
  outside::Largest largest, without_sign;
  for (local_days day = first_day; day <= last_day; day += days{10}) {
    const auto number = (day - first_day).count() / 10;
    const Instant at = sys_seconds{day.time_since_epoch()} + hours{number * 7 % 24};
    const ln_equ_posn sun = library_sun(at);
    const double sidereal = ln_get_apparent_sidereal_time(julian_of(at));
    for (int latitude = -60; latitude <= 65; ++latitude) {
      Place place = at_latitude(latitude);
      const double theirs = altitude(sun, sidereal, place);
      largest.see(sun_altitude(at, place).value, theirs);
      place.longitude = -place.longitude;
      without_sign.see(sun_altitude(at, place).value, theirs);
    }
  }
  CHECK(largest.value() <= bound);
  CHECK(without_sign.value() > bound);
  outside::report("the sun's altitude; latitudes -60...65 by 1; 1996-2025 by 10 d", library,
                  largest, bound, "deg");
}

TEST_CASE("declination and right ascension agree with libnova") {
  // The method promises 0.01° (Meeus ch. 25); an arcminute covers nutation handled apart. Without
  // precession the year 2026 would be off by 0.36°, without the equation of centre by up to 1.9°.
  const double bound = 0.0167;
  outside::Largest declination, ascension, of_2000;
  for (Instant at = sys_days{year{1990} / 1 / 1}; at < sys_days{year{2060} / 1 / 1};
       at += hours{24 * 37 + 5}) {
    const ln_equ_posn theirs = library_sun(at);
    ln_equ_posn unmoved{};
    ln_get_solar_equ_coords(julian_of(at), &unmoved);
    const SunPosition ours = sun_position(at);
    declination.see(ours.declination.value, theirs.dec);
    ascension.see(std::remainder(ours.right_ascension.value - theirs.ra, 360.0), 0);
    of_2000.see(std::remainder(ours.right_ascension.value - unmoved.ra, 360.0), 0);
  }
  CHECK(declination.value() <= bound);
  CHECK(ascension.value() <= bound);
  CHECK(of_2000.value() > bound);
  outside::report("the sun's declination; 1990-2059", library, declination, bound, "deg");
  outside::report("the sun's right ascension; 1990-2059", library, ascension, bound, "deg");
}
#endif
