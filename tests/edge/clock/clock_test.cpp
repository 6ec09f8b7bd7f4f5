// The machine's clock and its zone database. Expected instants are those printed by
// `zdump -v -c 2021,2022 ZONE` (tzdata 2026f): years gone by, which no new law changes.
#include "edge/clock/clock.hpp"

#include <sys/timex.h>

#include <ctime>

#include "support/catch.hpp"

using namespace antherd;
using namespace std::chrono;

namespace {

Instant utc(int y, unsigned m, unsigned d, int h = 0, int min = 0) {
  return sys_days(year{y} / month{m} / day{d}) + hours{h} + minutes{min};
}

struct Expected {
  const char* zone;
  Instant change;
  int before, after;  // seconds, local minus UTC
};

}  // namespace

TEST_CASE("offsets of five zones change at the published instants") {
  const Expected expected[] = {
      {"America/Los_Angeles", utc(2021, 3, 14, 10), -28800, -25200},
      {"America/Los_Angeles", utc(2021, 11, 7, 9), -25200, -28800},
      {"America/Los_Angeles", utc(1970, 4, 26, 10), -28800, -25200},
      {"Europe/Madrid", utc(2021, 3, 28, 1), 3600, 7200},
      {"Europe/Madrid", utc(2021, 10, 31, 1), 7200, 3600},
      {"Australia/Lord_Howe", utc(2021, 4, 3, 15), 39600, 37800},
      {"Australia/Lord_Howe", utc(2021, 10, 2, 15, 30), 37800, 39600},
      {"America/Santiago", utc(2021, 4, 4, 3), -10800, -14400},
      {"America/Santiago", utc(2021, 9, 5, 4), -14400, -10800},
      {"Asia/Kathmandu", utc(1985, 12, 31, 18, 30), 19800, 20700},
      {"America/Havana", utc(2021, 3, 14, 5), -18000, -14400},
      {"Pacific/Apia", utc(2011, 12, 30, 10), -36000, 50400},
  };
  for (const Expected& row : expected) {
    INFO(row.zone << " " << row.change.time_since_epoch().count());
    const Result<Calendar> zone = clock::calendar_of(row.zone);
    REQUIRE(zone);
    CHECK(zone->name() == row.zone);
    CHECK(zone->offset_at(row.change - Seconds{1}) == Seconds{row.before});
    CHECK(zone->offset_at(row.change) == Seconds{row.after});
  }
}

TEST_CASE("summer time goes on after the last year that a zone file lists") {
  for (const char* name : {"America/New_York", "Australia/Lord_Howe", "Europe/Madrid"}) {
    INFO(name);
    const Result<Calendar> zone = clock::calendar_of(name);
    REQUIRE(zone);
    for (const int y : {2038, 2050, 2100, 2106}) {
      CHECK(zone->offset_at(utc(y, 1, 15)) == zone->offset_at(utc(2037, 1, 15)));
      CHECK(zone->offset_at(utc(y, 7, 15)) == zone->offset_at(utc(2037, 7, 15)));
      CHECK(zone->offset_at(utc(y, 7, 15)) != zone->offset_at(utc(y, 1, 15)));
    }
  }
}

TEST_CASE("zones without summer time, other names of a zone, and UTC are known") {
  const Result<Calendar> kathmandu = clock::calendar_of("Asia/Kathmandu");
  REQUIRE(kathmandu);
  CHECK(kathmandu->offset_at(utc(2100, 7, 1)) == Seconds{20700});
  const Result<Calendar> pacific = clock::calendar_of("US/Pacific");
  REQUIRE(pacific);
  CHECK(pacific->offset_at(utc(2021, 7, 1)) == Seconds{-25200});
  const Result<Calendar> universal = clock::calendar_of("UTC");
  REQUIRE(universal);
  CHECK(universal->offset_at(utc(2106, 12, 31)) == Seconds{0});
}

TEST_CASE("an unknown zone is refused with the nearest names") {
  const auto next_of = [](const char* name) {
    const Result<Calendar> zone = clock::calendar_of(name);
    REQUIRE_FALSE(zone);
    CHECK(zone.failure().on_what == name);
    return zone.failure().what_next;
  };
  CHECK(next_of("America/Los_Angles") == "did you mean America/Los_Angeles?");
  CHECK(next_of("america/los angeles") == "did you mean America/Los_Angeles?");
  CHECK(next_of("Los Angeles") == "did you mean America/Los_Angeles?");
  CHECK(next_of("America/Madrid") == "did you mean Europe/Madrid?");
  CHECK(next_of("Farmland") == "use an IANA name such as \"Europe/Madrid\"");
}

TEST_CASE("names that are no zones are refused, whatever lies in the database's folder") {
  for (const char* name : {"", "right/UTC", "posix/UTC", "posixrules", "localtime", "Factory",
                           "../../etc/passwd", "/etc/localtime", "zone.tab", "America"}) {
    INFO(name);
    CHECK_FALSE(clock::calendar_of(name));
  }
  CHECK_FALSE(clock::calendar_of(std::string("UTC\0x", 5)));
  CHECK_FALSE(clock::calendar_of(std::string(100'000, 'A')));
}

TEST_CASE("the wall clock is the C library's, to the second") {
  const auto before = static_cast<long long>(std::time(nullptr));
  const auto now = static_cast<long long>(clock::wall_now().time_since_epoch().count());
  const auto after = static_cast<long long>(std::time(nullptr));
  // The C library's coarse clock may lag by a tick at the turn of a second.
  CHECK(now >= before);
  CHECK(now <= after + 1);
}

TEST_CASE("the clock is set when the kernel holds its error below 16 s") {
  timex state{};
  const bool asked = adjtimex(&state) != -1;
  CHECK(clock::wall_clock_set() == (asked && state.maxerror < 16'000'000));
}
