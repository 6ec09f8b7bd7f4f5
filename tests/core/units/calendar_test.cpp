// Clock readings and civil days of zones given as plain data. The changes are those of real zones
// as printed by `zdump -v` (tzdata 2026f); only the data are used, no zone database.
#include "core/units/time.hpp"
#include "support/catch.hpp"

using namespace antherd;
using namespace std::chrono;

namespace {

Instant utc(int y, unsigned m, unsigned d, int h = 0, int min = 0, int s = 0) {
  return sys_days(year{y} / month{m} / day{d}) + hours{h} + minutes{min} + seconds{s};
}
CivilTime local(int y, unsigned m, unsigned d, int h = 0, int min = 0, int s = 0) {
  return local_days(year{y} / month{m} / day{d}) + hours{h} + minutes{min} + seconds{s};
}
CivilDay civil_day(int y, unsigned m, unsigned d) {
  return local_days(year{y} / month{m} / day{d});
}

// zdump -v -c 2021,2022 for each zone
const Calendar& los_angeles() {
  static const Calendar zone("America/Los_Angeles", {{utc(2020, 11, 1, 9), Seconds{-28800}},
                                                     {utc(2021, 3, 14, 10), Seconds{-25200}},
                                                     {utc(2021, 11, 7, 9), Seconds{-28800}}});
  return zone;
}
const Calendar& lord_howe() {
  static const Calendar zone("Australia/Lord_Howe", {{utc(2020, 10, 3, 15, 30), Seconds{39600}},
                                                     {utc(2021, 4, 3, 15), Seconds{37800}},
                                                     {utc(2021, 10, 2, 15, 30), Seconds{39600}}});
  return zone;
}
const Calendar& havana() {
  static const Calendar zone("America/Havana", {{utc(2020, 11, 1, 5), Seconds{-18000}},
                                                {utc(2021, 3, 14, 5), Seconds{-14400}},
                                                {utc(2021, 11, 7, 5), Seconds{-18000}}});
  return zone;
}
const Calendar& beirut() {
  static const Calendar zone("Asia/Beirut", {{utc(2020, 10, 24, 21), Seconds{7200}},
                                             {utc(2021, 3, 27, 22), Seconds{10800}},
                                             {utc(2021, 10, 30, 21), Seconds{7200}}});
  return zone;
}
const Calendar& apia() {  // zdump -v -c 2011,2012: 30 December 2011 did not exist
  static const Calendar zone("Pacific/Apia", {{utc(2011, 9, 24, 14), Seconds{-36000}},
                                              {utc(2011, 12, 30, 10), Seconds{50400}}});
  return zone;
}

}  // namespace

TEST_CASE("an offset holds from its change on, and the first one before all changes") {
  CHECK(los_angeles().offset_at(utc(2021, 3, 14, 9, 59, 59)) == Seconds{-28800});
  CHECK(los_angeles().offset_at(utc(2021, 3, 14, 10)) == Seconds{-25200});
  CHECK(los_angeles().offset_at(utc(2021, 11, 7, 8, 59, 59)) == Seconds{-25200});
  CHECK(los_angeles().offset_at(utc(2021, 11, 7, 9)) == Seconds{-28800});
  CHECK(los_angeles().offset_at(utc(1970, 1, 1)) == Seconds{-28800});
  CHECK(los_angeles().offset_at(utc(2106, 12, 31)) == Seconds{-28800});
  CHECK(los_angeles().name() == "America/Los_Angeles");
}

TEST_CASE("a clock reading is one instant, none, or two in order") {
  const auto plain = los_angeles().meaning_of(local(2021, 7, 14, 20));
  CHECK(plain.first == utc(2021, 7, 15, 3));
  CHECK_FALSE(plain.second);

  const auto skipped = los_angeles().meaning_of(local(2021, 3, 14, 2, 30));
  CHECK_FALSE(skipped.first);
  CHECK_FALSE(skipped.second);
  CHECK(los_angeles().meaning_of(local(2021, 3, 14, 1, 59, 59)).first ==
        utc(2021, 3, 14, 9, 59, 59));
  CHECK(los_angeles().meaning_of(local(2021, 3, 14, 3)).first == utc(2021, 3, 14, 10));

  const auto repeated = los_angeles().meaning_of(local(2021, 11, 7, 1, 30));
  CHECK(repeated.first == utc(2021, 11, 7, 8, 30));
  CHECK(repeated.second == utc(2021, 11, 7, 9, 30));
  CHECK_FALSE(los_angeles().meaning_of(local(2021, 11, 7, 0, 59, 59)).second);
  CHECK(los_angeles().meaning_of(local(2021, 11, 7, 1)).second == utc(2021, 11, 7, 9));
  CHECK_FALSE(los_angeles().meaning_of(local(2021, 11, 7, 2)).second);
}

TEST_CASE("half an hour of summer time skips and repeats half an hour only") {
  CHECK_FALSE(lord_howe().meaning_of(local(2021, 10, 3, 2, 15)).first);
  CHECK(lord_howe().meaning_of(local(2021, 10, 3, 2, 30)).first == utc(2021, 10, 2, 15, 30));
  const auto repeated = lord_howe().meaning_of(local(2021, 4, 4, 1, 45));
  CHECK(repeated.first == utc(2021, 4, 3, 14, 45));
  CHECK(repeated.second == utc(2021, 4, 3, 15, 15));
  CHECK_FALSE(lord_howe().meaning_of(local(2021, 4, 4, 1, 29, 59)).second);
  CHECK_FALSE(lord_howe().meaning_of(local(2021, 4, 4, 2)).second);
}

TEST_CASE("a day starts at its first instant, also where midnight is skipped or repeated") {
  CHECK(los_angeles().start_of(civil_day(2021, 7, 14)) == utc(2021, 7, 14, 7));
  // Havana and Beirut put the clock forward at midnight: the day starts at 01:00 there.
  CHECK(havana().start_of(civil_day(2021, 3, 14)) == utc(2021, 3, 14, 5));
  CHECK(havana().civil(utc(2021, 3, 14, 5)) == local(2021, 3, 14, 1));
  CHECK(beirut().start_of(civil_day(2021, 3, 28)) == utc(2021, 3, 27, 22));
  CHECK(beirut().day_of(utc(2021, 3, 27, 21, 59, 59)) == civil_day(2021, 3, 27));
  CHECK(beirut().day_of(utc(2021, 3, 27, 22)) == civil_day(2021, 3, 28));
  // Havana repeats 00:00 to 01:00: the first pass starts the day.
  CHECK(havana().start_of(civil_day(2021, 11, 7)) == utc(2021, 11, 7, 4));
  // Beirut repeats 23:00 to 24:00 of the day before: midnight comes once, after both.
  CHECK(beirut().start_of(civil_day(2021, 10, 31)) == utc(2021, 10, 30, 22));
  CHECK(beirut().day_of(utc(2021, 10, 30, 21, 30)) == civil_day(2021, 10, 30));
}

TEST_CASE("every instant of two years lies in the day whose start and end hold it") {
  for (const Calendar* zone : {&los_angeles(), &lord_howe(), &havana(), &beirut()}) {
    int wrong = 0;
    for (Instant at = utc(2020, 12, 1); at < utc(2022, 3, 1); at += Seconds{900}) {
      const CivilDay day = zone->day_of(at);
      if (at < zone->start_of(day) || at >= zone->start_of(day + days{1})) ++wrong;
      const auto meaning = zone->meaning_of(zone->civil(at));
      if (meaning.first != at && meaning.second != at) ++wrong;
    }
    INFO(zone->name());
    CHECK(wrong == 0);
  }
}

TEST_CASE("a skipped reading stands for the change that skipped it") {
  CHECK(los_angeles().at(local(2021, 3, 14, 2)) == utc(2021, 3, 14, 10));
  CHECK(los_angeles().at(local(2021, 3, 14, 2, 59, 59)) == utc(2021, 3, 14, 10));
  CHECK(los_angeles().at(local(2021, 11, 7, 1, 30)) == utc(2021, 11, 7, 8, 30));
}

TEST_CASE("a whole day that a zone skipped is empty and starts where the next one starts") {
  CHECK_FALSE(apia().meaning_of(local(2011, 12, 30, 12)).first);
  CHECK(apia().start_of(civil_day(2011, 12, 30)) == utc(2011, 12, 30, 10));
  CHECK(apia().start_of(civil_day(2011, 12, 31)) == utc(2011, 12, 30, 10));
  CHECK(apia().day_of(utc(2011, 12, 30, 9, 59, 59)) == civil_day(2011, 12, 29));
  CHECK(apia().day_of(utc(2011, 12, 30, 10)) == civil_day(2011, 12, 31));
}

TEST_CASE("of two changes within two days a skipped reading stands for its own") {
  // Invented: forward one hour at 02:00 on two days running.
  const Calendar zone("invented", {{utc(2020, 1, 1), Seconds{0}},
                                   {utc(2021, 5, 1, 2), Seconds{3600}},
                                   {utc(2021, 5, 2, 1), Seconds{7200}}});
  CHECK(zone.at(local(2021, 5, 1, 2, 30)) == utc(2021, 5, 1, 2));
  CHECK(zone.at(local(2021, 5, 2, 2, 30)) == utc(2021, 5, 2, 1));
}

TEST_CASE("a fixed offset never skips or repeats, and no changes at all mean UTC") {
  const Calendar zone = Calendar::fixed(Seconds{5 * 3600 + 45 * 60}, "+05:45");
  CHECK(zone.name() == "+05:45");
  CHECK(zone.meaning_of(local(2021, 3, 14, 2, 30)).first == utc(2021, 3, 13, 20, 45));
  CHECK(zone.start_of(civil_day(1970, 1, 1)) == utc(1969, 12, 31, 18, 15));
  CHECK(zone.day_of(utc(2106, 2, 7, 18, 15)) == civil_day(2106, 2, 8));
  CHECK(Calendar("empty", {}).offset_at(utc(2021, 1, 1)) == Seconds{0});
  CHECK(Calendar().name() == "UTC");
}

TEST_CASE("an hour is named by its start, also before 1970") {
  CHECK(hour_of(utc(2021, 7, 14, 13, 59, 59)) == sys_days(2021y / July / 14) + hours{13});
  CHECK(hour_of(utc(2021, 7, 14, 14)) == sys_days(2021y / July / 14) + hours{14});
  CHECK(hour_of(utc(1969, 12, 31, 23, 0, 1)) == sys_days(1969y / December / 31) + hours{23});
  CHECK(end_of(hour_of(utc(2021, 7, 14, 13, 20))) == utc(2021, 7, 14, 14));
  CHECK(middle_of(hour_of(utc(2021, 7, 14, 13, 20))) == utc(2021, 7, 14, 13, 30));
}
