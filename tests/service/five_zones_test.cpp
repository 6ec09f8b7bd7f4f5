// The same small season in five zones, in flower over a change of the clock, a leap day or the
// year's end, through the live service. What must come of it is counted by hand from the zone's own
// rules (tzdata, read with zdump); a farm whose clock never changes and that has the same weather
// in UTC is the second witness.
#include <algorithm>
#include <set>

#include "ground.hpp"
#include "support/catch.hpp"
#include "support/weather_generator.hpp"

using namespace ground;

namespace {

struct Place {
  const char* zone;
  const char* unchanging;  // a zone near it that knows no change (POSIX sign: minus is east)
  double latitude, longitude;
};
constexpr Place dry_steppe{"America/Los_Angeles", "Etc/GMT+8", 46.73, -117.18};
constexpr Place plateau{"Europe/Madrid", "Etc/GMT", 40.4, -3.6};
constexpr Place half_hour_island{"Australia/Lord_Howe", "Etc/GMT-10", -31.55, 159.08};
constexpr Place change_at_midnight{"America/Santiago", "Etc/GMT+4", -36.6, -72.1};
constexpr Place odd_minutes{"Asia/Kathmandu", "Etc/GMT-6", 27.7, 85.3};

/// One change, leap day or year's end; the field is in flower and hot the day before, on the day,
/// and the day after.
struct Event {
  Place place;
  const char* name;
  int year;
  unsigned month, day;
  int hours;  // whole hours of UTC that begin on that civil day, by hand
  const char* stamps;
};

// Hours by hand: Lord Howe's day of 24.5 h runs from 13:00 to 13:30 UTC of the next day, and 25
// hours begin in it; its day of 23.5 h from 13:30 to 13:00, and 23 begin in it. In Santiago the
// 6th of September begins at 01:00, and the 4th of April has 23:00 twice.
const std::vector<Event> events{
    {dry_steppe, "put forward", 2026, 3, 8, 23, "farm"},
    {dry_steppe, "put back", 2026, 11, 1, 25, "farm"},
    {dry_steppe, "leap day", 2028, 2, 29, 24, "utc"},
    {dry_steppe, "year's end", 2026, 12, 31, 24, "farm"},
    {plateau, "put forward", 2026, 3, 29, 23, "utc"},
    {plateau, "put back", 2026, 10, 25, 25, "farm"},
    {plateau, "leap day", 2028, 2, 29, 24, "farm"},
    {plateau, "year's end", 2026, 12, 31, 24, "utc"},
    {half_hour_island, "put forward", 2026, 10, 4, 23, "farm"},
    {half_hour_island, "put back", 2026, 4, 5, 25, "farm"},
    {half_hour_island, "leap day", 2028, 2, 29, 24, "farm"},
    {half_hour_island, "year's end", 2026, 12, 31, 24, "utc"},
    {change_at_midnight, "put forward", 2026, 9, 6, 23, "farm"},
    {change_at_midnight, "put back", 2026, 4, 4, 25, "farm"},
    {change_at_midnight, "leap day", 2028, 2, 29, 24, "utc"},
    {change_at_midnight, "year's end", 2026, 12, 31, 24, "farm"},
    {odd_minutes, "no change in spring", 2026, 3, 29, 24, "farm"},
    {odd_minutes, "no change in autumn", 2026, 10, 25, 24, "utc"},
    {odd_minutes, "leap day", 2028, 2, 29, 24, "farm"},
    {odd_minutes, "year's end", 2026, 12, 31, 24, "farm"},
};

CivilDay day_of(const Event& event) {
  return std::chrono::local_days(std::chrono::year(event.year) / event.month / event.day);
}

Farm farm_of(const Event& event, bool unchanging = false) {
  Farm farm;
  farm.zone = unchanging ? event.place.unchanging : event.place.zone;
  farm.latitude = event.place.latitude;
  farm.longitude = event.place.longitude;
  farm.stamps = event.stamps;
  const CivilDate sown{day_of(event) - days{18}};
  farm.sown = clock_of(Calendar(), Instant(std::chrono::sys_days(sown))).substr(0, 10);
  return farm;
}

/// Wet nights, dry afternoons; on three days five hours stand out, with 33, 34, 36, 36 and 33 °C
/// from the UTC hour that holds 13:00 solar on.
weather::Sample air_at(const Event& event, Instant at) {
  constexpr std::array<double, 5> hot{33, 34, 36, 36, 33};
  const Degree longitude(event.place.longitude);
  const auto begun = [&](Instant when) { return synthetic::solar_hours(when, longitude); };
  const double ripple = 0.04 * std::sin(static_cast<double>(at.time_since_epoch().count()) / 1300);
  double t = 13 + 14 * synthetic::course(begun(at));
  const Seconds shift{static_cast<long>(event.place.longitude * 240)};
  const CivilDay solar_day = std::chrono::floor<days>(CivilTime((at + shift).time_since_epoch()));
  const CivilDay day = day_of(event);
  for (std::size_t n = 0; n < hot.size(); ++n) {
    const double since_13 = begun(Instant(hour_of(at)) - hours{n}) - 12.5;
    const bool this_hour = since_13 >= 0 && since_13 < 1;
    if (this_hour && solar_day >= day - days{1} && solar_day <= day + days{1}) t = hot[n];
  }
  weather::Sample sample;
  sample.time = at;
  sample.temperature = Celsius(std::round((t + ripple) * 100) / 100);
  sample.humidity = Percent(std::round(synthetic::humidity_of(t + ripple, 14.0) * 10) / 10);
  sample.rain = Millimetre(0);
  return sample;
}

/// A row of the station's file, by the farm's own clock or in UTC.
std::string row_at(const Event& event, const Calendar& farm_time, Instant at) {
  const Calendar stamps = event.stamps == std::string("farm") ? farm_time : Calendar();
  const std::string row = row_of(air_at(event, at));
  return clock_of(stamps, at) + row.substr(row.find(','));
}

/// Each half hour on the day itself, each hour on the hot days beside it, else now and then.
bool worth_a_look(const Event& event, CivilTime clock) {
  const CivilDay today = std::chrono::floor<days>(clock);
  const Seconds of_day = clock - CivilTime(today);
  if (today == day_of(event)) return true;
  if (of_day % hours{1} != Seconds{0}) return false;
  const bool near = today == day_of(event) - days{1} || today == day_of(event) + days{1};
  return near || of_day % hours{3} == Seconds{0} || of_day == hours{19};
}

/// A farm that lived through one event: facts of the time before at once, then turn by turn from
/// two days before the day to four days after it.
struct Lived {
  Bench bench;
  Instant sown, from, to;

  explicit Lived(const Event& event, bool unchanging = false, bool at_once = false)
      : bench(farm_of(event, unchanging)) {
    const Calendar& farm_time = bench.settings->calendar;
    sown = farm_time.start_of(day_of(event) - days{18});
    from = farm_time.start_of(day_of(event) - days{2});
    to = farm_time.start_of(day_of(event) + days{5});
    bench.open(sown);
    Instant written = hour_of(sown) - hours{3};
    const auto write_until = [&](Instant now) {
      std::string rows = bench.folder.names("drop").empty() ? header : "";
      for (; written <= now; written += minutes{15}) rows += row_at(event, farm_time, written);
      bench.folder.append("drop/bench.csv", rows);
    };
    for (Instant now = at_once ? to : from - minutes{30}; now <= to; now += minutes{30}) {
      if (now > from && !worth_a_look(event, farm_time.civil(now))) continue;
      write_until(now);
      bench.turn(now);
    }
    bench.turn(to + minutes{6});
  }
  const service::Lookout& lookout() const { return bench.desk->keeper().lookout(); }
  season::Chronicle chronicle() const {
    season::Chronicle days;
    season::fold(lookout().plan("north bench"), lookout().diary("north bench"),
                 lookout().hours_of("north bench"), hour_of(to), &days);
    return days;
  }
};

template <class Day>
std::map<CivilDay, Day> by_date(const std::vector<Day>& days) {
  std::map<CivilDay, Day> dates;
  for (const Day& day : days) CHECK(dates.emplace(day.date, day).second);  // none twice
  return dates;
}

void check_hours(const Event& event, const Lived& lived) {
  const auto stored = lived.bench.stored_hours();
  REQUIRE(!stored.empty());
  const HourStart first = hour_of(lived.sown) - hours{3};
  CHECK(stored.front().start == first);
  CHECK(std::ssize(stored) ==
        (hour_of(lived.to) - first).count());  // by UTC: none missing or twice
  int in_order = 0, whole = 0, of_day = 0;
  for (std::size_t i = 0; i < stored.size(); ++i) {
    in_order += stored[i].start == first + hours{i} ? 1 : 0;
    whole += stored[i].n == 4 ? 1 : 0;
    of_day += lived.bench.settings->calendar.day_of(stored[i].start) == day_of(event) ? 1 : 0;
  }
  CHECK(in_order == std::ssize(stored));
  CHECK(whole == std::ssize(stored));
  CHECK(of_day == event.hours);
}

void check_days(const Event& event, const Lived& lived, const Lived& unchanging) {
  const auto days_of = by_date(lived.chronicle().days);
  const auto witness = by_date(unchanging.chronicle().days);
  CHECK(days_of.at(day_of(event)).valid_hours == event.hours);
  int hot = 0;
  for (CivilDay day = day_of(event) - days{17}; day < day_of(event) + days{4}; day += days{1}) {
    REQUIRE(days_of.contains(day));
    REQUIRE(witness.contains(day));
    const auto &one = days_of.at(day), &other = witness.at(day);
    const bool is_hot = day >= day_of(event) - days{1} && day <= day_of(event) + days{1};
    CHECK(one.hours_32.value_or(-1) == (is_hot ? 5 : 0));
    CHECK(one.hours_35.value_or(-1) == (is_hot ? 2 : 0));
    CHECK(one.hours_32 == other.hours_32);
    CHECK(one.hours_35 == other.hours_35);
    CHECK(one.level == other.level);
    CHECK(one.degree_hours == other.degree_hours);
    if (is_hot) {
      CHECK(one.t_max_hour == other.t_max_hour);
      // 0.8 + 1.8 + 3.8 + 3.8 + 0.8 above 32.2 °C; one hour more or less would be 0.8 off.
      CHECK(std::abs(*one.degree_hours - 11.0) < 0.3);
      CHECK(one.in_window);
      CHECK(one.level >= risk::Level::severe);
      ++hot;
    }
  }
  CHECK(hot == 3);
}

void check_humid_days(const Event& event, const Lived& lived, const Lived& unchanging) {
  const auto days_of = by_date(lived.chronicle().humid_days);
  const auto witness = by_date(unchanging.chronicle().humid_days);
  for (CivilDay day = day_of(event) - days{16}; day < day_of(event) + days{4}; day += days{1}) {
    REQUIRE(days_of.contains(day));
    REQUIRE(witness.contains(day));
    const auto &one = days_of.at(day), &other = witness.at(day);
    CHECK(one.valid_hours == 24);
    CHECK(one.judged);
    CHECK(one.wet_hours == other.wet_hours);
    CHECK(one.wet_hours >= 6);
    CHECK(one.infection == other.infection);
    CHECK(one.score == other.score);
  }
}

/// "2026-11-01 19:00" for each day that the farm lived through, or for its Mondays.
std::vector<std::string> each_day(const Event& event, const char* clock, bool mondays) {
  std::vector<std::string> times;
  for (CivilDay day = day_of(event) - days{2}; day < day_of(event) + days{5}; day += days{1}) {
    const std::chrono::weekday weekday{std::chrono::sys_days{day.time_since_epoch()}};
    if (mondays && weekday != std::chrono::Monday) continue;
    times.push_back(clock_of(Calendar(), Instant(day.time_since_epoch())).substr(0, 11) + clock);
  }
  return times;
}

void check_letters(const Event& event, const Lived& lived) {
  const auto decided = [&](const char* kind) {
    std::vector<std::string> times;
    for (const auto& item : lived.bench.letters_of(kind)) {
      if (item.letter.decided < lived.from) continue;  // the first look back
      times.push_back(clock_of(lived.bench.settings->calendar, item.letter.decided));
    }
    return times;
  };
  CHECK(decided("daily") == each_day(event, "19:00", false));
  CHECK(decided("weekly") == each_day(event, "06:00", true));
  for (const auto& item : lived.bench.letters()) CHECK(item.state == outbox::State::sent);
  CHECK(lived.bench.letters_of("no_data").empty());
  CHECK(lived.bench.letters_of("doubtful_sensor").empty());

  // One episode of three hot days, opened once, reminded at most once a day and eased once.
  const auto said = lived.bench.desk->store().said(Instant{});
  REQUIRE(said);
  std::map<std::string, int> sayings;
  for (const auto& entry : *said) {
    if (entry.saying == alerts::Saying::reminder) continue;
    const int times = ++sayings[std::string(alerts::name_of(entry.kind)) + " " + entry.episode +
                                " " + std::to_string(static_cast<int>(entry.saying)) + " " +
                                std::to_string(static_cast<int>(entry.level))];
    CHECK(times == 1);
  }
  const auto heat = std::count_if(lived.bench.episodes().begin(), lived.bench.episodes().end(),
                                  [](const auto& e) { return e.kind == alerts::Kind::heat; });
  CHECK(heat == 1);
  const auto spoken = [&](alerts::Saying saying) {
    return std::count_if(said->begin(), said->end(), [&](const auto& entry) {
      return entry.kind == alerts::Kind::heat && entry.saying == saying;
    });
  };
  CHECK(spoken(alerts::Saying::opened) == 1);
  CHECK(spoken(alerts::Saying::eased) == 1);
  CHECK(spoken(alerts::Saying::learned_late) == 0);
}

}  // namespace

TEST_CASE("in five zones the clock changes, the leap day and the year's end change nothing") {
  keep_in_memory();
  for (const Event& event : events) {
    INFO(event.place.zone << ", " << event.name);
    const Lived lived(event);
    const Lived unchanging(event, true, true);
    check_hours(event, lived);
    check_days(event, lived, unchanging);
    check_humid_days(event, lived, unchanging);
    check_letters(event, lived);
    // The same facts in a store that never saw them come.
    const Lived replayed(event, false, true);
    INFO("live\n" << told(lived.bench.episodes()) << "replay\n" << told(replayed.bench.episodes()));
    CHECK(lived.bench.episodes() == replayed.bench.episodes());
    CHECK(lived.bench.fingerprint() == replayed.bench.fingerprint());
  }
}

TEST_CASE("the review of the week over the year's end bears the number of its own year") {
  keep_in_memory();
  // 1 January 2026 was a Thursday, so 2026 has 53 weeks; the last begins on Monday 28 December.
  const Lived lived(events[3]);
  const auto weekly = lived.bench.letters_of("weekly");
  REQUIRE(!weekly.empty());
  CHECK(weekly.back().letter.subject.find("2026-W53") != std::string::npos);
  CHECK(weekly.back().letter.body.find("168 h of 168 seen") != std::string::npos);
}
