// The rules of letters over a broad sweep of inputs: every state of a field with every kind.
#include <iostream>

#include "rules.hpp"
#include "scene.hpp"
#include "support/catch.hpp"

using namespace antherd;
using alerts::Kind;
using alerts::Saying;
using risk::Level;

namespace {

const std::vector<std::string> names{
    "north bench", "A", "Feld über der Straße",
    "the long field beyond the second gate, east of the old well and below the bench road",
    "tab\there\r\nSubject: x\x7f \"quote\" $HOME `id` \xff\xe2\x80\xae!"};

/// A choice by mixed radix: case n is one combination of all the answers.
class Case {
 public:
  explicit Case(unsigned long number) : left_(number) {}
  std::size_t pick(std::size_t choices) {
    const std::size_t chosen = left_ % choices;
    left_ /= choices;
    return chosen;
  }
  bool yes() { return pick(2) == 1; }

 private:
  unsigned long left_;
};

constexpr unsigned long cases = 8000;
constexpr unsigned long stride = 7919;  // a prime: neighbouring cases differ in every answer

void set_flowers(season::FieldStatus& status, Case& one) {
  const auto parts = {season::Part::window, season::Part::shoulder_before,
                      season::Part::shoulder_after, season::Part::before, season::Part::after};
  status.flower.part = *(parts.begin() + one.pick(5));
  status.flower.known = one.pick(4) != 0;
  const std::size_t scouted = one.pick(4);
  status.flower.scouted = scouted != 0 && status.flower.known;
  if (status.flower.scouted) {
    status.flower.last_note_stage = scouted == 1 ? 51 : scouted == 2 ? 60 : 69;
  } else {
    status.flower.last_note.reset();
    status.flower.last_note_stage.reset();
  }
  status.flower.note_held = status.flower.scouted && one.yes();
  if (status.flower.note_held && one.yes()) {
    status.flower.without_note_first = scene::july(10);
    status.flower.without_note_last = scene::july(28);
    status.flower.with_note_first = scene::july(20);
    if (one.yes()) status.flower.with_note_last = scene::july(31);
  }
  if (one.pick(4) == 0) status.flower.days_in_window = 67;
  status.flower.implausible = one.pick(5) == 0;
  status.flower.filled_share = one.pick(3) == 0 ? 0.04 : 0;
  if (one.pick(3) == 0) status.flower.flower_first.reset();
}

void set_weather(season::FieldStatus& status, Case& one) {
  season::HeatDay& today = status.heat.today;
  today.level = static_cast<Level>(one.pick(4));
  today.weather_level = static_cast<Level>(one.pick(4));
  if (one.pick(4) == 0) {
    today.t_max.reset();
    today.t_max_hour.reset();
    today.hours_32.reset();
    today.first_hot_hour.reset();
  }
  status.heat.if_cooler = static_cast<Level>(one.pick(4));
  status.heat.if_hotter = static_cast<Level>(one.pick(4));
  if (one.yes()) status.heat.yesterday.reset();
  if (one.pick(4) == 0) {
    status.humid.last.reset();
    status.humid.last_five.clear();
  } else if (one.pick(4) == 0) {
    season::HumidDay unjudged;
    unjudged.date = status.humid.last->date;
    status.humid.last = unjudged;
  }
  status.humid.if_watered_tonight = static_cast<Level>(one.pick(4));
  status.humid.if_not_watered = static_cast<Level>(one.pick(4));
  status.humid.night_sets_last_five = static_cast<int>(one.pick(6));
  status.humid.close_to_sunset_limit = one.yes();
  status.data.hours_missing_24 = static_cast<int>(one.pick(3));
  status.data.rain_measured = one.yes();
  status.data.whole_degrees = one.yes();
  status.data.shield_may_read_high = one.yes();
  if (one.yes()) status.water.days_to_stress = static_cast<int>(one.pick(5));
  if (one.yes()) {
    status.water.ks = 0.25 * static_cast<double>(one.pick(5));
    status.water.missing = Millimetre(40.0 * static_cast<double>(one.pick(5)));
    status.water.root_zone = Millimetre(160);
    status.water.canopy = CelsiusDifference(static_cast<double>(one.pick(11)) - 5);
  }
  if (one.yes()) status.last_irrigation_end.reset();
  if (one.yes()) {
    weather::Flag flag;
    flag.verdict = one.yes() ? weather::Verdict::wrong : weather::Verdict::suspect;
    flag.reason = static_cast<weather::Reason>(one.pick(8));
    flag.element = static_cast<weather::Element>(one.pick(7));
    status.data.flags_24 = {flag};
  }
}

struct Made {
  alerts::Telling telling;
  letters::Desk desk;
  letters::Recipient recipient;
  season::FieldStatus status;
};

Made make(unsigned long number, const alerts::Telling& telling) {
  Case one(number * stride);
  Made made{telling, scene::desk(), scene::owner(), scene::north()};
  made.status.irrigation = static_cast<field::Method>(one.pick(4));
  made.recipient.brief = one.pick(4) == 0;
  const std::string& name = names[one.pick(names.size())];
  made.desk.units = one.yes() ? letters::Units::us : letters::Units::metric;
  set_flowers(made.status, one);
  set_weather(made.status, one);
  made.desk.exercise = one.pick(4) == 0;
  made.desk.clock_set = one.pick(8) != 0;
  if (one.yes()) made.desk.next_daily.reset();
  made.status.field = name;
  made.telling.subject = name;
  if (one.pick(5) == 0) made.telling.figure.reset();
  if (one.pick(3) == 0) made.telling.about = scene::at(13, 17);
  made.desk.fields = {{name, made.status}};
  if (one.pick(16) == 0) made.desk.fields.clear();
  return made;
}

std::string first_line(const std::string& body) { return body.substr(0, body.find('\n')); }

std::string second_line(const std::string& body) {
  const std::size_t at = body.find('\n') + 1;
  return body.substr(at, body.find('\n', at) - at);
}

bool has(const std::string& text, const std::string& part) {
  return text.find(part) != std::string::npos;
}

/// What a letter about heat or mildew must hold besides the common rules.
std::vector<std::string> hazard_rules(const Made& made, const letters::Letter& letter) {
  std::vector<std::string> wrong;
  const auto complain = [&](bool bad, const char* what) {
    if (bad) wrong.emplace_back(what);
  };
  const std::string& body = letter.body;
  complain(!has(body, made.telling.kind == Kind::heat ? "\nMILDEW\n" : "\nHEAT\n"),
           "the other hazard's side is missing");
  complain(!has(body, "\nNEXT\n"), "no NEXT");
  complain(second_line(body).rfind("Tonight: ", 0) != 0, "second line is not tonight's decision");
  complain(made.desk.exercise != has(body, "This is an exercise"), "exercise");
  complain(made.desk.exercise != (letter.subject.rfind("EXERCISE: ", 0) == 0), "exercise mark");
  complain(made.desk.clock_set == has(body, "Computer clock not set"), "clock");
  if (made.desk.fields.empty()) return wrong;
  const field::Method method = made.status.irrigation;
  const bool still = method == field::Method::drip || method == field::Method::furrow;
  complain(still != has(body, "wets no leaf"), "drip or furrow wets no leaf");
  complain(method != field::Method::overhead && has(body, "overhead water"),
           "speaks of overhead water where there is none");
  const season::FlowerStatus& flower = made.status.flower;
  const bool seen =
      flower.scouted && flower.last_note_stage == 60 && flower.part == season::Part::window;
  complain(!seen && has(letter.subject, "in flower"), "in flower without a scout, subject");
  complain(!seen && has(first_line(body), ": in flower"), "in flower without a scout, body");
  complain(seen && !has(first_line(body), "in flower"), "in flower is not said");
  bool tagged = made.desk.exercise;  // ten columns less: the mark may push the flowers out
  for (const char* tag :
       {"in flower", "flower not seen", "before flower", "seed fill", "past flower"}) {
    tagged = tagged || has(letter.subject, tag);
  }
  complain(!tagged, "no word about flowers in the subject");
  complain(!flower.known && !has(first_line(body), "flowering not known"),
           "flowering not known is not said");
  return wrong;
}

void expect_none(const std::vector<std::string>& complaints, const letters::Letter& letter) {
  if (complaints.empty()) return;
  for (const std::string& complaint : complaints) std::cerr << complaint << "\n";
  std::cerr << "Subject: " << letter.subject << "\n" << letter.body << "----\n";
  REQUIRE(complaints.empty());
}

}  // namespace

TEST_CASE("the list of words never said bites") {
  CHECK(rules::forbidden_in("The field is\nsafe now.") == "safe");
  CHECK(rules::forbidden_in("No Risk today") == "no risk");
  CHECK(rules::forbidden_in("You may irrigate\nnow") == "irrigate now");
  CHECK(rules::forbidden_in("Not a safety device; any treatment by the label") == "");
  const CivilDay today = scene::july(14);
  CHECK(rules::broken_by_text("Look again Tue 21 Jul.\n", today).size() == 1);
  CHECK(rules::broken_by_text("Look again Tue 21 Jul ± 2 d.\n", today).empty());
  CHECK(rules::broken_by_text(std::string(79, 'x') + "\n", today).size() == 1);
}

TEST_CASE("letters about heat and mildew keep the rules in every state") {
  const auto sayings = {Saying::opened, Saying::raised, Saying::reminder, Saying::eased};
  unsigned long made_letters = 0;
  for (unsigned long number = 0; number < cases; ++number) {
    const Saying saying = *(sayings.begin() + number % 4);
    const auto level = saying == Saying::eased ? Level::none : static_cast<Level>(1 + number % 3);
    alerts::Telling telling =
        number % 2 == 0 ? scene::heat(saying, level) : scene::humid(saying, level);
    if (saying == Saying::eased) telling.peak = Level::severe;
    const Made made = make(number, telling);
    const auto written =
        letters::compose(std::vector{made.telling}, std::vector{made.recipient}, made.desk);
    REQUIRE(written.size() == 1);
    expect_none(rules::broken_by(written[0], made.recipient.brief, scene::calendar()), written[0]);
    if (!made.recipient.brief) expect_none(hazard_rules(made, written[0]), written[0]);
    ++made_letters;
  }
  CHECK(made_letters == cases);
}

TEST_CASE("letters of the other kinds keep the rules in every state") {
  std::vector<alerts::Telling> kinds{scene::silent(Saying::opened), scene::silent(Saying::ended),
                                     scene::silent(Saying::reminder), scene::doubtful()};
  for (const char* key :
       {"window-near", "window-opens", "window-closes", "note-held-2026-07-08", "seed-set"}) {
    kinds.push_back(scene::notice(Kind::stage, key));
    kinds.push_back(kinds.back());
    kinds.back().day = scene::july(16);
  }
  kinds.push_back(scene::notice(Kind::sprinkler_streak, "2026-07-12"));
  kinds.push_back(scene::notice(Kind::diary_gap, "2026-07-04"));
  kinds.push_back(scene::notice(Kind::season, "ripe"));
  kinds.push_back(scene::notice(Kind::season, "sown-long-ago"));
  kinds.push_back(scene::heat(Saying::opened, Level::severe));
  kinds.back().kind = Kind::heat_ahead;
  kinds.push_back(scene::heat(Saying::learned_late, Level::severe));
  kinds.back().changes = {{scene::at(12, 15), alerts::Phase::opened, Level::severe, {}, 36.0, ""},
                          {scene::at(13, 0), alerts::Phase::closed, Level::none, {}, {}, ""}};
  kinds.push_back(scene::silent(Saying::ended));
  kinds.back().kind = Kind::mail_trouble;
  for (unsigned long number = 0; number < 3000; ++number) {
    const Made made = make(number, kinds[number % kinds.size()]);
    letters::Desk desk = made.desk;
    letters::StationStory story = desk.stations["bench"];
    story.fields = story.fields_in_window = {made.status.field};
    story.last_trouble = "timed out\r\nafter 20 s";
    story.refused_rows = static_cast<int>(number % 3);
    desk.stations = {{made.telling.subject, story}};
    const auto written =
        letters::compose(std::vector{made.telling}, std::vector{made.recipient}, desk);
    REQUIRE(written.size() == 1);
    expect_none(rules::broken_by(written[0], made.recipient.brief, scene::calendar()), written[0]);
  }
}

TEST_CASE("daily line, review and screen keep the rules in every state") {
  for (unsigned long number = 0; number < 1500; ++number) {
    const Made made = make(number, scene::heat(Saying::opened, Level::severe));
    const std::vector<letters::Recipient> recipients{made.recipient};
    for (const letters::Letter& letter : letters::compose_daily(recipients, made.desk)) {
      expect_none(rules::broken_by(letter, made.recipient.brief, scene::calendar()), letter);
    }
    letters::Review review = number % 2 == 0 ? scene::review() : scene::quiet_review();
    review.fields[0].status = made.status;
    for (const letters::Letter& letter : letters::compose_weekly(review, recipients, made.desk)) {
      expect_none(rules::broken_by(letter, made.recipient.brief, scene::calendar()), letter);
    }
    letters::Letter screen;
    screen.body = letters::compose_now(made.desk, {}, {});
    expect_none(rules::broken_by_text(screen.body, scene::july(14)), screen);
  }
}
