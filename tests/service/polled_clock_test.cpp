// Stations that are polled, while the computer's clock is put back or forward or the computer
// sleeps: they are asked at once, and none is called silent before it was asked.
#include "ground.hpp"
#include "support/catch.hpp"

using namespace ground;

namespace {

const Instant sown = farm_time("2026-06-25 00:00");
const Instant noon = farm_time("2026-07-12 12:00");

Farm with_creek() {
  Farm farm;
  farm.more = std::string(river) +
              "\n[[field]]\nname = \"creek\"\nstations = [\"river\"]\nsown = 2026-06-25\n"
              "crop_type = \"quick\"\nirrigation = \"none\"\n";
  return farm;
}

/// A farm with a station of each kind, both heard until noon.
struct Polled {
  Bench bench{with_creek()};
  std::vector<station::PollMemory> asked;

  Polled() {
    bench.open(sown);
    bench.close(sown);
    bench.open(noon);
    bench.desk->on_poll([this](const std::string&, const station::HttpForm&,
                               const station::PollMemory& memory) { asked.push_back(memory); });
    bench.folder.write("drop/bench.csv", header);
    dropped(sown, noon);
    bench.turn(noon);
    REQUIRE(asked.size() == 1);
    answer(sown, noon);
    bench.turn(noon);
  }
  void dropped(Instant from, Instant to) const {
    bench.folder.append("drop/bench.csv", rows_of(readings(Weather{}, from, to)));
  }
  void answer(Instant from, Instant to) {
    station::Answer answer;
    answer.memory = asked.back();
    answer.readings.samples = readings(Weather{}, from, to);
    bench.desk->poll_answered("river", answer, to);
  }
};

}  // namespace

TEST_CASE("a polled station is asked at once when the clock was put back") {
  Polled farm;
  farm.bench.turn(noon + minutes{1});
  CHECK(farm.asked.size() == 1);
  const Instant back = noon - hours{2};
  CHECK(farm.bench.desk->turn(back, true) <= back + minutes{1});
  CHECK(farm.asked.size() == 2);
  farm.answer(back, back);
  farm.bench.turn(back + minutes{1});
  CHECK(farm.asked.size() == 2);
  farm.bench.turn(back + minutes{6});
  CHECK(farm.asked.size() == 3);
}

TEST_CASE("after a sleep of the computer no polled station is silent before it was asked") {
  Polled farm;
  const Instant woken = noon + hours{3};
  farm.dropped(noon, woken);
  farm.bench.turn(woken);
  CHECK(farm.asked.size() == 2);
  CHECK(farm.bench.letters_of("no_data").empty());
  SECTION("it answers") {
    farm.answer(noon, woken);
    farm.bench.turn(woken + Seconds{5});
    farm.bench.turn(woken + minutes{4});
    CHECK(farm.bench.letters_of("no_data").empty());
  }
  SECTION("it does not: that is told two minutes later") {
    farm.bench.turn(woken + minutes{2});
    CHECK(farm.bench.letters_of("no_data").size() == 1);
  }
}
