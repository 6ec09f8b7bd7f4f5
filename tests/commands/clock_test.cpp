// What time a command goes by where the computer's clock is not set.
#include "program.hpp"
#include "run/commands/common.hpp"
#include "service/ground.hpp"
#include "support/catch.hpp"

using namespace ground;

namespace {

const Instant sown = farm_time("2026-06-25 00:00");
const Instant newest = farm_time("2026-07-12 10:00");

}  // namespace

TEST_CASE("a clock that is not set and cannot be right gives way to the newest reading") {
  Bench bench;
  bench.open(sown);
  bench.drop("bench.csv", readings(Weather{}, sown, newest + minutes{1}));
  bench.turn(newest);
  bench.turn(newest + minutes{6});
  weather::Sample stray = reading_at(Weather{}, newest);
  stray.time = newest + days{36 * 365};
  REQUIRE(bench.desk->store().add_samples("bench", std::vector{stray}));

  const auto by = [&](Instant shown, bool set) {
    return commands::present_by(shown, set, *bench.settings,
                                commands::open_to_read(*bench.settings));
  };
  for (const Instant shown : {Instant{Seconds{40}}, newest - hours{9}, newest + days{20 * 365}}) {
    CAPTURE(utc_clock(shown));
    const auto doubted = by(shown, false);
    CHECK(farm_clock(doubted.now) == "2026-07-12 10:00");
    CHECK(doubted.doubted);
    CHECK(by(shown, true).now == shown);
    CHECK_FALSE(by(shown, true).doubted);
  }
  CHECK(by(newest + days{3}, false).now == newest + days{3});
  CHECK_FALSE(by(newest + days{3}, false).doubted);

  // A note may be of a day on which the station was dead already.
  const CivilDay day = bench.settings->calendar.day_of(newest);
  CHECK(commands::last_day_of_notes(*bench.settings, by(Instant{}, false)) == day + days{31});
  CHECK(commands::last_day_of_notes(*bench.settings, by(newest, true)) == day);
}

TEST_CASE("today's note is refused, too, where today lies before sowing") {
  Folder folder;
  Farm farm;
  farm.sown = "2098-04-25";
  settings_in(folder, farm);
  const auto ended = program::run(
      {"scout", "north", "--stage", "first-anthers", "--settings", folder / "antherd.toml"});
  INFO(ended.out << ended.err);
  CHECK(ended.status == 2);
  CHECK(ended.err.find("lies before sowing; nothing was written") != std::string::npos);
  CHECK(folder.names("store").empty());
}
