// A computer whose clock is not set: it wakes in 1970, at its last shutdown or years ahead, or its
// clock is moved while nobody has set it. The watch goes on by what the stations say.
#include "ground.hpp"
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
