// The notices of a season: when each is given, and that it is given once. At 10 °C·d a day the
// window opens at 527.29 °C·d on day 52 and closes at 1175.32 on day 117 (flowering.cpp).
#include <algorithm>

#include "scene.hpp"
#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::season;
using namespace antherd::season::scene;

namespace {

Instant seven(const Plan& plan, int day) {
  return Instant(plan.first_hour()) + one_hour * (day * 24 + 7);
}

}  // namespace

TEST_CASE("the window is told ten days ahead, at its opening and two days before its close") {
  const Plan plan = plan_at_greenwich();
  const Told told = tell(plan, 125 * 24, cool);
  const auto near = told.notices("window-near");
  REQUIRE(near.size() == 1);
  // 427.29 °C·d is passed at 07:00 of day 43 (432.9), not of day 42 (422.9)
  CHECK(near[0].at == seven(plan, 43));
  CHECK(near[0].day == plan.field.sown + days{53});  // 94.4 °C·d to go: ten days, rounded up
  const auto opens = told.notices("window-opens");
  REQUIRE(opens.size() == 1);
  CHECK(opens[0].at == seven(plan, 53));
  CHECK(opens[0].day == plan.field.sown + days{52});
  const auto closes = told.notices("window-closes");
  REQUIRE(closes.size() == 1);
  CHECK(closes[0].at == seven(plan, 116));  // 1162.9 + 20 ≥ 1175.32; 1152.9 + 20 is not
}

TEST_CASE("a window that opened weeks before the stage was known is not told as opening") {
  const Plan plan = plan_at_greenwich();
  const auto late = [](int n) {
    return n < 30 * 24 ? std::nullopt : std::optional<Weather>(Weather{});
  };
  // Unknown stage counts as the window from day 35 on; the note of day 65 makes it known.
  const Told told = tell(plan, 90 * 24, late, {{}, {note(plan, 65, 60, true)}});
  CHECK(told.hour(66 * 24).part == Part::window);
  CHECK(told.state.crop.window_first == plan.field.sown + days{35});
  CHECK(told.notices("window-opens").empty());
  // A note within the first week of those days is news.
  const Told soon = tell(plan, 90 * 24, late, {{}, {note(plan, 38, 60, true)}});
  CHECK(soon.notices("window-opens").size() == 1);
}

TEST_CASE("the window that a note keeps open does not close silently later") {
  const Plan plan = plan_at_greenwich();
  // Full flower at 1165 °C·d, the middle of 810 and 970: k = 1.309, m = 1.24 or so.
  const Told told = tell(plan, 150 * 24, cool, {{}, {note(plan, 116, 65, false)}});
  const auto closes = told.notices("window-closes");
  REQUIRE(closes.size() == 2);
  CHECK(closes[0].at == seven(plan, 116));
  REQUIRE(told.state.crop.window_last);
  const auto ahead = *told.state.crop.window_last - plan.calendar.day_of(closes[1].at);
  CHECK(ahead >= days{1});
  CHECK(ahead <= days{2});
}

TEST_CASE("three evenings of sprinklers are told once, two are not, a break begins anew") {
  const Plan plan = plan_at_greenwich();
  const auto streaks = [&](std::vector<int> evenings) {
    field::Diary diary;
    for (const int day : evenings) diary.irrigations.push_back(set_on(plan, day));
    std::vector<alerts::Notice> found;
    for (const auto& notice : tell(plan, 40 * 24, cool, diary).state.notices) {
      if (notice.kind == alerts::Kind::sprinkler_streak) found.push_back(notice);
    }
    return found;
  };
  CHECK(streaks({20, 21}).empty());
  CHECK(streaks({20, 21, 23, 24}).empty());
  const auto told = streaks({20, 21, 22, 23, 24});
  REQUIRE(told.size() == 1);
  CHECK(told[0].at == Instant(plan.first_hour()) + one_hour * (22 * 24 + 22));  // the third's end
  CHECK(told[0].figure == 3);
  CHECK(streaks({20, 21, 22, 24, 25, 26}).size() == 2);
  CHECK(streaks({-3, -2, -1}).empty());  // before sowing
}

TEST_CASE("ten days without a log entry after buds are told, on an irrigated field only") {
  Plan plan = plan_at_greenwich();  // buds at 400 °C·d: the last hour of day 39
  const auto gaps = [&](const field::Diary& diary) {
    std::vector<alerts::Notice> found;
    for (const auto& notice : tell(plan, 65 * 24, cool, diary).state.notices) {
      if (notice.kind == alerts::Kind::diary_gap) found.push_back(notice);
    }
    return found;
  };
  const auto told = gaps({});
  REQUIRE(told.size() == 1);
  CHECK(told[0].at == seven(plan, 49));
  CHECK(told[0].figure == 10);
  const auto after = gaps({{set_on(plan, 45)}, {}});
  REQUIRE(after.size() == 1);
  CHECK(after[0].at == seven(plan, 55));
  plan.field.irrigation = field::Method::none;
  CHECK(gaps({}).empty());
}

TEST_CASE("ripe and sown long ago are told once each, and then the field is quiet") {
  const Plan plan = plan_at_greenwich();
  const Told ripe = tell(plan, 135 * 24, cool);  // 1300 °C·d: the last hour of day 129
  REQUIRE(ripe.notices("ripe").size() == 1);
  CHECK(ripe.notices("ripe")[0].at == seven(plan, 130));
  const auto frozen = [](int) { return std::optional<Weather>(Weather{2, 50}); };
  const Told old = tell(plan, 245 * 24, frozen);
  REQUIRE(old.notices("sown-long-ago").size() == 1);
  CHECK(old.notices("sown-long-ago")[0].at == seven(plan, 241));
  CHECK(old.state.watch == Watch::sown_long_ago);
  CHECK(old.notices("ripe").empty());
}

TEST_CASE("ten days after Severe heat in flower a count of seeds is asked for, once") {
  Plan plan = plan_at_greenwich();  // the window is open from day 52 to day 117
  const auto asked = [&](std::vector<int> hot, field::Diary diary = {}) {
    const auto weather = [hot](int n) -> std::optional<Weather> {
      const bool day = std::find(hot.begin(), hot.end(), n / 24) != hot.end();
      return day && n % 24 == 13 ? Weather{35, 20} : Weather{};
    };
    return tell(plan, 110 * 24, weather, std::move(diary)).notices("seed-set");
  };
  const auto counted_on = [&](int day) {
    field::Scouting count = note(plan, day, 65, false);
    count.stage.reset();
    count.seed_set = 14;
    count.seed_looked = 20;
    return field::Diary{{}, {count}};
  };
  const auto once = asked({80, 81});
  REQUIRE(once.size() == 1);
  CHECK(once[0].at == seven(plan, 90));
  CHECK(once[0].day == plan.field.sown + days{80});
  CHECK(asked({80, 83}).size() == 1);  // two episodes, one count serves
  CHECK(asked({80, 88}).size() == 2);
  CHECK(asked({80}, counted_on(89)).empty());
  CHECK(asked({80}, counted_on(80)).size() == 1);  // before any seed could swell
  CHECK(asked({47}).empty());                      // before flower: no open flower met it
  plan.field.harvested = plan.field.sown + days{85};
  CHECK(asked({80}).empty());
  plan.field.harvested.reset();
  // A station of day 30 and no note: nobody knows whether anything flowered on day 80.
  const auto late = [](int n) -> std::optional<Weather> {
    if (n < 30 * 24) return std::nullopt;
    return n == 80 * 24 + 13 ? Weather{35, 20} : Weather{};
  };
  const Told unknown = tell(plan, 95 * 24, late);
  CHECK(unknown.day(80).level == risk::Level::severe);
  CHECK(unknown.notices("seed-set").empty());
}
