// What three per cent of humidity would change: the two tracks beside the measured one are what a
// fold over drier or damper hours makes.
#include "scene.hpp"
#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::season;
using namespace antherd::season::scene;

namespace {

Course shifted(const Course& course, double by) {
  return [course, by](int n) {
    auto weather = course(n);
    if (weather) weather->humidity = std::clamp(weather->humidity + by, 0.0, 100.0);
    return weather;
  };
}

/// Fog that stays all day at 96 %, nights of 12 °C and days of 18.
std::optional<Weather> fog(int n) {
  const int clock = n % 24;
  return Weather{clock >= 8 && clock < 20 ? 18.0 : 12.0, 96.0};
}

/// Damp nights of changing dampness, dry or grey afternoons, holes.
std::optional<Weather> changing(int n) {
  const int day = n / 24, clock = n % 24;
  if (n % 97 == 5) return std::nullopt;
  const bool night = clock < 9 || clock >= 20;
  const double top = 88.0 + 1.5 * (day % 8);
  const double low = day % 5 < 2 ? 86.5 : 60.0;
  return Weather{night ? 12.0 + 0.3 * (day % 6) : 19.0, night ? top : low};
}

constexpr int sixty_days = 60 * 24;

}  // namespace

TEST_CASE("the tracks beside the measured one are folds over drier and damper air") {
  const Plan plan = plan_at_greenwich();
  field::Diary diary;
  for (int day = 40; day < 60; day += 4) diary.irrigations.push_back(set_on(plan, day));
  int differing = 0;
  for (const Course& course : {Course(fog), Course(changing)}) {
    for (int count = 30 * 24 + 19; count <= sixty_days; count += 5 * 24) {
      const Told told = tell(plan, count, course, diary);
      const Told drier = tell(plan, count, shifted(course, -humidity_doubt), diary);
      const Told damper = tell(plan, count, shifted(course, humidity_doubt), diary);
      INFO("hours " << count);
      CHECK(told.state.humid.drier.spell.level == drier.state.humid.spell.level);
      CHECK(told.state.humid.damper.spell.level == damper.state.humid.spell.level);
      CHECK(told.state.humid.drier.leaf.film_mm == drier.state.humid.leaf.film_mm);
      if (drier.state.humid.spell.level != damper.state.humid.spell.level) ++differing;
    }
  }
  CHECK(differing > 0);
}

TEST_CASE("fog at 96 per cent is a spell that three per cent less would end") {
  const Plan plan = plan_at_greenwich();
  const Told told = tell(plan, sixty_days, fog);
  const DiaryView diary(field::Diary{}, plan.place());
  const FieldStatus now = status(told.state, plan, diary);
  REQUIRE(now.humid.last);
  CHECK(now.humid.last->level >= Level::moderate);
  CHECK(now.humid.if_drier == Level::none);  // 93 %: no film by day, and mornings are what counts
  CHECK(now.humid.if_damper == now.humid.last->level);
  CHECK_FALSE(status(tell(plan, 5, fog).state, plan, diary).humid.if_drier);
}
