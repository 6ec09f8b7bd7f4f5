// Whole letters, compared with the texts in expected/ (see paper.hpp).
#include <algorithm>

#include "paper.hpp"
#include "rules.hpp"
#include "scene.hpp"
#include "support/catch.hpp"

using namespace antherd;
using alerts::Kind;
using alerts::Saying;
using paper::compare;
using paper::on_paper;
using paper::seen_to_now;
using risk::Level;

namespace {

void compare(const std::string& name, const std::vector<alerts::Telling>& tellings,
             const letters::Desk& desk, letters::Recipient recipient = scene::owner()) {
  const auto made = letters::compose(tellings, std::vector{recipient}, seen_to_now(desk));
  REQUIRE(made.size() == 1);
  paper::compare(name, on_paper(made[0]));
}

}  // namespace

TEST_CASE("heat letters read as written") {
  letters::Desk desk = scene::desk();
  SECTION("opened, overhead, in flower") {
    desk.fields["north bench"].data.shield_may_read_high = true;
    compare("heat-opened", {scene::heat(Saying::opened, Level::severe)}, desk);
  }
  SECTION("raised, metric, drip, flower not seen, hours missing") {
    desk.units = letters::Units::metric;
    alerts::Telling telling = scene::heat(Saying::opened, Level::moderate);
    telling.subject = "south bench";
    telling.figure = 33.6;
    desk.fields["south bench"].data.hours_missing_24 = 3;
    compare("heat-metric-drip", {telling}, desk);
  }
  SECTION("reminder of two fields") {
    desk.now = scene::at(15, 16, 5);
    for (auto& [name, status] : desk.fields) {
      status.heat.yesterday = status.heat.today;
      status.heat.today.date = scene::july(15);
      status.as_of = scene::at(15, 16);
    }
    desk.next_daily = scene::at(15, 19);
    alerts::Telling other = scene::heat(Saying::opened, Level::moderate);
    other.subject = "south bench";
    other.figure = 33.6;
    other.about = scene::at(15, 16);
    other.start = scene::at(15, 13);
    compare("heat-reminder-merged", {scene::heat(Saying::reminder, Level::severe), other}, desk);
  }
  SECTION("eased after Severe") {
    desk.now = scene::at(16, 0, 5);
    alerts::Telling telling = scene::heat(Saying::eased, Level::none);
    telling.peak = Level::severe;
    telling.about = scene::at(16, 0);
    season::FieldStatus& status = desk.fields["north bench"];
    status.as_of = telling.about;
    status.heat.yesterday = season::HeatDay{};
    status.heat.yesterday->date = scene::july(15);
    status.heat.yesterday->t_max = Celsius(30.3);
    status.heat.today = season::HeatDay{};
    status.heat.today.date = scene::july(16);
    desk.next_daily = scene::at(16, 19);
    compare("heat-eased", {telling}, desk);
  }
  SECTION("brief") {
    letters::Recipient recipient = scene::owner();
    recipient.brief = true;
    compare("heat-brief", {scene::heat(Saying::opened, Level::severe)}, desk, recipient);
  }
}

TEST_CASE("letters of a thirsty crop read as written") {
  letters::Desk desk = scene::desk();
  season::FieldStatus& status = desk.fields["north bench"];
  status.water = {0.52, 0, Millimetre(119), Millimetre(160), CelsiusDifference(2.1)};
  SECTION("heat") { compare("heat-thirsty", {scene::heat(Saying::opened, Level::severe)}, desk); }
  SECTION("well watered") {
    status.water = {1.0, 4, Millimetre(41), Millimetre(160), CelsiusDifference(-1.0)};
    compare("heat-watered", {scene::heat(Saying::opened, Level::severe)}, desk);
  }
}

TEST_CASE("a wide window and a held note read as written") {
  letters::Desk desk = scene::desk();
  season::FlowerStatus& flower = desk.fields["north bench"].flower;
  SECTION("wide: nobody has noted flowers") {
    flower = scene::south().flower;
    flower.window_first = scene::july(12);
    flower.window_last = scene::july(12) + std::chrono::days{66};
    flower.day_of_window = 2;
    flower.days_in_window = 67;
    flower.flower_first = scene::july(26);
    flower.flower_first_days = 9;
    compare("heat-wide-window", {scene::heat(Saying::opened, Level::severe)}, desk);
  }
  SECTION("held: the screen and the notice show both windows") {
    flower.note_held = true;
    flower.without_note_first = scene::july(20);
    flower.without_note_last = scene::july(20) + std::chrono::days{40};
    flower.with_note_first = scene::july(2);
    flower.with_note_last = scene::july(22);
    compare("now-held", letters::compose_now(desk, {}, {}));
    desk.now = scene::at(14, 12, 5);
    alerts::Telling telling = scene::notice(Kind::stage, "note-held-2026-07-08");
    telling.day = scene::july(8);
    telling.about = scene::at(14, 12);
    compare("note-held", {telling}, desk);
  }
}

TEST_CASE("a mildew letter of two fields reads as written") {
  letters::Desk desk = scene::desk();
  desk.now = scene::at(14, 19, 5);
  desk.next_daily = scene::at(15, 19);
  season::FieldStatus& south = desk.fields["south bench"];
  south.irrigation = field::Method::overhead;
  south.humid = desk.fields["north bench"].humid;
  alerts::Telling other = scene::humid(Saying::opened, Level::moderate);
  other.subject = "south bench";
  other.figure = 2;
  const std::vector<alerts::Telling> both{scene::humid(Saying::opened, Level::severe), other};
  compare("humid-merged", both, desk);
  const auto made = letters::compose(both, std::vector{scene::owner()}, desk);
  CHECK(std::count(made.at(0).body.begin(), made.at(0).body.end(), '\n') <= 85);
}

TEST_CASE("mildew letters read as written") {
  letters::Desk desk = scene::desk();
  desk.now = scene::at(14, 19, 5);
  desk.next_daily = scene::at(15, 19);
  season::FieldStatus& status = desk.fields["north bench"];
  status.as_of = scene::at(14, 19);
  SECTION("raised to Severe by sprinklers") {
    for (std::size_t i = 2; i < 5; ++i) {
      season::HumidDay& day = status.humid.last_five[i];
      day.night_set = true;
      day.water = true;
      day.infection = 1.8;
      day.dry_out = i == 2;
      day.score = i == 2 ? 1 : 1.5;
    }
    status.humid.last_five.back().level = Level::severe;
    status.humid.last_five.back().r = 3.5;
    status.humid.last = status.humid.last_five.back();
    status.humid.night_sets_last_five = 4;
    status.humid.if_watered_tonight = Level::extreme;
    status.humid.if_drier = Level::moderate;
    status.humid.if_damper = Level::severe;
    status.humid.if_not_watered = Level::moderate;
    status.humid.close_to_sunset_limit = true;
    compare("humid-raised", {scene::humid(Saying::raised, Level::severe)}, desk);
  }
  SECTION("exercise, fog on a drip field, flowering not known") {
    desk.exercise = true;
    alerts::Telling telling = scene::humid(Saying::opened, Level::moderate);
    telling.subject = "south bench";
    telling.figure = 2;
    season::FieldStatus& south = desk.fields["south bench"];
    south.flower = season::FlowerStatus{};
    south.flower.known = false;
    south.flower.part = season::Part::window;
    south.as_of = scene::at(14, 19);
    south.data.rain_measured = false;
    for (season::HumidDay& day : south.humid.last_five) {
      day.infection = 1.3;
      day.score = 1;
      day.dry_out = false;
      day.level = Level::moderate;
    }
    south.humid.last_five[1] = season::HumidDay{};
    south.humid.last_five[1].date = scene::july(11);
    south.humid.last = south.humid.last_five.back();
    compare("humid-exercise-unknown", {telling}, desk);
  }
}

TEST_CASE("letters about the watch itself read as written") {
  letters::Desk desk = scene::desk();
  SECTION("a station falls silent") {
    letters::StationStory& story = desk.stations["bench"];
    story.last_reading = scene::at(14, 13, 5);
    story.source = "http://192.168.1.20/now.json";
    story.last_trouble = "connection refused";
    story.refused_rows = 2;
    alerts::Episode open;
    open.level = Level::moderate;
    desk.fields["north bench"].heat.episode = open;
    compare("silent", {scene::silent(Saying::opened)}, desk);
  }
  SECTION("readings are back") {
    desk.fields["north bench"].data.hours_missing_24 = 3;
    desk.fields["south bench"].data.hours_missing_24 = 3;
    compare("silent-ended", {scene::silent(Saying::ended)}, desk);
  }
  SECTION("a sensor in doubt") {
    weather::Flag flag;
    flag.verdict = weather::Verdict::suspect;
    flag.reason = weather::Reason::stuck;
    desk.stations["bench"].flags_24 = {flag};
    compare("doubtful", {scene::doubtful()}, desk);
  }
  SECTION("a temperature in the wrong unit") {
    weather::Flag flag;
    flag.verdict = weather::Verdict::wrong;
    flag.reason = weather::Reason::fahrenheit_as_celsius;
    flag.value = 46;
    desk.stations["bench"].flags_24 = {flag};
    alerts::Telling telling = scene::doubtful();
    telling.detail = weather::describe(flag);
    compare("doubtful-unit", {telling}, desk);
  }
  SECTION("learned late") {
    alerts::Telling telling = scene::heat(Saying::learned_late, Level::severe);
    telling.late = true;
    telling.about = scene::at(14, 0);
    telling.figure = 35.6;
    using alerts::Phase;
    telling.changes = {{scene::at(12, 15), Phase::opened, Level::moderate, {}, 33.1, ""},
                       {scene::at(12, 16), Phase::raised, Level::severe, {}, 35.6, ""},
                       {scene::at(14, 0), Phase::closed, Level::none, {}, {}, ""}};
    compare("learned-late", {telling}, desk);
  }
}

TEST_CASE("notices read as written") {
  letters::Desk desk = scene::desk();
  desk.now = scene::at(14, 7, 5);
  SECTION("near") {
    season::FieldStatus& status = desk.fields["north bench"];
    status.flower = scene::south().flower;
    status.flower.part = season::Part::before;
    status.flower.day_of_window.reset();
    status.flower.window_first = scene::july(24);
    status.flower.flower_first = scene::july(28);
    alerts::Telling telling = scene::notice(Kind::stage, "window-near");
    telling.day = scene::july(24);
    compare("window-near", {telling}, desk);
  }
  SECTION("opens") {
    desk.fields["north bench"].flower = scene::south().flower;
    alerts::Telling telling = scene::notice(Kind::stage, "window-opens");
    telling.day = scene::july(14);
    compare("window-opens", {telling}, desk);
  }
  SECTION("closes") {
    alerts::Telling telling = scene::notice(Kind::stage, "window-closes");
    telling.day = scene::july(16);
    desk.fields["north bench"].flower.window_last = scene::july(16);
    compare("window-closes", {telling}, desk);
  }
  SECTION("seeds to count") {
    desk.now = scene::at(24, 7, 5);
    alerts::Telling telling = scene::notice(Kind::stage, "seed-set");
    telling.day = scene::july(14);
    telling.start = telling.about = scene::at(24, 7);
    season::FieldStatus& status = desk.fields["north bench"];
    status.heat.today = season::HeatDay{};
    status.heat.today.date = scene::july(24);
    desk.next_daily = scene::at(24, 19);
    compare("seed-set", {telling}, desk);
  }
  SECTION("streak") {
    desk.now = scene::at(14, 23, 5);
    alerts::Telling telling = scene::notice(Kind::sprinkler_streak, "2026-07-12");
    telling.figure = 3;
    telling.about = scene::at(14, 23);
    season::FieldStatus& status = desk.fields["north bench"];
    status.humid.streak = status.humid.night_sets_last_five = 3;
    status.last_irrigation_end = status.as_of = scene::at(14, 23);
    desk.next_daily = scene::at(15, 19);
    compare("streak", {telling}, desk);
  }
  SECTION("gap in the log") {
    alerts::Telling telling = scene::notice(Kind::diary_gap, "2026-07-04");
    telling.figure = 10;
    telling.day = scene::july(4);
    compare("diary-gap", {telling}, desk);
  }
  SECTION("ripe") {
    alerts::Telling telling = scene::notice(Kind::season, "ripe");
    desk.fields["north bench"].watch = season::Watch::ripe;
    compare("ripe", {telling}, desk);
  }
}

TEST_CASE("what comes by the calendar reads as written") {
  letters::Desk desk = scene::desk();
  SECTION("the daily line") {
    desk.now = scene::at(14, 19);
    const auto made = letters::compose_daily(std::vector{scene::owner()}, seen_to_now(desk));
    REQUIRE(made.size() == 1);
    compare("daily", on_paper(made[0]));
  }
  SECTION("the weekly review") {
    desk.now = scene::at(13, 6);
    const auto made = letters::compose_weekly(scene::review(), std::vector{scene::owner()}, desk);
    REQUIRE(made.size() == 1);
    compare("weekly", on_paper(made[0]));
  }
  SECTION("a week in which nothing happened") {
    desk.now = scene::at(13, 6);
    compare("weekly-quiet", letters::compose_review(scene::quiet_review(), desk));
  }
  SECTION("the screen") {
    alerts::Said heat;
    heat.episode = "heat/north bench/2026-07-14T19:00:00Z";
    heat.subject = "north bench";
    heat.level = Level::severe;
    heat.start = scene::at(14, 12);
    heat.at = scene::at(14, 16);
    alerts::Said wet = heat;
    wet.kind = Kind::humid_spell;
    wet.episode = "humid_spell/north bench/2026-07-11T04:00:00Z";
    wet.level = Level::moderate;
    wet.start = scene::at(11, 19);
    desk.fields["north bench"].water = {0.52, 0, Millimetre(119), Millimetre(160), {}};
    desk.fields["south bench"].water = {1.0, 12, Millimetre(16.8), Millimetre(160), {}};
    compare("now",
            letters::compose_now(desk, std::vector{heat, wet},
                                 std::vector<std::string>{"1 letter parked: antherd letters"}));
  }
}
