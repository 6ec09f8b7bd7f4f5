// Heat episodes through the fold: opened, raised, lowered, closed; and what a field that nobody
// watches any longer says. By hand from science §6.
#include <algorithm>

#include "scene.hpp"
#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::season;
using namespace antherd::season::scene;
using alerts::Phase;
using risk::Level;

namespace {

constexpr int flowering_day = 60;

/// Cool but for the hours from 12:00 on of given days, counted from day 60.
struct HotDays {
  std::vector<std::vector<double>> afternoons;
  std::optional<Weather> operator()(int n) const {
    const int day = n / 24 - flowering_day, after_noon = n % 24 - 12;
    if (day < 0 || day >= static_cast<int>(afternoons.size())) return Weather{};
    const auto& hot = afternoons[static_cast<std::size_t>(day)];
    if (after_noon < 0 || after_noon >= static_cast<int>(hot.size())) return Weather{};
    return Weather{hot[static_cast<std::size_t>(after_noon)], 20};
  }
};

Instant clock(const Plan& plan, int day, int hour) {
  return Instant(plan.first_hour()) + one_hour * (day * 24 + hour);
}

void check_change(const alerts::Change& change, Phase phase, Level level, Instant at) {
  CHECK(change.phase == phase);
  CHECK(change.level == level);
  CHECK(change.at == at);
}

}  // namespace

TEST_CASE("an episode opens with its hour, rises at once, falls and closes at a day's end") {
  const Plan plan = plan_at_greenwich();
  const HotDays weather{{{33, 33, 33, 35}, {33, 33, 33}, {}, {33}}};
  const Told told = tell(plan, 66 * 24, weather);
  REQUIRE(told.state.episodes.size() == 1);
  const alerts::Episode& heat = told.state.episodes.front();
  CHECK(heat.kind == alerts::Kind::heat);
  REQUIRE(heat.changes.size() == 4);
  check_change(heat.changes[0], Phase::opened, Level::moderate, clock(plan, 60, 15));
  check_change(heat.changes[1], Phase::raised, Level::severe, clock(plan, 60, 16));
  check_change(heat.changes[2], Phase::lowered, Level::moderate, clock(plan, 62, 0));
  check_change(heat.changes[3], Phase::closed, Level::none, clock(plan, 63, 0));
  CHECK(heat.start == clock(plan, 60, 14));  // the hour that decided
  CHECK(*heat.changes[1].figure == 35.0);
  CHECK(heat.peak == Level::severe);
  CHECK(told.state.heat.hot_days == 1);
}

TEST_CASE("a day without enough hours neither lowers nor closes") {
  const Plan plan = plan_at_greenwich();
  const HotDays hot{{{33, 33, 33, 35}}};
  const auto holed = [&](int n) -> std::optional<Weather> {
    const bool gap = n / 24 == 61 && n % 24 >= 19;  // 19 of 24 hours
    return gap ? std::nullopt : hot(n);
  };
  const Told told = tell(plan, 64 * 24, holed);
  REQUIRE(told.state.episodes.size() == 1);
  CHECK(told.state.episodes[0].changes.back().at == clock(plan, 63, 0));
  CHECK(told.state.episodes[0].closed);
}

TEST_CASE("in the shoulder the level is one lower, outside it is none") {
  const Plan plan = plan_at_greenwich();
  const auto hot_on = [](int day) {
    return [day](int n) -> std::optional<Weather> {
      return n / 24 == day && n % 24 == 13 ? Weather{35, 20} : Weather{};
    };
  };
  // Shoulder before from hour 1073 on, day 44; it would be Severe in flower.
  const Told before = tell(plan, 52 * 24, hot_on(47));
  REQUIRE(before.state.episodes.size() == 1);
  CHECK(before.state.episodes[0].peak == Level::moderate);
  CHECK(before.day(47).level == Level::moderate);
  CHECK(before.day(47).weather_level == Level::severe);
  CHECK(tell(plan, 40 * 24, hot_on(30)).state.episodes.empty());
}

TEST_CASE("harvest closes what is open, and the days after have no level") {
  Plan plan = plan_at_greenwich();
  plan.field.harvested = plan.field.sown + days{61};
  const HotDays weather{{{36, 36}, {36, 36}, {36, 36}, {36, 36}}};
  const Told told = tell(plan, 65 * 24, weather);
  REQUIRE(told.state.episodes.size() == 1);
  CHECK(*told.state.episodes[0].closed == clock(plan, 62, 1));  // first hour not watched
  CHECK(told.day(61).level == Level::severe);
  CHECK(told.day(62).level == Level::none);
  CHECK(told.state.watch == Watch::harvested);
}

TEST_CASE("flowers that were cut meet no heat") {
  Plan plan = plan_at_greenwich();
  plan.field.harvested = plan.field.sown + days{85};
  // An hour of 35 °C on every day; full flower is at 810 °C·d, on day 81.
  const auto hot = [](int n) -> std::optional<Weather> {
    return n % 24 == 13 ? Weather{35, 20} : Weather{};
  };
  const Told on_the_day = tell(plan, 86 * 24, hot);
  const Told later = tell(plan, 110 * 24, hot);
  const auto met = [&](const Told& told) {
    return exposure_of(told.state.heat, told.state.crop, plan);
  };
  CHECK(met(on_the_day).exposed > 0.3);
  CHECK(met(later).exposed == met(on_the_day).exposed);
  CHECK(later.state.heat.hot_days == on_the_day.state.heat.hot_days);
  CHECK(met(later).high == met(on_the_day).high);
  plan.field.harvested.reset();
  CHECK(met(tell(plan, 110 * 24, hot)).exposed > 0.9);
}

TEST_CASE("a ripe field has no level even where seed fill is still reckoned") {
  const Plan plan = plan_at_greenwich();
  // Full flower began at 505 °C·d: k = 0.6235, sd 0.0502; m = 0.661 with the prior of 0.15. Ripe at
  // 1300 m = 859 °C·d, seed fill until 700 m + 270 + 198 = 931.
  const auto hot = [](int n) -> std::optional<Weather> {
    return n / 24 == 88 && n % 24 == 13 ? Weather{38, 20} : Weather{};
  };
  const Told told = tell(plan, 90 * 24, hot, {{}, {note(plan, 50, 65, true)}});
  CHECK(told.state.watch == Watch::ripe);
  CHECK(told.hour(88 * 24 + 13).part == Part::shoulder_after);
  CHECK(told.day(88).level == Level::none);
  CHECK(told.state.episodes.empty());
}

TEST_CASE("exposure is a share: notes that move the estimate back never take it beyond 1") {
  const Plan plan = plan_at_greenwich();
  const auto hot = [](int n) -> std::optional<Weather> {
    return n % 24 == 13 ? Weather{35, 20} : Weather{};
  };
  field::Diary diary{
      {}, {note(plan, 80, 60, true), note(plan, 95, 60, true), note(plan, 110, 60, true)}};
  const Told told = tell(plan, 150 * 24, hot, diary);
  const Exposure met = exposure_of(told.state.heat, told.state.crop, plan);
  CHECK(met.exposed > 0.9);
  CHECK(met.exposed <= 1.0);
  CHECK(met.high <= 1.0);
}

TEST_CASE("days of 23 and 25 hours are whole days") {
  Plan plan = plan_at_greenwich();
  const Instant noon = clock(plan, 3, 12), later = clock(plan, 6, 12);
  plan.calendar =
      Calendar("changing", {{Instant{}, Seconds{0}}, {noon, Seconds{3600}}, {later, Seconds{0}}});
  const Told told = tell(plan, 9 * 24, cool);
  REQUIRE(told.chronicle.days.size() == 9);
  const std::array<int, 9> lengths{24, 24, 24, 23, 24, 24, 25, 24, 24};
  for (std::size_t n = 0; n < lengths.size(); ++n) {
    CHECK(told.chronicle.days[n].valid_hours == lengths[n]);
    CHECK(told.chronicle.days[n].date == plan.field.sown + days{static_cast<int>(n)});
  }
}

TEST_CASE("a gap that hides the stage lowers no humid spell") {
  Plan plan = plan_at_greenwich();
  plan.traits.needs.emerged = ThermalTime(20);
  field::Diary diary;
  for (int day = 0; day < 6; ++day) diary.irrigations.push_back(set_on(plan, day));
  // Nothing is seen of day 6: by 18:00 that is 18 of 162 hours, so the stage is unknown.
  const auto blind = [](int n) { return n < 6 * 24 ? std::optional(Weather{}) : std::nullopt; };
  const Told told = tell(plan, 7 * 24, blind, diary);
  CHECK(!told.state.crop.known());
  REQUIRE(told.state.episodes.size() == 1);
  CHECK(told.state.episodes[0].kind == alerts::Kind::humid_spell);
  CHECK(told.state.episodes[0].open());
}
