// Letters that the clock decides: the daily line and the weekly review across both clock changes
// and after a night that the service slept through, quiet hours, the daily limit.
#include <algorithm>
#include <map>
#include <set>

#include "ground.hpp"
#include "run/service/post.hpp"
#include "support/catch.hpp"

using namespace ground;

namespace {

/// A farm of the autumn or of the spring: in flower at the change of the clocks.
Farm flowering_on(const std::string& sown) {
  Farm farm;
  farm.sown = sown;
  return farm;
}

std::vector<std::string> decided(const Bench& bench, const std::string& kind) {
  std::vector<std::string> times;
  for (const auto& item : bench.letters_of(kind)) {
    times.push_back(farm_clock(item.letter.decided));
  }
  return times;
}

letters::Letter letter_of(const std::string& id, alerts::Severity severity, bool raise = false) {
  letters::Letter letter;
  letter.id = id;
  letter.recipient = "owner@larkspur.example";
  letter.subject = id;
  letter.body = "A body.\n";
  letter.kind = "heat";
  letter.severity = severity;
  letter.raise = raise;
  return letter;
}

}  // namespace

TEST_CASE("the daily line comes each evening at 19:00, also on the days of the clock changes") {
  // 2026-11-01: the clock is put back; 2026-03-08: put forward (America/Los_Angeles).
  const auto [sown, first, last] = GENERATE(std::tuple{"2026-10-12", "2026-10-29", "2026-11-03"},
                                            std::tuple{"2026-02-16", "2026-03-05", "2026-03-10"});
  Bench bench(flowering_on(sown));
  bench.open(farm_time(std::string(sown) + " 00:00"));
  const Instant from = farm_time(std::string(first) + " 00:00");
  bench.drop("bench.csv", readings(Weather{}, farm_time(std::string(sown) + " 00:00"), from));
  bench.turn(from);
  bench.live(Weather{}, from, farm_time(std::string(last) + " 23:00"), minutes{10});

  std::vector<std::string> expected;
  const Instant last_evening = farm_time(std::string(last) + " 19:00");
  for (Instant at = from + hours{12}; at <= last_evening + hours{6}; at += days{1}) {
    expected.push_back(farm_clock(at).substr(0, 10) + " 19:00");
  }
  REQUIRE(expected.size() == 6);
  CHECK(decided(bench, "daily") == expected);
}

TEST_CASE("the weekly review comes on Monday at 06:00, across both clock changes") {
  const auto [sown, from, to, expected] = GENERATE(
      std::tuple{
          "2026-10-20", "2026-10-24 00:00", "2026-11-10 00:00",
          std::vector<std::string>{"2026-10-26 06:00", "2026-11-02 06:00", "2026-11-09 06:00"}},
      std::tuple{
          "2026-02-20", "2026-02-28 00:00", "2026-03-17 00:00",
          std::vector<std::string>{"2026-03-02 06:00", "2026-03-09 06:00", "2026-03-16 06:00"}});
  Bench bench(flowering_on(sown));
  bench.open(farm_time(from));
  for (Instant now = farm_time(from); now <= farm_time(to); now += minutes{30}) bench.turn(now);
  CHECK(decided(bench, "weekly") == expected);
  // Nothing came in all that time, and the review is there all the same.
  for (const auto& item : bench.letters_of("weekly")) CHECK(item.state == outbox::State::sent);
}

TEST_CASE("that heat is over is told at six in the morning, not when the day ends") {
  Bench bench;
  const Instant sown = farm_time("2026-06-25 00:00");
  bench.open(sown);
  const Instant from = farm_time("2026-07-14 12:00");  // the last of three hot days
  bench.drop("bench.csv", readings(Weather{}, sown, from));
  bench.turn(from);
  bench.live(Weather{}, from, farm_time("2026-07-16 08:00"), minutes{15});
  const auto& heat = bench.episodes().back();
  REQUIRE(heat.kind == alerts::Kind::heat);
  REQUIRE(heat.closed);
  CHECK(farm_clock(*heat.closed) == "2026-07-16 00:00");
  const auto times = decided(bench, "heat");
  REQUIRE_FALSE(times.empty());
  CHECK(times.back() == "2026-07-16 06:00");
  CHECK(bench.letters_of("heat").back().letter.subject.starts_with("Heat eased"));
}

TEST_CASE("a service that slept at the time: the review follows, the daily line only within 3 h") {
  Bench bench;
  const Instant sown = farm_time("2026-06-25 00:00");
  bench.open(sown);
  const Instant down = farm_time("2026-07-12 18:00");  // a Sunday
  bench.drop("bench.csv", readings(Weather{}, sown, down));
  bench.turn(down);
  const auto before = decided(bench, "daily").size();
  const auto weeks = decided(bench, "weekly").size();
  bench.close(down);

  SECTION("back after two hours") {
    bench.open(farm_time("2026-07-12 21:00"));
    bench.turn(farm_time("2026-07-12 21:00"));
    CHECK(decided(bench, "daily").size() == before + 1);
    CHECK(decided(bench, "weekly").size() == weeks);
  }
  SECTION("back on Tuesday") {
    bench.open(farm_time("2026-07-14 12:00"));
    bench.turn(farm_time("2026-07-14 12:00"));
    CHECK(decided(bench, "daily").size() == before);
    REQUIRE(decided(bench, "weekly").size() == weeks + 1);
    CHECK(decided(bench, "weekly").back() == "2026-07-14 12:00");
    bench.turn(farm_time("2026-07-14 12:05"));
    CHECK(decided(bench, "weekly").size() == weeks + 1);
    bench.drop("bench-late.csv", readings(Weather{}, down, farm_time("2026-07-14 12:10")));
    bench.turn(farm_time("2026-07-14 12:10"));
    bench.turn(farm_time("2026-07-14 19:00"));
    CHECK(decided(bench, "daily").size() == before + 1);
  }
  SECTION("back after three weeks: one review, not three") {
    bench.open(farm_time("2026-08-05 12:00"));
    bench.turn(farm_time("2026-08-05 12:00"));
    CHECK(decided(bench, "weekly").size() == weeks + 1);
  }
}

TEST_CASE("a computer that is never up at the time makes its review and its line all the same") {
  const auto up_daily = [](Bench& bench, const char* first, int lasting, Seconds up) {
    for (int day = 0; day < lasting; ++day) {
      const Instant on = farm_time(first) + days{day};
      bench.drop("bench.csv", readings(Weather{}, farm_time("2026-06-25 00:00"), on));
      bench.open(on);
      for (Instant now = on; now <= on + up; now += minutes{30}) bench.turn(now);
      if (day + 1 < lasting) bench.close(on + up);
    }
  };
  Bench by_day;  // a Tuesday
  up_daily(by_day, "2026-07-07 08:00", 14, hours{8});
  CHECK(decided(by_day, "weekly") ==
        std::vector<std::string>{"2026-07-13 08:00", "2026-07-20 08:00"});
  Bench by_night;
  up_daily(by_night, "2026-07-11 20:00", 4, hours{1});
  CHECK(decided(by_night, "daily") ==
        std::vector<std::string>{"2026-07-12 20:00", "2026-07-13 20:00", "2026-07-14 20:00"});
}

TEST_CASE("a clock that once stood years ahead does not silence the review for ever") {
  Bench bench;
  bench.open(farm_time("2046-07-01 12:00"));
  bench.turn(farm_time("2046-07-01 12:00"));
  bench.turn(farm_time("2046-07-09 12:00"));
  bench.close(farm_time("2046-07-09 12:00"));
  bench.open(farm_time("2026-07-07 12:00"));
  for (Instant now = farm_time("2026-07-07 12:00"); now <= farm_time("2026-07-20 12:00");
       now += hours{1}) {
    bench.turn(now);
  }
  const auto times = decided(bench, "weekly");
  CHECK(std::count(times.begin(), times.end(), "2026-07-13 06:00") == 1);
  CHECK(std::count(times.begin(), times.end(), "2026-07-20 06:00") == 1);
}

TEST_CASE("quiet hours hold all but Extreme until their end, over midnight and over the changes") {
  Folder folder;
  Farm farm;
  farm.recipients =
      "[[recipient]]\naddress = \"owner@larkspur.example\"\nquiet = \"22:00-05:30\"\n";
  const auto settings = settings_in(folder, farm);
  const auto next_try = [&](const std::string& now, alerts::Severity severity) {
    service::Rations rations;
    const auto items =
        service::to_items({letter_of("one", severity)}, *settings, rations, farm_time(now));
    REQUIRE(items.size() == 1);
    return farm_clock(items[0].next_try);
  };
  using alerts::Severity;
  CHECK(next_try("2026-07-12 21:59", Severity::severe) == "2026-07-12 21:59");
  CHECK(next_try("2026-07-12 22:00", Severity::severe) == "2026-07-13 05:30");
  CHECK(next_try("2026-07-13 03:00", Severity::severe) == "2026-07-13 05:30");
  CHECK(next_try("2026-07-13 05:30", Severity::severe) == "2026-07-13 05:30");
  CHECK(next_try("2026-07-12 23:00", Severity::extreme) == "2026-07-12 23:00");
  CHECK(next_try("2026-10-31 22:30", Severity::severe) == "2026-11-01 05:30");
  CHECK(next_try("2026-03-07 22:30", Severity::severe) == "2026-03-08 05:30");
}

TEST_CASE("a letter of the evening lies still until the quiet hours end, a restart between") {
  Farm farm;
  farm.recipients =
      "[[recipient]]\naddress = \"owner@larkspur.example\"\nquiet = \"20:30-06:30\"\n";
  Bench bench(farm);
  const Instant sown = farm_time("2026-06-25 00:00");
  const Instant silent = farm_time("2026-07-09 20:00"), morning = farm_time("2026-07-10 06:30");
  bench.open(sown);
  bench.drop("bench.csv", readings(Weather{}, sown, silent));
  const auto state = [&] {
    const auto letters = bench.letters_of("no_data");
    return letters.size() == 1 ? letters[0].state : outbox::State::parked;
  };
  for (Instant now = silent; now < morning; now += minutes{30}) {
    bench.turn(now);
    const bool told = now >= silent + hours{2};
    CAPTURE(farm_clock(now));
    if (told) CHECK(state() == outbox::State::waiting);
    if (now == silent + hours{5}) {
      bench.close(now);
      bench.open(now + minutes{1});
    }
  }
  bench.turn(morning);
  CHECK(state() == outbox::State::sent);
  // Not "delayed": it speaks from when it might go.
  CHECK(bench.letters_of("no_data")[0].letter.subject.find("delayed") == std::string::npos);
}

TEST_CASE("the daily limit is not forgotten with a restart") {
  Farm farm;
  farm.mail = "folder = \"outgoing\"\nat_most_per_day = 1\n";
  Bench bench(farm);
  const Instant sown = farm_time("2026-06-25 00:00");
  const Instant noon = farm_time("2026-07-12 12:00");
  bench.open(sown);
  bench.drop("bench.csv", readings(Weather{}, sown, noon));
  bench.turn(noon);
  // Two notes a day apart from each other: every restart in between counts from nothing.
  std::map<alerts::Severity, int> gone_today;  // one a day, and what is graver than it
  for (int hour = 0; hour < 11; ++hour) {
    const Instant from = noon + hours{hour};
    bench.live(Weather{}, from, from + minutes{45}, minutes{15});
    bench.close(from + minutes{46});
    bench.open(from + minutes{47});
  }
  for (const auto& item : bench.letters()) {
    const bool today = farm_clock(item.letter.decided).substr(0, 10) == "2026-07-12";
    const bool exempt = item.letter.raise || item.letter.severity == alerts::Severity::extreme ||
                        item.letter.kind == "daily" || item.letter.kind == "weekly";
    if (today && !exempt && item.state == outbox::State::sent) ++gone_today[item.letter.severity];
  }
  CHECK(!gone_today.empty());
  for (const auto& [severity, count] : gone_today) CHECK(count == 1);
}

TEST_CASE("in a stormy week with a clock change the line and the review come as in any other") {
  // 2026-11-01 has 25 hours, 2026-03-08 has 23; one alert a day is all that the address allows.
  const auto [sown, first, monday] =
      GENERATE(std::tuple{"2026-10-12", "2026-10-31 00:00", "2026-11-02 06:00"},
               std::tuple{"2026-02-16", "2026-03-07 00:00", "2026-03-09 06:00"});
  keep_in_memory();
  Farm farm;
  farm.sown = sown;
  farm.mail = "folder = \"outgoing\"\nat_most_per_day = 1\n";
  Bench bench(farm);
  const Instant from = farm_time(first), until = farm_time(monday) + hours{2};
  bench.open(farm_time(std::string(sown) + " 00:00"));
  bench.drop("bench.csv", readings(Weather{}, farm_time(std::string(sown) + " 00:00"), from));
  bench.turn(from);
  std::string rows = header;
  for (Instant now = from; now < until; now += minutes{15}) {
    if ((now - from) % minutes{75} == Seconds{0}) {
      bench.folder.write("drop/bench-2.csv", rows += row_of(reading_at(Weather{}, now)));
    }
    bench.turn(now);
  }
  std::vector<std::string> lines, reviews;
  int held = 0;
  for (const auto& item : bench.letters()) {
    const bool timed = item.letter.kind == "daily" || item.letter.kind == "weekly";
    if (item.letter.decided < from) continue;
    if (!timed && item.state != outbox::State::sent) ++held;
    if (timed) CHECK(item.state == outbox::State::sent);
    if (item.letter.kind == "daily") lines.push_back(farm_clock(item.letter.decided));
    if (item.letter.kind == "weekly" && item.letter.decided > from) {
      reviews.push_back(farm_clock(item.letter.decided));
    }
  }
  CHECK(held > 5);  // it is a storm
  CHECK(reviews == std::vector<std::string>{monday});
  REQUIRE(lines.size() == 2);
  const std::string sunday = farm_clock(farm_time(monday) - hours{12}).substr(0, 10);
  CHECK(lines[0] == std::string(first).substr(0, 10) + " 19:00");
  CHECK(lines[1] == sunday + " 19:00");
}
