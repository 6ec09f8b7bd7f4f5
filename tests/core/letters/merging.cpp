// Who gets which letter, what merges, and by what name a letter is known.
#include <algorithm>
#include <set>

#include "core/letters/wrap.hpp"
#include "rules.hpp"
#include "scene.hpp"
#include "support/catch.hpp"

using namespace antherd;
using alerts::Kind;
using alerts::Saying;
using risk::Level;

namespace {

alerts::Telling southern(alerts::Telling telling) {
  telling.subject = "south bench";
  telling.episode += " south";
  return telling;
}

bool has(const std::string& text, const std::string& part) {
  return text.find(part) != std::string::npos;
}

/// The text as one line, for sentences that may be wrapped anywhere.
std::string flat(std::string text) {
  std::replace(text.begin(), text.end(), '\n', ' ');
  for (std::size_t at; (at = text.find("  ")) != std::string::npos;) text.erase(at, 1);
  return text;
}

letters::Recipient only(const std::string& field) {
  letters::Recipient recipient;
  recipient.address = "foreman@larkspur.example";
  recipient.fields = {field};
  return recipient;
}

std::string id_of(const alerts::Telling& telling, const letters::Recipient& recipient,
                  const letters::Desk& desk) {
  return letters::compose(std::vector{telling}, std::vector{recipient}, desk).at(0).id;
}

}  // namespace

namespace {

/// The first line of the letter about yesterday's heat on a field of that name.
std::string first_line_of(const std::string& name) {
  letters::Desk desk = scene::desk();
  desk.fields[name] = desk.fields.at("north bench");
  desk.fields[name].field = name;
  alerts::Telling telling = scene::heat(Saying::opened, Level::severe);
  telling.subject = name;
  telling.about -= Seconds{24 * 3600};
  const auto made = letters::compose(std::vector{telling}, std::vector{scene::owner()}, desk);
  return made.at(0).body.substr(0, made.at(0).body.find('\n'));
}

}  // namespace

TEST_CASE("a long name is the last thing that the first line cuts") {
  const std::string weekday = "Mon 13", verdict = " Heat Severe.";  // 13 July 2026 is a Monday
  const std::string rest = first_line_of("n").substr(1);
  REQUIRE(has(rest, weekday));
  REQUIRE(rest.ends_with(verdict));
  std::string shorter = rest;
  shorter.erase(shorter.find(weekday), 4);
  const std::string shortest = shorter.substr(0, shorter.size() - verdict.size());
  int whole = 0, cut = 0;
  for (std::size_t length = 9; length <= 78; ++length) {
    CAPTURE(length);
    const std::string name(length, 'n');
    const std::string line = first_line_of(name);
    CHECK(letters::columns(line) <= 78);
    const auto fits = [&](const std::string& end) { return length + letters::columns(end) <= 78; };
    const bool all = fits(rest) || fits(shorter) || fits(shortest);
    ++(all ? whole : cut);
    if (all) {
      CHECK(line == name + (fits(rest) ? rest : fits(shorter) ? shorter : shortest));
    } else {
      CHECK(line.ends_with("…" + shortest));  // flower, figure and clock stay
      CHECK(letters::columns(line) == 78);
    }
  }
  CHECK(whole > 30);
  CHECK(cut > 10);
}

TEST_CASE("letters of one kind merge, the worst field first") {
  const letters::Desk desk = scene::desk();
  const std::vector tellings{southern(scene::heat(Saying::opened, Level::moderate)),
                             scene::heat(Saying::raised, Level::severe),
                             scene::humid(Saying::opened, Level::moderate)};
  const auto made = letters::compose(tellings, std::vector{scene::owner()}, desk);
  REQUIRE(made.size() == 2);
  CHECK(made[0].kind == "heat");
  CHECK(made[0].severity == alerts::Severity::severe);
  CHECK(made[0].subject.rfind("Heat Severe: north bench", 0) == 0);
  CHECK(has(made[0].subject, "+1 more"));
  CHECK(made[0].body.find("north bench") < made[0].body.find("south bench: "));
  CHECK(made[0].raise);
  CHECK(made[1].kind == "humid_spell");
  CHECK_FALSE(made[1].raise);
  CHECK_FALSE(has(made[1].body, "south bench"));
  CHECK(made[0].valid_until == desk.now + Seconds{72 * 3600});
}

TEST_CASE("a letter of very many fields stays below 32 KiB and loses no field quietly") {
  letters::Desk desk = scene::desk();
  std::vector<alerts::Telling> tellings;
  for (int i = 0; i < 300; ++i) {
    alerts::Telling telling = scene::heat(Saying::opened, Level::severe);
    telling.subject = "field " + std::to_string(i);
    desk.fields[telling.subject] = scene::north();
    desk.fields[telling.subject].field = telling.subject;
    tellings.push_back(telling);
  }
  const auto made = letters::compose(tellings, std::vector{scene::owner()}, desk);
  REQUIRE(made.size() == 1);
  CHECK(made[0].body.size() < 32 * 1024);
  CHECK(has(made[0].body, "And 193 more: antherd now"));  // 1 + 6 in full, 100 by a line
  CHECK(rules::broken_by(made[0], false, scene::calendar()).empty());
}

TEST_CASE("recipients get the fields they asked for") {
  const letters::Desk desk = scene::desk();
  const std::vector tellings{southern(scene::heat(Saying::opened, Level::severe))};
  const std::vector recipients{only("north bench"), only("south bench"), scene::owner()};
  const auto made = letters::compose(tellings, recipients, desk);
  REQUIRE(made.size() == 2);
  CHECK(made[0].recipient == "foreman@larkspur.example");
  CHECK(made[1].recipient == "owner@larkspur.example");
  CHECK(made[0].id != made[1].id);

  SECTION("a station speaks to those whose fields it watches") {
    letters::Desk one = desk;
    one.stations["bench"].fields = {"north bench"};
    CHECK(letters::compose(std::vector{scene::silent(Saying::opened)}, recipients, one).size() ==
          2);
    one.stations.clear();  // unknown: everybody's trouble
    CHECK(letters::compose(std::vector{scene::silent(Saying::opened)}, recipients, one).size() ==
          3);
  }
  SECTION("the daily line") {
    const auto daily = letters::compose_daily(recipients, desk);
    REQUIRE(daily.size() == 3);
    CHECK_FALSE(has(daily[0].body, "south bench"));
    CHECK(has(daily[2].body, "south bench"));
    CHECK(daily[0].valid_until == desk.now + Seconds{12 * 3600});
  }
  SECTION("no daily line outside the window") {
    letters::Desk later = desk;
    for (auto& [name, status] : later.fields) status.flower.part = season::Part::shoulder_after;
    CHECK(letters::compose_daily(recipients, later).empty());
  }
  SECTION("the weekly review comes to all, with their fields") {
    const auto weekly = letters::compose_weekly(scene::review(), recipients, desk);
    REQUIRE(weekly.size() == 3);
    CHECK(has(weekly[0].body, "west side ahead"));
    CHECK_FALSE(has(weekly[1].body, "west side ahead"));
    CHECK(weekly[0].valid_until == desk.now + Seconds{7 * 24 * 3600});
  }
}

TEST_CASE("late news is one letter, whatever its kinds") {
  const letters::Desk desk = scene::desk();
  alerts::Telling heat = scene::heat(Saying::learned_late, Level::severe);
  alerts::Telling wet = southern(scene::humid(Saying::learned_late, Level::moderate));
  heat.late = wet.late = true;
  heat.changes = {{scene::at(12, 15), alerts::Phase::opened, Level::severe, {}, 36.0, ""}};
  wet.changes = {{scene::at(12, 19), alerts::Phase::opened, Level::moderate, {}, 2.5, ""}};
  const auto made = letters::compose(std::vector{wet, heat}, std::vector{scene::owner()}, desk);
  REQUIRE(made.size() == 1);
  CHECK(made[0].subject.rfind("Learned late, heat Severe: north bench", 0) == 0);
  CHECK(has(made[0].body, "Sun 12 Jul 3 pm: north bench, heat opened at Severe, 97 °F"));
  CHECK(has(made[0].body, "Sun 12 Jul 7 pm: south bench, mildew weather opened at Moderate"));
  CHECK(has(made[0].body, "HEAT (south bench)"));
  CHECK(has(made[0].body, "MILDEW (north bench)"));
}

TEST_CASE("the same telling to the same person has the same name, another has another") {
  const letters::Desk desk = scene::desk();
  const alerts::Telling telling = scene::heat(Saying::opened, Level::severe);
  const std::string id = id_of(telling, scene::owner(), desk);
  CHECK(id_of(telling, scene::owner(), scene::desk()) == id);
  letters::Desk later = desk;
  later.now += Seconds{300};
  later.fields["north bench"].heat.exposed_share = 0.2;
  CHECK(id_of(telling, scene::owner(), later) == id);

  std::set<std::string> ids{id};
  const auto another = [&](const alerts::Telling& other, const letters::Recipient& recipient) {
    CHECK(ids.insert(id_of(other, recipient, desk)).second);
  };
  another(telling, only("north bench"));
  another(scene::heat(Saying::raised, Level::severe), scene::owner());
  another(scene::heat(Saying::opened, Level::extreme), scene::owner());
  alerts::Telling moved = telling;
  moved.about += Seconds{3600};
  another(moved, scene::owner());
  moved = telling;
  moved.episode += "x";
  another(moved, scene::owner());

  SECTION("each reminder is a letter of its own") {
    const alerts::Telling reminder = scene::heat(Saying::reminder, Level::severe);
    later.now = desk.now + Seconds{24 * 3600};
    CHECK(id_of(reminder, scene::owner(), desk) != id_of(reminder, scene::owner(), later));
  }
  SECTION("daily and weekly by their day") {
    const std::vector recipients{scene::owner()};
    CHECK(letters::compose_daily(recipients, desk).at(0).id ==
          letters::compose_daily(recipients, later).at(0).id);
    later.now += Seconds{24 * 3600};
    CHECK(letters::compose_daily(recipients, desk).at(0).id !=
          letters::compose_daily(recipients, later).at(0).id);
    letters::Review next = scene::review();
    next.first += std::chrono::days{7};
    next.last += std::chrono::days{7};
    CHECK(letters::compose_weekly(scene::review(), recipients, desk).at(0).id !=
          letters::compose_weekly(next, recipients, desk).at(0).id);
  }
}

TEST_CASE("the screen of two fields stays a screen") {
  letters::Desk desk = scene::desk();
  std::vector<alerts::Said> open;
  for (int i = 0; i < 9; ++i) {
    alerts::Said said;
    said.episode = "heat/" + std::to_string(i);
    said.subject = "north bench";
    said.level = Level::moderate;
    said.start = scene::at(14, i);
    open.push_back(said);
  }
  const std::vector<std::string> attention(9, "a letter is parked");
  const std::string text = letters::compose_now(desk, open, attention);
  CHECK(std::count(text.begin(), text.end(), '\n') <= 24);
  CHECK(has(text, "and 6 more"));
  CHECK(rules::broken_by_text(text, scene::july(14)).empty());
}

TEST_CASE("a silence told late that still lasts is no news of the past") {
  const letters::Desk desk = scene::desk();
  alerts::Telling telling = scene::silent(Saying::learned_late);
  telling.late = true;
  using alerts::Phase;
  telling.changes = {{scene::at(12, 15), Phase::opened, Level::severe, {}, 7.0, ""}};
  const auto lasting = letters::compose(std::vector{telling}, std::vector{scene::owner()}, desk);
  REQUIRE(lasting.size() == 1);
  CHECK(has(lasting[0].subject, "silent since"));
  CHECK(lasting[0].subject.back() != ' ');
  CHECK(has(lasting[0].body, "Tonight: it still lasts"));
  CHECK(has(lasting[0].body, "no data still lasts"));
  CHECK_FALSE(has(flat(lasting[0].body), "nothing hangs on this news"));
  telling.changes.push_back({scene::at(13, 2), Phase::closed, Level::none, {}, {}, ""});
  const auto over = letters::compose(std::vector{telling}, std::vector{scene::owner()}, desk);
  CHECK(has(over.at(0).body, "nothing hangs on this news"));
  CHECK_FALSE(has(over.at(0).body, "still lasts"));
}

TEST_CASE("a silent station's letter says which fields another station watches") {
  letters::Desk desk = scene::desk();
  letters::StationStory& story = desk.stations["bench"];
  story.stand_in["south bench"] = "creek";
  const std::vector tellings{scene::silent(Saying::opened)};
  const auto some = letters::compose(tellings, std::vector{scene::owner()}, desk).at(0);
  CHECK(has(some.body, "Tonight: nobody is watching north bench; go"));
  CHECK(has(flat(some.body), "South bench is watched by its other station, creek"));
  story.stand_in["north bench"] = "creek";
  const auto all = letters::compose(tellings, std::vector{scene::owner()}, desk).at(0);
  CHECK_FALSE(has(all.body, "nobody is watching"));
  CHECK_FALSE(has(flat(all.body), "no warning about them can come"));
  CHECK(has(flat(all.body), "stands in for north bench and south bench"));
}

TEST_CASE("with the worst field at Extreme another field may still rise") {
  const letters::Desk desk = scene::desk();
  const std::vector both{scene::heat(Saying::raised, Level::extreme),
                         southern(scene::heat(Saying::reminder, Level::severe))};
  const auto mixed = letters::compose(both, std::vector{scene::owner()}, desk).at(0);
  CHECK_FALSE(has(flat(mixed.body), "cannot rise further"));
  CHECK(has(flat(mixed.body), "a field not yet at Extreme"));
  const std::vector one{scene::heat(Saying::raised, Level::extreme)};
  CHECK(has(letters::compose(one, std::vector{scene::owner()}, desk).at(0).body,
            "cannot rise further"));
}

TEST_CASE("a week that nobody saw is not called below Moderate") {
  letters::Review review = scene::quiet_review();
  for (season::HeatDay& day : review.fields[0].days) {
    const CivilDay date = day.date;
    day = season::HeatDay{};
    day.date = date;
  }
  for (season::HumidDay& day : review.fields[0].humid_days) {
    const CivilDay date = day.date;
    day = season::HumidDay{};
    day.date = date;
  }
  review.fields[0].coolest.clear();
  review.fields[0].hours_valid = 0;
  const std::string text = letters::compose_review(review, scene::desk());
  CHECK(has(flat(text), "heat not seen, mildew not judged"));
  const std::size_t row = text.find("Mon  6 Jul");
  REQUIRE(row != std::string::npos);
  const std::string line = text.substr(row, text.find('\n', row) - row);
  CHECK(std::count(line.begin(), line.end(), '-') == 10);  // each column but the date
  CHECK_FALSE(has(line, "."));
}
