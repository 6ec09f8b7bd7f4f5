// The sign of life: only from a loop that looks at its stations and keeps what it finds; one answer
// at a time; failures said once an hour and never by letter.
#include "run/service/heartbeat.hpp"

#include "ground.hpp"
#include "support/catch.hpp"

using namespace ground;
using service::Heartbeat;

namespace {

const Instant noon = farm_time("2026-07-12 12:00");
const std::string url = "https://watch.larkspur.example/key-of-the-farm";

settings::Watch hourly() { return {url, hours{1}}; }
Failure refusal() { return {"give a sign of life", "https://watch.larkspur.example", "503", "x"}; }

}  // namespace

TEST_CASE("a sign of life comes once an interval, one at a time") {
  Heartbeat heart;
  CHECK(heart.beat(hourly(), true, noon) == url);
  CHECK_FALSE(heart.beat(hourly(), true, noon + hours{2}));  // the first is still under way
  CHECK(heart.answered(Done{}, noon + hours{2}).empty());
  CHECK(heart.beat(hourly(), true, noon + hours{2}) == url);
  CHECK(heart.answered(Done{}, noon + hours{2}).empty());
  CHECK_FALSE(heart.beat(hourly(), true, noon + hours{3} - Seconds{1}));
  CHECK(heart.beat(hourly(), true, noon + hours{3}) == url);
  CHECK(heart.answered(Done{}, noon + hours{3}).empty());
  CHECK(heart.beat(hourly(), true, noon) == url);  // the clock was set back
}

TEST_CASE("no table, or a turn that did not look: no sign of life") {
  Heartbeat heart;
  CHECK_FALSE(heart.beat(std::nullopt, true, noon));
  CHECK_FALSE(heart.beat(hourly(), false, noon));
  CHECK(heart.beat(hourly(), true, noon) == url);
}

TEST_CASE("failures are tried again after 5 min and said once an hour") {
  Heartbeat heart;
  int said = 0;
  for (Instant now = noon; now < noon + hours{3}; now += minutes{1}) {
    if (heart.beat(hourly(), true, now)) said += heart.answered(refusal(), now).empty() ? 0 : 1;
  }
  CHECK(said == 3);
  CHECK(heart.beat(hourly(), true, noon + hours{4}) == url);
  CHECK(heart.answered(Done{}, noon + hours{4}) == "signs of life arrive again");
}

TEST_CASE("the desk beats only after a turn that looked and whose decisions were kept") {
  Farm farm;
  farm.more = "\n[watch]\nheartbeat_url = \"" + url + "\"\nevery = \"5 min\"\n";
  Bench bench(farm);
  bench.open(noon);
  std::vector<Instant> beats;
  Instant now = noon;
  bench.desk->on_beat([&](const std::string& to) {
    CHECK(to == url);
    beats.push_back(now);
  });
  bench.turn(now);
  REQUIRE(beats.size() == 1);
  bench.desk->life_answered(refusal(), now);
  for (; now < noon + minutes{30}; now += minutes{1}) {
    bench.turn(now);
    if (beats.size() > 1) bench.desk->life_answered(refusal(), now);
  }
  CHECK(beats.size() > 3);
  CHECK(bench.letters().empty());  // never a letter
  const std::string log = bench.folder.read("antherd.log");
  CHECK(log.find("give a sign of life") != std::string::npos);
  CHECK(log.find("give a sign of life") == log.rfind("give a sign of life"));
  CHECK(log.find("key-of-the-farm") == std::string::npos);
}

TEST_CASE("a station that never answered its first question keeps the heart still") {
  Farm farm;
  farm.more = "\n[watch]\nheartbeat_url = \"" + url +
              "\"\n\n[[station]]\nname = \"far\"\n"
              "latitude = 46.73\nlongitude = -117.18\nelevation = \"780 m\"\ninterval = \"5 min\"\n"
              "[station.http]\nurl = \"http://192.168.1.20/now.json\"\n"
              "time = { at = \"/time\", form = \"unix\" }\n"
              "temperature = { at = \"/t\", unit = \"degC\" }\n"
              "humidity = { at = \"/rh\", unit = \"%\" }\n";
  Bench bench(farm);
  bench.open(noon);
  int beats = 0;
  bench.desk->on_beat([&](const std::string&) { ++beats; });
  bench.desk->on_poll([](const auto&, const auto&, const auto&) {});  // hangs
  for (Instant now = noon; now < noon + hours{2}; now += minutes{1}) bench.turn(now);
  CHECK(beats == 0);
  bench.desk->poll_answered("far", station::Answer{}, noon + hours{2});
  bench.turn(noon + hours{2});
  CHECK(beats == 1);
}
