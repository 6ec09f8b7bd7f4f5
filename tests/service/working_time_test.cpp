// A computer whose clock is not set: it wakes in 1970, at its last shutdown or years ahead, or its
// clock is moved while nobody has set it. The watch goes on by what the stations say.
#include <algorithm>

#include "ground.hpp"
#include "run/service/farm.hpp"
#include "run/service/timekeeper.hpp"
#include "support/catch.hpp"

using namespace ground;

namespace {

const Instant sown = farm_time("2026-06-25 00:00");
const Instant morning = farm_time("2026-07-12 10:00");
const Instant evening = farm_time("2026-07-12 18:00");
constexpr auto twenty_years = days{20 * 365 + 5};

/// A farm that was watched until the hot morning, then opened again by a clock that is not set.
struct Restarted {
  Bench bench;

  explicit Restarted(Instant wall) {
    bench.open(sown);
    bench.live(Weather{}, sown, morning, minutes{15});
    bench.desk.reset();
    auto opened = service::DeskWork::open(bench.settings, wall, false);
    REQUIRE(opened);
    bench.desk = std::move(*opened);
  }
  /// The hot day goes on; the computer's clock with it, from `wall` on.
  void live(Instant wall) {
    for (Instant now = morning + minutes{15}; now <= evening; now += minutes{15}) {
      bench.folder.append("drop/bench.csv", rows_of(readings(Weather{}, now, now + minutes{1})));
      bench.desk->look_soon();
      const Instant shown = wall + (now - morning);
      while (bench.desk->turn(shown, false) <= shown) {
      }
    }
  }
};

}  // namespace

TEST_CASE("steps of a clock that is not set are not followed, a set one is believed") {
  service::SteadyTime time;
  const Instant noon = farm_time("2026-07-12 12:00");
  CHECK(time.now(noon, Seconds{100}, true) == noon);
  CHECK(time.now(noon + hours{3}, Seconds{160}, false) == noon + Seconds{60});
  CHECK(time.now(Instant{}, Seconds{220}, false) == noon + Seconds{120});
  CHECK(time.now(noon + hours{1}, Seconds{280}, true) == noon + hours{1});
  CHECK(time.now(noon - hours{9}, Seconds{300}, false) == noon + hours{1} + Seconds{20});
  // Nothing better is known at the start.
  service::SteadyTime begun;
  CHECK(begun.now(Instant{}, Seconds{5}, false) == Instant{});
  CHECK(begun.now(Instant{} + hours{4}, Seconds{7}, false) == Instant{Seconds{2}});
}

TEST_CASE("whatever a clock shows that is not set, the hot afternoon is told as on any other day") {
  const Instant wall = GENERATE(Instant{Seconds{40}}, morning - hours{9}, morning + twenty_years);
  Restarted farm(wall);
  CHECK(farm.bench.desk->working(wall) == morning);
  const auto before = farm.bench.letters().size();
  const auto samples = [&] {
    return farm.bench.desk->store().samples("bench", Instant{}, evening + days{1})->size();
  };
  const auto known = samples();
  farm.live(wall);
  CHECK(samples() == known + 32);  // eight hours, none refused, none dropped as old
  const auto heat = farm.bench.letters_of("heat");
  REQUIRE(!heat.empty());
  for (const auto& item : heat) {
    CHECK(item.state == outbox::State::sent);
    CHECK(item.letter.decided > morning);
    CHECK(item.letter.decided <= evening);
    CHECK(item.letter.body.find("Computer clock not set") != std::string::npos);
  }
  CHECK(farm.bench.letters_of("no_data").empty());
  CHECK(farm.bench.letters().size() > before);
}

TEST_CASE("a clock that is set is believed, and one that is not where nothing speaks against it") {
  Restarted farm(morning + hours{5});
  CHECK(farm.bench.desk->working(morning + hours{5}) == morning + hours{5});
  farm.bench.desk->turn(morning + twenty_years, true);
  CHECK(farm.bench.desk->working(morning) == morning);
  // Even a set clock that is wrong by years throws no season away.
  CHECK(!farm.bench.desk->store().samples("bench", sown, morning)->empty());
}

TEST_CASE("of a station's times a stray one is not believed, many that stand alone are") {
  const auto believed = [](std::vector<Instant> times) {
    return service::newest_believed(times, minutes{15});
  };
  std::vector<Instant> times{morning - hours{1}, morning - minutes{30}, morning};
  CHECK_FALSE(believed({}));
  CHECK(believed({morning}) == morning);
  CHECK(believed(times) == morning);
  times.push_back(morning + twenty_years);
  CHECK(believed(times) == morning);
  // The settings say 15 min, the station speaks each hour.
  for (int i = 1; i <= 12; ++i) times.push_back(morning + twenty_years + hours{i});
  CHECK(believed(times) == morning + twenty_years + hours{2});
}

TEST_CASE("one row of another year moves no clock, silences no station and costs no reading") {
  const Instant wall = morning - hours{9};
  Restarted farm(wall);
  weather::Sample stray = reading_at(Weather{}, morning);
  stray.time = morning + days{36 * 365};
  farm.bench.folder.append("drop/bench.csv", row_of(stray));
  farm.live(wall);
  const auto& lookout = farm.bench.desk->keeper().lookout();
  CHECK(farm.bench.letters_of("no_data").empty());
  CHECK(lookout.desk(evening).stations.at("bench").last_reading == evening);
  CHECK(lookout.last_sample("bench", evening) == evening);
  const auto samples = [&] {
    return farm.bench.desk->store().samples("bench", Instant{}, evening + days{1})->size();
  };
  const auto known = samples();
  farm.bench.close(wall + (evening - morning));

  const Instant next_wall{Seconds{40}};
  auto opened = service::DeskWork::open(farm.bench.settings, next_wall, false);
  REQUIRE(opened);
  farm.bench.desk = std::move(*opened);
  CHECK(farm_clock(farm.bench.desk->working(next_wall)) == farm_clock(evening));
  farm.bench.desk->turn(next_wall, false);
  farm.bench.desk->turn(next_wall + days{2}, false);
  CHECK(samples() == known);
}

TEST_CASE("where neither the clock nor a station is believed no reading is thrown away") {
  Bench bench;
  bench.open(sown);
  const Instant old = sown - days{700};
  REQUIRE(bench.desk->store().add_samples("bench", std::vector{reading_at(Weather{}, old)}));
  const auto kept = [&] { return bench.desk->store().samples("bench", Instant{}, sown)->size(); };
  CHECK(bench.desk->keeper().tidy(sown, false).empty());
  CHECK(kept() == 1);
  CHECK(bench.desk->keeper().tidy(sown + days{1}, true).empty());
  CHECK(kept() == 0);
}

TEST_CASE("a first start by a clock that is years ahead keeps no letter back") {
  keep_in_memory();
  Bench bench;
  bench.drop("bench.csv", readings(Weather{}, sown, morning));
  const Instant wall = morning + twenty_years;
  auto opened = service::DeskWork::open(bench.settings, wall, false);
  REQUIRE(opened);
  bench.desk = std::move(*opened);
  for (Instant now = morning; now <= farm_time("2026-07-20 07:00"); now += minutes{15}) {
    bench.folder.append("drop/bench.csv", rows_of(readings(Weather{}, now, now + minutes{1})));
    bench.desk->look_soon();
    const Instant shown = wall + (now - morning);
    while (bench.desk->turn(shown, false) <= shown) {
    }
    // The season is not left folded into years that never were.
    const auto& last = bench.desk->keeper().lookout().state("north bench").last;
    if (bench.desk->working(shown) <= now + minutes{1}) CHECK((!last || Instant(*last) <= now));
  }
  const auto told = [&](const char* kind) {
    std::vector<std::string> days_told;
    for (const auto& item : bench.letters_of(kind)) {
      UNSCOPED_INFO(farm_clock(item.letter.decided) << " " << item.letter.subject);
      days_told.push_back(farm_clock(item.letter.decided).substr(0, 10));
    }
    return days_told;
  };
  const auto heat = told("heat"), lines = told("daily");
  REQUIRE(!heat.empty());
  CHECK(heat.front() == "2026-07-12");
  CHECK(told("weekly") == std::vector<std::string>{"2026-07-13", "2026-07-20"});
  REQUIRE(!lines.empty());
  CHECK(lines.front() == "2026-07-12");
  CHECK(told("no_data").empty());
}

TEST_CASE("a clock that is hours ahead until it is set calls no station silent that speaks") {
  const Instant wall = morning + hours{9};
  Restarted farm(wall);
  farm.bench.desk->turn(wall, false);
  farm.live(wall);
  farm.bench.desk->look_soon();
  for (Instant now = evening; now <= evening + minutes{30}; now += minutes{5}) {
    farm.bench.desk->turn(now, true);
  }
  CHECK(farm.bench.letters_of("no_data").empty());
}

TEST_CASE("a station that is dead is found by a clock that is not set, and told of once") {
  const Instant wall = morning + hours{9};  // 19:00
  Restarted farm(wall);
  const auto turn = [&](Seconds from, Seconds to) {
    for (Seconds at = from; at <= to; at += minutes{5}) farm.bench.desk->turn(wall + at, false);
    return farm.bench.letters_of("no_data").size();
  };
  CHECK(turn(minutes{0}, minutes{45}) == 0);
  CHECK(turn(minutes{50}, minutes{150}) == 1);
  farm.bench.close(wall + minutes{150});
  auto opened = service::DeskWork::open(farm.bench.settings, wall + minutes{155}, false);
  REQUIRE(opened);
  farm.bench.desk = std::move(*opened);
  CHECK(turn(minutes{155}, minutes{170}) == 1);
  // The clock is set: what was told was right, though some hours too early.
  for (Instant now = morning + hours{3}; now <= evening; now += minutes{5}) {
    farm.bench.desk->turn(now, true);
  }
  CHECK(farm.bench.letters_of("no_data").size() == 1);
}
