// Where a humid day begins and ends: 18:00 mean solar time (science §0), by hand.
#include "core/risk/infection.hpp"
#include "support/catch.hpp"

using namespace antherd;
using namespace std::chrono;

TEST_CASE("a humid day runs from 18:00 to 18:00 solar and bears the date on which it ends") {
  const auto day = [](unsigned number) { return CivilDay{local_days{2026y / July / number}}; };
  const HourStart midnight{sys_days{2026y / July / 14}};
  const Degree greenwich{0}, two_hours_west{-30};
  CHECK(risk::humid_day_of(midnight + hours{17}, greenwich) == day(14));
  CHECK(risk::humid_day_of(midnight + hours{18}, greenwich) == day(15));
  CHECK(risk::humid_day_of(midnight + hours{23}, greenwich) == day(15));
  CHECK(risk::humid_day_of(midnight + hours{24}, greenwich) == day(15));
  // 30° west the sun is two hours later: 18:00 there is 20:00 UTC.
  CHECK(risk::humid_day_of(midnight + hours{19}, two_hours_west) == day(14));
  CHECK(risk::humid_day_of(midnight + hours{20}, two_hours_west) == day(15));
  CHECK(risk::ends_humid_day(midnight + hours{17}, greenwich));
  CHECK_FALSE(risk::ends_humid_day(midnight + hours{23}, greenwich));
  CHECK(risk::ends_humid_day(midnight + hours{19}, two_hours_west));
}
