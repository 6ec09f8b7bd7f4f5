// The sun against Meeus' worked example and by hand; sun_library.cpp has the astronomy library.
#include "core/weather/sun.hpp"

#include <chrono>
#include <cstdio>

#include "core/weather/evaporation.hpp"
#include "support/table.hpp"

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
