// Every numbered season: what a grower would expect of it, then the approved text of what was
// said. ANTHERD_APPROVE=1 writes the approved texts anew; then read what changed.
#include <algorithm>
#include <cstdlib>
#include <filesystem>
#include <fstream>
#include <iterator>
#include <set>

#include "seasons/told.hpp"
#include "support/catch.hpp"
#include "support/paths.hpp"

using namespace antherd;
using namespace antherd::seasons;

namespace {

const std::string folder = paths::source() + "/tests/seasons";

std::string text_of_file(const std::string& path) {
  std::ifstream file(path, std::ios::binary);
  return {std::istreambuf_iterator<char>(file), {}};
}

/// What a season came to, asked in the words of the [[expect]] tables.
class Answers {
 public:
  Answers(const Scenario& scenario, const Lived& lived) : scenario_(scenario), lived_(lived) {}

  void check(const Expectation& e) const {
    INFO("expected: " << e.what << " " << e.about << " " << e.is << " (" << e.why << ")");
    const std::string kind = e.what.substr(e.what.find_last_of(' ') + 1);
    if (e.what.starts_with("letters of ")) {
      check_number(e, static_cast<double>(letters(e, kind).size()));
    } else if (e.what.starts_with("first letter of ")) {
      const auto found = letters(e, kind);
      const std::string first =
          found.empty() ? "none" : clock_text(scenario_.calendar, found.front()->decided);
      check_words(e, first);
    } else if (e.what.starts_with("highest ")) {
      check_words(e, level_text(highest(e, kind)));
    } else if (e.what.starts_with("stage ")) {
      check_stage(e, std::stoi(kind));
    } else if (e.what == "hot days in the window") {
      check_number(e, field(e).state.heat.hot_days);
    } else if (e.what == "flowers exposed, %") {
      const FieldSeason& one = field(e);
      const auto met = season::exposure_of(one.state.heat, one.state.crop, one.plan);
      check_number(e, met.exposed * 100);
    } else if (e.what == "warm nights") {
      check_number(e, field(e).state.heat.warm_nights);
    } else if (e.what == "days in the window") {
      const auto& days = field(e).chronicle.days;
      check_number(e, static_cast<double>(std::count_if(
                          days.begin(), days.end(), [](const auto& d) { return d.in_window; })));
    } else {
      FAIL("no such expectation: " << e.what);
    }
  }

 private:
  static void check_number(const Expectation& e, double value) {
    INFO("it came to " << value);
    REQUIRE((e.low || e.high));
    if (e.low) CHECK(value >= *e.low);
    if (e.high) CHECK(value <= *e.high);
  }
  static void check_words(const Expectation& e, const std::string& words) {
    INFO("it came to " << words);
    REQUIRE_FALSE(e.is.empty());
    CHECK(words.starts_with(e.is));
  }
  void check_stage(const Expectation& e, int stage) const {
    const auto day = field(e).stage_day(stage);
    REQUIRE(day);
    INFO("it came to " << day_text(*day));
    REQUIRE((e.from && e.to));
    CHECK(CivilTime(*day) >= *e.from);
    CHECK(CivilTime(*day) <= *e.to);
  }

  const FieldSeason& field(const Expectation& e) const {
    return e.about.empty() ? lived_.fields.begin()->second : lived_.fields.at(e.about);
  }
  bool within(const Expectation& e, Instant at) const {
    const CivilTime civil = scenario_.calendar.civil(at);
    return (!e.from || civil >= *e.from) && (!e.to || civil <= *e.to);
  }

  std::vector<const letters::Letter*> letters(const Expectation& e, const std::string& kind) const {
    static const std::set<std::string> kinds{
        "heat",      "humid_spell", "no_data",      "doubtful_sensor", "stage",  "sprinkler_streak",
        "diary_gap", "season",      "learned_late", "daily",           "weekly", "any_kind"};
    REQUIRE(kinds.contains(kind));
    std::vector<const letters::Letter*> found;
    for (const auto& item : lived_.letters) {
      const letters::Letter& letter = item.letter;
      const bool asked = kind == "any_kind" ? letter.kind != "daily" && letter.kind != "weekly"
                                            : letter.kind == kind;
      const bool about = e.about.empty() || letter.subject.find(e.about) != std::string::npos;
      if (asked && about && within(e, letter.decided)) found.push_back(&letter);
    }
    return found;
  }

  risk::Level highest(const Expectation& e, const std::string& hazard) const {
    risk::Level highest = risk::Level::none;
    const auto take = [&](CivilDay date, risk::Level level) {
      if (e.from && CivilTime(date) < *e.from) return;
      if (e.to && CivilTime(date) > *e.to) return;
      highest = std::max(highest, level);
    };
    if (hazard == "heat") {
      for (const auto& day : field(e).chronicle.days) take(day.date, day.level);
    } else {
      REQUIRE(hazard == "mildew");
      for (const auto& day : field(e).chronicle.humid_days) take(day.date, day.level);
    }
    return highest;
  }

  const Scenario& scenario_;
  const Lived& lived_;
};

/// What holds of every season.
void check_manners(const Scenario& scenario, const Lived& lived) {
  std::set<std::string> identities, told;
  std::set<CivilTime> mondays;
  for (const auto& item : lived.letters) {
    const letters::Letter& letter = item.letter;
    INFO(clock_text(scenario.calendar, letter.decided) << " " << letter.subject);
    CHECK(identities.insert(letter.id + letter.recipient).second);
    // Nothing is told twice to one person in the same words.
    if (letter.kind != "daily") {  // two fine evenings may read alike
      CHECK(told.insert(letter.recipient + letter.subject + letter.body).second);
    }
    if (letter.kind == "weekly") mondays.insert(scenario.calendar.civil(letter.decided));
  }
  // Silence is no sign of life: the review comes each Monday at 06:00, whatever happened.
  for (CivilDay day = scenario.calendar.day_of(scenario.installed) + std::chrono::days{1};
       scenario.calendar.start_of(day) + one_hour * 7 < scenario.until;
       day += std::chrono::days{1}) {
    const std::chrono::weekday weekday{std::chrono::sys_days{day.time_since_epoch()}};
    if (weekday != std::chrono::Monday) continue;
    INFO("Monday " << day_text(day));
    CHECK(mondays.contains(CivilTime(day) + one_hour * 6));
  }
}

void check_approved(const Scenario& scenario, const Lived& lived) {
  const std::string path = folder + "/" + scenario.name + ".txt";
  const std::string fresh = told(scenario, lived);
  const char* approve = std::getenv("ANTHERD_APPROVE");
  if (approve != nullptr && std::string(approve) == "1") {
    std::ofstream(path, std::ios::binary) << fresh;
    return;
  }
  const std::string differs = difference(text_of_file(path), fresh);
  INFO("tests/seasons/" << scenario.name
                        << ".txt, - approved, + now (ANTHERD_APPROVE=1 approves):\n"
                        << differs);
  CHECK(differs.empty());
}

}  // namespace

TEST_CASE("every numbered season is told as a grower expects and as it was approved") {
  const auto names = scenario_names(folder);
  REQUIRE(names.size() >= 37);
  for (const std::string& name : names) {
    DYNAMIC_SECTION(name) {
      const Scenario scenario = read_scenario(folder, name);
      const Lived lived = live_through(scenario);
      for (const Expectation& expectation : scenario.expectations) {
        Answers(scenario, lived).check(expectation);
      }
      check_manners(scenario, lived);
      check_approved(scenario, lived);
    }
  }
}
