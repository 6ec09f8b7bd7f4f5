// The sun against Meeus' worked example and against a general astronomy library.
#include "core/weather/sun.hpp"

#include <chrono>
#include <cstdio>

#include "core/weather/evaporation.hpp"
#include "support/table.hpp"

#if __has_include(<libnova/libnova.h>)
#include <libnova/libnova.h>
#define WITH_LIBNOVA
#endif

using namespace antherd;
using namespace antherd::weather;
using namespace std::chrono;

namespace {

year_month_day date_of(const std::string& text) {
  int y = 0;
  unsigned m = 0, d = 0;
  REQUIRE(std::sscanf(text.c_str(), "%d-%u-%u", &y, &m, &d) == 3);
  return year{y} / month{m} / day{d};
}

double worked_out(const tables::Row& row) {
  const std::string& formula = row.text("formula");
  const auto date = date_of(row.text("date"));
  if (formula == "declination") return sun_position(sys_days{date}).declination.value;
  if (formula == "right_ascension") return sun_position(sys_days{date}).right_ascension.value;
  const Place place{Degree(row.number("latitude")), Degree(row.number("longitude")), Metre(0)};
  if (formula == "day_length") return day_length_hours(local_days{date}, place);
  const HourStart midnight{sys_days{date}};
  if (formula == "radiation_15_utc") return extraterrestrial_radiation(midnight + hours{15}, place);
  REQUIRE(formula == "daily_radiation");
  double sum = 0.0;
  for (int h = 0; h < 24; ++h) sum += extraterrestrial_radiation(midnight + hours{h}, place);
  return sum;
}

const Place places[] = {
    {Degree(46.73), Degree(-117.18), Metre(780)}, {Degree(-33.4), Degree(-70.6), Metre(520)},
    {Degree(0.0), Degree(179.9), Metre(0)},       {Degree(59.3), Degree(18.1), Metre(20)},
    {Degree(16.2), Degree(-16.25), Metre(8)},     {Degree(65.0), Degree(-147.7), Metre(130)}};

}  // namespace

TEST_CASE("the sun agrees with worked examples") {
  for (const auto& row : tables::read("weather-sun.csv")) tables::check(row, worked_out(row));
}

TEST_CASE("at rise and set the sun turns up and down within the second") {
  for (const Place& place : places) {
    for (local_days day{year{2027} / 1 / 3}; day < local_days{year{2028} / 3 / 1}; day += days{9}) {
      const SunDay sun = sun_day(day, place);
      INFO(place.latitude.value << " on day " << day.time_since_epoch().count());
      REQUIRE(sun.rise);
      REQUIRE(sun.set);
      CHECK(sun_is_up(*sun.rise, place));
      CHECK_FALSE(sun_is_up(*sun.rise - seconds{1}, place));
      CHECK_FALSE(sun_is_up(*sun.set, place));
      CHECK(sun_is_up(*sun.set - seconds{1}, place));
      // Both belong to the mean solar day that was asked for.
      CHECK(floor<days>(solar_time(*sun.rise, place.longitude)) == day);
      CHECK(floor<days>(solar_time(*sun.set - seconds{1}, place.longitude)) == day);
    }
  }
}

TEST_CASE("a place without rise or set says none") {
  const Place north{Degree(69.65), Degree(18.96), Metre(0)};
  for (const auto date : {year{2026} / 6 / 21, year{2026} / 12 / 21}) {
    const SunDay sun = sun_day(local_days{date}, north);
    CHECK_FALSE(sun.rise);
    CHECK_FALSE(sun.set);
  }
  const Place pole{Degree(90), Degree(0), Metre(0)};
  CHECK(day_length_hours(local_days{year{2026} / 6 / 21}, pole) == 24.0);
  CHECK(day_length_hours(local_days{year{2026} / 12 / 21}, pole) == 0.0);
}

TEST_CASE("mean solar time is UTC and longitude") {
  const Instant noon = sys_days{year{2026} / 7 / 1} + hours{12};
  // By hand: −117.18° / 15 = −7.812 h = −7 h 48 min 43.2 s.
  const CivilTime west = solar_time(noon, Degree(-117.18));
  CHECK(west == local_days{year{2026} / 7 / 1} + hours{4} + minutes{11} + seconds{17});
  CHECK(from_solar_time(west, Degree(-117.18)) == noon);
  CHECK(solar_time(noon, Degree(180)) == local_days{year{2026} / 7 / 2});
}

#ifdef WITH_LIBNOVA
namespace {

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

double library_altitude(Instant at, const Place& place) {
  ln_equ_posn sun = library_sun(at);
  ln_lnlat_posn observer{place.longitude.value, place.latitude.value};
  ln_hrz_posn horizontal{};
  ln_get_hrz_from_equ(&sun, &observer, julian_of(at), &horizontal);
  return horizontal.alt;
}

}  // namespace

TEST_CASE("declination and right ascension agree with libnova") {
  // The method promises 0.01° (Meeus ch. 25); an arcminute covers nutation handled apart. Without
  // precession the year 2026 would be off by 0.36°, without the equation of centre by up to 1.9°.
  for (Instant at = sys_days{year{1990} / 1 / 1}; at < sys_days{year{2060} / 1 / 1};
       at += hours{24 * 37 + 5}) {
    const ln_equ_posn theirs = library_sun(at);
    const SunPosition ours = sun_position(at);
    CHECK(std::abs(ours.declination.value - theirs.dec) < 0.0167);
    CHECK(std::abs(std::remainder(ours.right_ascension.value - theirs.ra, 360.0)) < 0.0167);
  }
}

TEST_CASE("the altitude agrees with libnova at every hour") {
  // 0.03° is 7 s of the sky's turn; a longitude taken the wrong way round is off by tens of
  // degrees, mean instead of true solar time by up to 4°.
  for (const Place& place : places) {
    for (Instant at = sys_days{year{2026} / 1 / 1}; at < sys_days{year{2027} / 1 / 1};
         at += hours{61}) {
      CHECK(std::abs(sun_altitude(at, place).value - library_altitude(at, place)) < 0.03);
    }
  }
}

TEST_CASE("at our rise and set libnova's sun stands at the horizon") {
  // A horizon of −0.567° (a star's) would be off by 0.266°, sea level without refraction by 0.833°.
  for (const Place& place : places) {
    for (local_days day{year{2026} / 1 / 2}; day < local_days{year{2027} / 1 / 1};
         day += days{11}) {
      const SunDay sun = sun_day(day, place);
      REQUIRE(sun.rise);
      REQUIRE(sun.set);
      CHECK(std::abs(library_altitude(*sun.rise, place) - -0.833) < 0.03);
      CHECK(std::abs(library_altitude(*sun.set, place) - -0.833) < 0.03);
      // The one comes up, the other goes down.
      CHECK(library_altitude(*sun.rise + minutes{20}, place) > -0.7);
      CHECK(library_altitude(*sun.set + minutes{20}, place) < -0.95);
    }
  }
}
#endif
