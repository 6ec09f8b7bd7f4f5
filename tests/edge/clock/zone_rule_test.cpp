// The rule lines of zone files. Expected instants: `zdump -v -c 2100,2107` (tzdata 2026f).
#include "edge/clock/zone_rule.hpp"

#include "support/catch.hpp"

using namespace antherd;
using namespace std::chrono;
using clock::changes_by_rule;

namespace {
Instant utc(int y, unsigned m, unsigned d, int h = 0, int min = 0) {
  return sys_days(year{y} / month{m} / day{d}) + hours{h} + minutes{min};
}
}  // namespace

TEST_CASE("a northern rule gives spring and autumn") {
  const auto changes = changes_by_rule("PST8PDT,M3.2.0,M11.1.0", 2100, 2100);
  REQUIRE(changes);
  REQUIRE(changes->size() == 2);
  CHECK(changes->at(0).from == utc(2100, 3, 14, 10));
  CHECK(changes->at(0).offset == Seconds{-25200});
  CHECK(changes->at(1).from == utc(2100, 11, 7, 9));
  CHECK(changes->at(1).offset == Seconds{-28800});
}

TEST_CASE("a southern rule of half an hour, with names in brackets") {
  const auto changes = changes_by_rule("<+1030>-10:30<+11>-11,M10.1.0,M4.1.0", 2106, 2106);
  REQUIRE(changes);
  REQUIRE(changes->size() == 2);
  CHECK(changes->at(0).from == utc(2106, 4, 3, 15));
  CHECK(changes->at(0).offset == Seconds{37800});
  CHECK(changes->at(1).from == utc(2106, 10, 2, 15, 30));
  CHECK(changes->at(1).offset == Seconds{39600});
}

TEST_CASE("winter time as the exception, the last week, and times beyond the day") {
  // Europe/Dublin, zdump -v -c 2021,2022
  const auto dublin = changes_by_rule("IST-1GMT0,M10.5.0,M3.5.0/1", 2021, 2021);
  REQUIRE(dublin);
  CHECK(dublin->at(0).from == utc(2021, 3, 28, 1));
  CHECK(dublin->at(0).offset == Seconds{3600});
  CHECK(dublin->at(1).from == utc(2021, 10, 31, 1));
  CHECK(dublin->at(1).offset == Seconds{0});
  // Saturday 22:00 written as Sunday -2, by hand: 27 March 2021, 22:00 at UTC-2.
  const auto negative = changes_by_rule("<-02>2<-01>,M3.5.0/-2,M10.5.0/-1", 2021, 2021);
  REQUIRE(negative);
  CHECK(negative->at(0).from == utc(2021, 3, 28, 0));
  CHECK(negative->at(1).from == utc(2021, 10, 31, 0));
}

TEST_CASE("days of the year, with and without the leap day, by hand") {
  const auto julian = changes_by_rule("AAA0BBB,J60/0,J365/0", 2024, 2024);
  REQUIRE(julian);
  CHECK(julian->at(0).from == utc(2024, 3, 1));
  const auto counted = changes_by_rule("AAA0BBB,59/0,300/0", 2024, 2024);
  REQUIRE(counted);
  CHECK(counted->at(0).from == utc(2024, 2, 29));
}

TEST_CASE("a rule without summer time is one offset") {
  const auto changes = changes_by_rule("<+0545>-5:45", 2037, 2106);
  REQUIRE(changes);
  REQUIRE(changes->size() == 1);
  CHECK(changes->at(0).offset == Seconds{20700});
}

TEST_CASE("texts that do not follow the form give nothing") {
  for (const char* text :
       {"", "8", "PST", "PST8PDT", "PST8PDT,", "PST8PDT,M3.2.0", "<PST8", "PST8PDT,M13.2.0,M11.1.0",
        "PST8PDT,M3.6.0,M11.1.0", "PST999", "PST8PDT,M3.2.7,M11.1.0", "PST8PDT,M3.2.0,M11.1.0x",
        "PST8:60", "PST8PDT,366,3", "PST8PDT,J0,J3", "PST8PDT,M3.2.0/200,M11.1.0"}) {
    INFO(text);
    CHECK_FALSE(changes_by_rule(text, 2037, 2038));
  }
}
