// A state led on hour by hour is the state of one fold from sowing; and the what-ifs of watering
// tonight are what comes true when the weather repeats itself.
#include "scene.hpp"
#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::season;
using namespace antherd::season::scene;

namespace {

/// Warm days, damp nights, hot spells, gaps of an hour and of two days.
std::optional<Weather> lively(int n) {
  const int day = n / 24, clock = n % 24;
  if (n % 101 == 7 || day == 33 || day == 34) return std::nullopt;
  const bool hot = day % 9 >= 7;
  const double afternoon = hot ? 36.0 : 24.0;
  const double t = clock >= 10 && clock < 18 ? afternoon : 14.0 + 0.1 * (day % 7);
  return Weather{t, clock < 8 && day % 3 == 0 ? 96.0 : 45.0};
}

field::Diary full_diary(const Plan& plan) {
  field::Diary diary;
  for (int day = 30; day < 80; ++day) {
    if (day % 5 != 0) diary.irrigations.push_back(set_on(plan, day));
  }
  diary.notes = {note(plan, 20, 65, true), note(plan, 47, 60, false), note(plan, 60, 69, true),
                 note(plan, 63, 65, false)};
  diary.notes[2].disease = true;
  return diary;
}

void check_same(const State& a, const State& b) {
  CHECK(a.crop.time.value == b.crop.time.value);
  CHECK(a.crop.belief.mean == b.crop.belief.mean);
  CHECK(a.crop.belief.sd == b.crop.belief.sd);
  CHECK(a.crop.held.size() == b.crop.held.size());
  CHECK(a.crop.day_ends == b.crop.day_ends);
  CHECK(a.crop.part == b.crop.part);
  CHECK(a.crop.reached == b.crop.reached);
  CHECK(a.crop.window_first == b.crop.window_first);
  CHECK(a.crop.window_last == b.crop.window_last);
  CHECK(a.episodes == b.episodes);
  const Plan plan = plan_at_greenwich();
  const Exposure met = exposure_of(a.heat, a.crop, plan);
  CHECK(met.exposed == exposure_of(b.heat, b.crop, plan).exposed);
  CHECK(met.high == exposure_of(b.heat, b.crop, plan).high);
  CHECK(a.heat.severe_since == b.heat.severe_since);
  CHECK(a.heat.warm_nights == b.heat.warm_nights);
  CHECK(a.humid.spell.level == b.humid.spell.level);
  CHECK(a.humid.leaf.film_mm == b.humid.leaf.film_mm);
  CHECK(a.watch == b.watch);
  REQUIRE(a.notices.size() == b.notices.size());
  for (std::size_t i = 0; i < a.notices.size(); ++i) {
    CHECK(a.notices[i].key == b.notices[i].key);
    CHECK(a.notices[i].at == b.notices[i].at);
    CHECK(a.notices[i].day == b.notices[i].day);
  }
}

/// Folds to `cut` from hours that then die, and goes on one by one from fresh copies of them.
State led_on(const Plan& plan, const DiaryView& diary, int cut, int count) {
  State state;
  {
    const auto early = hours_of(plan, cut, lively);
    state = fold(plan, diary, {early}, plan.first_hour() + hours{cut});
  }
  for (int n = cut; n < count; ++n) {
    const auto one = hours_of(plan, n + 1, [n](int m) { return m < n ? std::nullopt : lively(m); });
    const weather::Hour* hour = one.empty() ? nullptr : &one.front();
    advance(state, plan, diary,
            air_at_field(plan, plan.first_hour() + hours{n}, hour, hour == nullptr ? -1 : 0));
  }
  return state;
}

}  // namespace

TEST_CASE("advanced hour by hour from anywhere is the same as folded from sowing") {
  const Plan plan = plan_at_greenwich();
  const DiaryView diary(full_diary(plan), plan.place());
  constexpr int count = 75 * 24 + 5;
  const Told whole = tell(plan, count, lively, full_diary(plan));
  REQUIRE(whole.state.episodes.size() >= 3);
  REQUIRE(whole.state.notices.size() >= 3);
  for (const int cut : {0, 1, 13 * 24, 33 * 24 + 7, 47 * 24 + 12, 60 * 24 + 18, count - 1}) {
    CAPTURE(cut);
    check_same(led_on(plan, diary, cut, count), whole.state);
  }
}

TEST_CASE("a status changes nothing, and nothing later than the state is read from the diary") {
  const Plan plan = plan_at_greenwich();
  constexpr int count = 46 * 24 + 19;
  const Told whole = tell(plan, count, lively, full_diary(plan));
  const State before = whole.state;
  (void)status(whole.state, plan, DiaryView(full_diary(plan), plan.place()));
  check_same(before, whole.state);
  field::Diary known = full_diary(plan);
  const Instant now = end_of(*whole.state.last);
  std::erase_if(known.irrigations, [&](const auto& set) { return set.start >= now; });
  std::erase_if(known.notes,
                [&](const auto& seen) { return seen.date > plan.field.sown + days{46}; });
  const Told shorter = tell(plan, count, lively, known);
  check_same(shorter.state, whole.state);
}

TEST_CASE("the what-if of watering tonight comes true when the weather repeats itself") {
  const Plan plan = plan_at_greenwich();
  // A dry regime without heat; sprinklers on the evenings of days 55 and 56.
  const auto repeated = [](int n) -> std::optional<Weather> {
    const int clock = n % 24;
    return clock >= 10 && clock < 18 ? Weather{24, 40} : Weather{13, 60};
  };
  field::Diary diary{{set_on(plan, 55), set_on(plan, 56)}, {}};
  // After the second watered morning: before the evening, late in it, and in the small hours.
  const auto [now, clock] = GENERATE(std::pair(57 * 24 + 18, 20), std::pair(57 * 24 + 22, 22),
                                     std::pair(58 * 24 + 1, 25));
  CAPTURE(now);
  const Told told = tell(plan, now, repeated, diary);
  const FieldStatus seen = status(told.state, plan, DiaryView(diary, plan.place()));
  const auto level_on_58 = [&](const field::Diary& with) {
    return tell(plan, 58 * 24 + 18, repeated, with).state.humid.last_five.back().level;
  };
  CHECK(seen.humid.night_sets_last_five == 2);
  CHECK(seen.humid.if_not_watered == level_on_58(diary));
  diary.irrigations.push_back(set_on(plan, 57, clock));
  CHECK(seen.humid.if_watered_tonight == level_on_58(diary));
  CHECK(seen.humid.if_watered_tonight == risk::Level::severe);  // the third watered morning (§11)
  CHECK(seen.humid.if_not_watered == risk::Level::moderate);    // R = 2 of the two before
}
