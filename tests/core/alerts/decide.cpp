// Whether to speak: each rule of the contracts with its own small tale, told by the hour.
#include "core/alerts/decide.hpp"

#include "support/catch.hpp"
#include "tale.hpp"

using namespace tale;

namespace {
constexpr Level none = Level::none, moderate = Level::moderate, severe = Level::severe,
                extreme = Level::extreme;
const std::string field = "north bench";
Episode heat(double start, std::initializer_list<Step> steps, bool stays_open = false) {
  return episode(Kind::heat, field, start, steps, stays_open);
}
}  // namespace

TEST_CASE("an identity names kind, subject and start") {
  const Instant start =
      Instant(std::chrono::sys_days{std::chrono::July / 14 / 2026}) + 20 * one_hour;
  CHECK(identity(Kind::heat, field, start) == "heat/north bench/2026-07-14T20:00:00Z");
}

TEST_CASE("opening, raises and the eased letter") {
  Service service;
  const Episode e = heat(17, {{20, moderate}, {22, severe}, {24, moderate}, {48, none}});
  CHECK(service.run({e}, 18, 60) ==
        "opened Moderate@20 raised Severe@22 reminder Moderate@46 eased none@48 ");
}

TEST_CASE("an episode that never was Severe closes silently") {
  Service service;
  CHECK(service.run({heat(17, {{20, moderate}, {30, none}})}, 18, 60) == "opened Moderate@20 ");
}

TEST_CASE("a telling carries what a letter needs") {
  Service service;
  const Episode e = heat(17, {{20, moderate}, {22, severe}});
  service.tick({known_at(e, at(20))}, at(20));
  const auto told = service.tick({e}, at(22));
  REQUIRE(told.size() == 1);
  CHECK(told[0].saying == Saying::raised);
  CHECK(told[0].episode == identity(Kind::heat, field, at(17)));
  CHECK(told[0].start == at(17));
  CHECK(told[0].about == at(22));
  CHECK(told[0].peak == severe);
  CHECK(told[0].severity == Severity::severe);
  CHECK(told[0].figure == 34.0);
  CHECK_FALSE(told[0].late);
  const Said said = record_of(told[0], at(22));
  CHECK(said.until == at(22));
  CHECK(said.at == at(22));
  CHECK(said.level == severe);
}

TEST_CASE(
    "reminders come a day after the last saying of any kind, and only at a level that stands") {
  Service service;
  const Episode e = heat(7, {{10, moderate}, {20, severe}, {100, none}}, true);
  CHECK(service.run({e}, 0, 200) ==
        "opened Moderate@10 raised Severe@20 reminder Severe@44 reminder Severe@68 "
        "reminder Severe@92 ");
}

TEST_CASE("a reminder due during a pause comes once after it") {
  Service service;
  const Episode e = heat(7, {{10, severe}});
  CHECK(service.run({e}, 0, 20) == "opened Severe@10 ");
  CHECK(service.run({e}, 90, 100) == "reminder Severe@90 ");
}

TEST_CASE("a person who has seen a level is not reminded of it, but of a raise") {
  Service service;
  const Episode e = heat(7, {{10, moderate}, {60, severe}});
  service.run({e}, 0, 12);
  for (Said& said : service.ledger) said.seen = true;
  CHECK(service.run({e}, 13, 59).empty());
  CHECK(service.run({e}, 60, 90) == "raised Severe@60 reminder Severe@84 ");
  for (Said& said : service.ledger) said.seen = said.level == severe;
  CHECK(service.run({e}, 91, 200).empty());
}

TEST_CASE("what stays below the settings' least severity is not told until it reaches it") {
  Service service;
  service.policy.min_level = severe;
  CHECK(service.run({heat(7, {{10, moderate}, {60, severe}, {64, moderate}, {100, none}})}, 0,
                    110) == "opened Severe@60 eased none@100 ");
  Service station;  // the least severity is of hazards, not of the watch itself
  station.policy.min_level = extreme;
  CHECK(station.run({episode(Kind::no_data, "bench", 7, {{10, moderate}, {12, none}})}, 0, 20) ==
        "opened Moderate@10 ended none@12 ");
}

TEST_CASE("a level flapping on its threshold gives one letter in seven days") {
  Service service;
  const Episode e = heat(0, {{1, moderate},
                             {5, severe},
                             {6, moderate},
                             {7, severe},
                             {8, moderate},
                             {9, severe},
                             {10, moderate},
                             {11, severe},
                             {12, moderate}});
  CHECK(service.run({e}, 0, 28) == "opened Moderate@1 raised Severe@5 ");
}

TEST_CASE("seven days after a level was last told it is told again") {
  const auto heard_at = [](double hours_later) {
    Service service;
    const Episode e =
        heat(0, {{1, moderate}, {5, severe}, {6, moderate}, {5 + hours_later, severe}});
    service.run({e}, 0, 4 + hours_later);  // reminders of Moderate do not stand for Severe
    return service.run({e}, 5 + hours_later, 5 + hours_later);
  };
  CHECK(heard_at(7 * 24) == "reminder Severe@173 ");  // exactly 7 days: no raise
  CHECK(heard_at(7 * 24 + 1) == "raised Severe@174 ");
}

TEST_CASE("a re-fold that moves, splits or joins an episode keeps its identity") {
  Service service;
  const Episode before = heat(10, {{13, severe}});
  REQUIRE(service.tick({before}, at(14)).size() == 1);
  const std::string name = service.ledger[0].episode;
  for (const double start : {4.0, 8.0, 12.0, 13.5}) {
    CHECK(service.tick({heat(start, {{start + 0.4, severe}})}, at(15)).empty());
  }
  const Episode first = heat(9, {{10, severe}, {13, none}});
  const Episode second = heat(13, {{14, severe}, {16, extreme}});
  const auto told = service.tick({first, second}, at(16));
  REQUIRE(told.size() == 1);
  CHECK(told[0].saying == Saying::raised);
  CHECK(told[0].episode == name);
  CHECK(service.tick({heat(9, {{10, severe}, {16, extreme}})}, at(17)).empty());
}

TEST_CASE("an episode that begins when another closed is a new one") {
  Service service;
  const Episode a = heat(0, {{3, moderate}, {20, none}}), b = heat(20, {{21, moderate}});
  CHECK(service.run({a, b}, 0, 30) == "opened Moderate@3 opened Moderate@21 ");
  CHECK(service.ledger[0].episode != service.ledger[1].episode);
}

TEST_CASE("of an episode that a re-fold took away nothing is said") {
  Service service;
  service.tick({heat(10, {{13, severe}})}, at(14));
  CHECK(service.tick({}, at(15)).empty());
  CHECK(service.tick({}, at(60)).empty());
}

TEST_CASE("an end that a re-fold withdraws is withdrawn at once") {
  Service service;
  const Episode ended = heat(10, {{13, severe}, {48, none}});
  service.run({ended}, 13, 14);
  CHECK(service.run({ended}, 48, 49) == "eased none@48 ");
  const Episode longer = heat(10, {{13, severe}, {72, none}});
  CHECK(service.run({longer}, 50, 80) == "reminder Severe@50 eased none@72 ");
}

TEST_CASE("what is learned more than 12 hours late is told once, all of it together") {
  const Episode e = heat(10, {{13, moderate}, {15, severe}, {24, moderate}});
  Service service;
  CHECK(service.tick({e}, at(27)).front().saying == Saying::opened);  // exactly 12 h: not late
  service.ledger.clear();
  const auto told = service.tick({e}, at(30));
  REQUIRE(told.size() == 1);
  CHECK(told[0].saying == Saying::learned_late);
  CHECK(told[0].late);
  CHECK(told[0].level == severe);
  CHECK(told[0].changes.size() == 3);
  CHECK(service.run({e}, 31, 53).empty());
  CHECK(service.run({e}, 54, 54) == "reminder Moderate@54 ");
}

TEST_CASE("a fresh raise after late news is told as fresh") {
  const Episode e = heat(10, {{13, moderate}, {30, severe}});
  Service service;
  CHECK(service.run({e}, 30, 40) == "opened Severe@30 ");
}

TEST_CASE("what was over before it could be told is told as learned late, and not eased again") {
  Service service;
  CHECK(service.run({heat(10, {{13, severe}, {40, none}})}, 41, 90) == "late Severe@41 ");
  Service told_before;
  const Episode e = heat(10, {{13, severe}, {40, none}});
  told_before.run({e}, 13, 14);
  CHECK(told_before.run({e}, 60, 90) == "late none@60 ");
}

TEST_CASE("what is older than seven days or the first start is not told, then or later") {
  const Episode e = heat(10, {{13, severe}, {250, extreme}});
  Service old;
  CHECK(old.run({e}, 13 + 7 * 24 + 1, 249).empty());
  CHECK(old.run({e}, 250, 260) == "opened Extreme@250 ");
  Service fresh;
  fresh.policy.first_start = at(20);
  CHECK(fresh.run({e}, 20, 249).empty());
  CHECK(fresh.run({e}, 250, 260) == "opened Extreme@250 ");
}

TEST_CASE("a station that is silent now is told however long ago it fell silent") {
  const Episode e = episode(Kind::no_data, "bench", 10, {{13, moderate}});
  Service service;
  service.policy.first_start = at(400);
  CHECK(service.run({e}, 400, 430) == "late Moderate@400 reminder Moderate@424 ");
}

TEST_CASE("no data: told, raised when the window opens, and ended when readings come back") {
  Service service;
  const Episode e = episode(Kind::no_data, "bench", 10, {{11, moderate}, {20, severe}, {30, none}});
  CHECK(service.run({e}, 0, 40) == "opened Moderate@11 raised Severe@20 ended none@30 ");
  Service gap;  // late readings filled the gap: the reader must hear that the station is back
  gap.run({e}, 11, 12);
  CHECK(gap.run({}, 13, 40) == "ended none@13 ");
  Service clock;  // a clock that was set back takes nothing away
  clock.run({e}, 11, 12);
  CHECK(clock.tick({e}, at(5)).empty());
  Episode over = e;
  over.changes.back().detail = season_over;
  Service harvested;
  CHECK(harvested.run({over}, 0, 40) == "opened Moderate@11 raised Severe@20 ");
}

TEST_CASE("a doubtful sensor ends with a letter only if it was told as Moderate") {
  const auto doubtful = [](Level level) {
    Episode e = episode(Kind::doubtful_sensor, "bench", 4, {{10, level}, {50, none}});
    Service service;
    return service.run({e}, 0, 60);
  };
  CHECK(doubtful(moderate) == "opened Moderate@10 reminder Moderate@34 ended none@50 ");
  CHECK(doubtful(none) == "opened none@10 ");
}

TEST_CASE("an outlook is not repeated, and of one that is over nothing is said") {
  const Episode e = episode(Kind::heat_ahead, field, 16, {{17, severe}, {30, none}});
  Service service;
  CHECK(service.run({e}, 0, 60) == "opened Severe@17 ");
  Service late;
  CHECK(late.run({e}, 31, 60).empty());
}

TEST_CASE("mail trouble is told when letters go again") {
  const Episode e = episode(Kind::mail_trouble, "antherd", 4, {{10, moderate}, {50, none}});
  Service service;
  CHECK(service.run({e}, 0, 80) == "ended none@50 ");
}

TEST_CASE("the gravest comes first, then by subject") {
  Service service;
  const auto told = service.tick(
      {episode(Kind::heat, "b", 1, {{4, moderate}}), episode(Kind::heat, "a", 1, {{4, moderate}}),
       episode(Kind::humid_spell, "c", 1, {{4, extreme}}),
       episode(Kind::no_data, "a", 1, {{4, severe}})},
      at(5));
  REQUIRE(told.size() == 4);
  CHECK(told[0].subject == "c");
  CHECK(told[1].kind == Kind::no_data);
  CHECK(told[2].subject == "a");
  CHECK(told[3].subject == "b");
}

TEST_CASE("what a clock that stood ahead has said is over when the clock is put right") {
  Service service;
  const Episode gone = episode(Kind::no_data, "bench", 10, {{11, severe}}, true);
  // Told at 11 by a clock that showed 41, and put right at 16: the silence was none.
  const auto told = service.tick({gone}, at(41));
  REQUIRE(told.size() == 1);
  std::string heard;
  for (int hour = 16; hour < 60; ++hour) {
    for (const Telling& t : service.tick({}, at(hour))) heard += line(t, hour);
  }
  CHECK(heard == "ended none@16 ");
}

TEST_CASE("a clock that once stood six days ahead silences no later alert and no reminder") {
  const Instant days_ahead = at(24.0 * 6 + 21);
  Service service;
  const Episode first = heat(17, {{20, moderate}, {30, none}});
  REQUIRE(service.tick({known_at(first, at(21))}, days_ahead).size() == 1);
  // Three days later another episode, with a clock that was put right.
  const Episode second = heat(84, {{87, moderate}, {140, none}});
  CHECK(service.run({first, second}, 22, 120) == "opened Moderate@87 reminder Moderate@111 ");
}

TEST_CASE("two silences that only a wrong clock made are over with one word") {
  Service service;
  const Episode first = episode(Kind::no_data, "bench", 10, {{11, severe}}, true);
  const Episode second = episode(Kind::no_data, "bench", 20, {{21, severe}}, true);
  REQUIRE(service.tick({first}, at(12)).size() == 1);
  REQUIRE(service.tick({second}, at(22)).size() == 1);
  std::string heard;
  for (int hour = 23; hour < 40; ++hour) {
    for (const Telling& t : service.tick({}, at(hour))) heard += line(t, hour);
  }
  CHECK(heard == "ended none@23 ");
}

TEST_CASE("a reminder is not said again when the clock is put back by some hours") {
  const Episode e = heat(7, {{10, moderate}, {400, none}}, true);
  Service service;
  REQUIRE(service.tick({known_at(e, at(10))}, at(10)).size() == 1);
  REQUIRE(service.tick({e}, at(46)).size() == 1);  // a reminder, by a clock that is 10 h ahead
  CHECK(service.run({e}, 36, 75) == "reminder Moderate@70 ");
  Service far;  // two days ahead: the reminders that are due come
  REQUIRE(far.tick({known_at(e, at(10))}, at(10)).size() == 1);
  REQUIRE(far.tick({e}, at(84)).size() == 1);
  CHECK(far.run({e}, 36, 50) == "reminder Moderate@36 ");
}
