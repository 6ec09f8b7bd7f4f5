// Days, offsets and clock readings of real zones against their table. The years are gone by, or
// follow laws that have held since 2007.
#include <cstdio>

#include "edge/clock/clock.hpp"
#include "support/table.hpp"

using namespace antherd;
using namespace std::chrono;

namespace {

CivilTime reading_of(const std::string& text) {
  int y = 0, h = 0, minute = 0;
  unsigned m = 0, d = 0;
  REQUIRE(std::sscanf(text.c_str(), "%d-%u-%u %d:%d", &y, &m, &d, &h, &minute) >= 3);
  return local_days{year{y} / month{m} / day{d}} + hours{h} + minutes{minute};
}

double worked_out(const tables::Row& row) {
  const Result<Calendar> zone = clock::calendar_of(row.text("zone"));
  REQUIRE(zone);
  const CivilTime reading = reading_of(row.text("at"));
  const CivilDay day = floor<days>(reading);
  const std::string& formula = row.text("formula");
  if (formula == "day_hours") {
    return static_cast<double>((zone->start_of(day + days{1}) - zone->start_of(day)).count()) /
           3600;
  }
  if (formula == "start_utc") {
    return static_cast<double>(zone->start_of(day).time_since_epoch().count());
  }
  if (formula == "offset_hours") {
    return static_cast<double>(zone->offset_at(Instant(reading.time_since_epoch())).count()) / 3600;
  }
  REQUIRE(formula == "meanings");
  const Calendar::Meaning meaning = zone->meaning_of(reading);
  return (meaning.first ? 1 : 0) + (meaning.second ? 1 : 0);
}

}  // namespace

TEST_CASE("days and clock readings agree with their table") {
  for (const auto& row : tables::read("clock-days.csv")) tables::check(row, worked_out(row));
}
