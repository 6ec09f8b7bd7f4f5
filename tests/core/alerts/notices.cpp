// Notices: each once a season; a stage that moves by less than three days is not told again.
#include "support/catch.hpp"
#include "tale.hpp"

using namespace tale;

namespace {
CivilDay july(int day) {
  return CivilDay(
      std::chrono::days(at(24.0 * (day - 1)).time_since_epoch() / std::chrono::days{1}));
}
Notice stage(const std::string& key, double hour, int day) {
  Notice notice;
  notice.subject = "north bench";
  notice.at = at(hour);
  notice.key = key;
  notice.day = july(day);
  return notice;
}
}  // namespace

TEST_CASE("a notice is said once, with its date") {
  Service service;
  const Notice near = stage("window-near", 10, 11);
  CHECK(service.tick({}, at(9), {near}).empty());
  const auto told = service.tick({}, at(10), {near, near});
  REQUIRE(told.size() == 1);
  CHECK(told[0].saying == Saying::notice);
  CHECK(told[0].episode == "stage/north bench/window-near/2026-07-11");
  CHECK(told[0].key == "window-near");
  CHECK(told[0].day == july(11));
  CHECK(told[0].severity == Severity::minor);
  CHECK(service.tick({}, at(10), {near}).empty());
  CHECK(service.tick({}, at(40), {near}).empty());
}

TEST_CASE("a stage that moves is told again from three days on, and never flaps") {
  Service service;
  service.tick({}, at(10), {stage("window-near", 10, 11)});
  CHECK(service.tick({}, at(20), {stage("window-near", 20, 13)}).empty());
  CHECK(service.tick({}, at(30), {stage("window-near", 30, 14)}).size() == 1);
  CHECK(service.tick({}, at(40), {stage("window-near", 40, 11)}).empty());
  CHECK(service.tick({}, at(50), {stage("window-near", 50, 14)}).empty());
  // moved into the past by a scouting note: no news any more
  CHECK(service.tick({}, at(60), {stage("window-near", 40, 20)}).empty());
}

TEST_CASE("the same notice of the next season is said again") {
  Service service;
  Notice ripe = stage("ripe", 10, 1);
  ripe.kind = Kind::season;
  REQUIRE(service.tick({}, at(10), {ripe}).size() == 1);
  ripe.at += std::chrono::days{20};
  CHECK(service.tick({}, ripe.at, {ripe}).empty());
  ripe.at += std::chrono::days{345};
  CHECK(service.tick({}, ripe.at, {ripe}).size() == 1);
}

TEST_CASE("a late notice is said once and marked; an old one not at all") {
  Service service;
  const Notice opens = stage("window-opens", 10, 1);
  const auto told = service.tick({}, at(23), {opens});
  REQUIRE(told.size() == 1);
  CHECK(told[0].late);
  CHECK(service.tick({}, at(24), {opens}).empty());
  Service old;
  CHECK(old.tick({}, at(10 + 7 * 24 + 1), {opens}).empty());
  Service fresh;
  fresh.policy.first_start = at(11);
  CHECK(fresh.tick({}, at(12), {opens}).empty());
}

TEST_CASE("the window is near says nothing once it is open") {
  const Notice near = stage("window-near", 10, 5), opens = stage("window-opens", 80, 4);
  Service service;
  const auto told = service.tick({}, at(81), {near, opens});
  REQUIRE(told.size() == 1);
  CHECK(told[0].key == "window-opens");
  Service alone;
  CHECK(alone.tick({}, at(24 * 5), {near}).empty());
  CHECK(alone.tick({}, at(24 * 5 - 1), {near}).size() == 1);
}

TEST_CASE("each held note is its own matter, each streak its own date") {
  Service service;
  CHECK(service.tick({}, at(10), {stage("note-held", 10, 1)}).size() == 1);
  CHECK(service.tick({}, at(34), {stage("note-held", 10, 1), stage("note-held", 34, 2)}).size() ==
        1);
  Notice streak = stage("2026-07-03", 60, 3);
  streak.kind = Kind::sprinkler_streak;
  streak.figure = 3;
  const auto told = service.tick({}, at(60), {streak});
  REQUIRE(told.size() == 1);
  CHECK(told[0].figure == 3.0);
  streak.key = "2026-07-08";
  CHECK(service.tick({}, at(61), {streak}).size() == 1);
  CHECK(service.tick({}, at(62), {streak}).empty());
}
