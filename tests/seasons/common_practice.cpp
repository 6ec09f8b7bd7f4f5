// What growers know (common practice) and what we decided (judgement): science §11, as seasons.
#include <algorithm>

#include "seasons/common.hpp"
#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::seasons;
using risk::Level;

namespace {

constexpr int growing = 60;  // days after sowing: past buds in the weather used here

/// Dry inland weather with sprinklers on some evenings, from day 60 on.
Outcome sprinkled(double t_min, double t_max, double from, double to, int count, int every = 1) {
  const season::Plan plan = plan_of({});
  return fold_season(plan, sprinklers(plan, growing, count, from, to, every),
                     synthetic::dry_inland(stretch_of(plan, 90), t_min, t_max));
}

Level after_evening(const Outcome& outcome, int evening) {
  return outcome.humid_level(plan_of({}), growing, evening);
}

}  // namespace

TEST_CASE("sprinklers every evening, 12 to 27 °C: Moderate on day 2, Severe on day 3") {
  const Outcome season = sprinkled(12, 27, 20, 23, 5);
  CHECK(after_evening(season, 1) == Level::none);
  CHECK(after_evening(season, 2) == Level::moderate);
  CHECK(after_evening(season, 3) == Level::severe);
}

TEST_CASE("the hour of watering makes no cliff") {
  const Outcome late = sprinkled(12, 27, 20, 23, 6);
  for (double from : {17.0, 18.0}) {
    const Outcome early = sprinkled(12, 27, from, from + 3, 6);
    for (int evening = 1; evening <= 6; ++evening) {
      INFO("from " << from << ", evening " << evening);
      CHECK(after_evening(early, evening) == after_evening(late, evening));
    }
  }
}

TEST_CASE("sprinklers every night in 18 to 36 °C: Moderate by the fifth wet morning") {
  const Outcome season = sprinkled(18, 36, 20, 23, 8);
  Level by_fifth = Level::none;
  for (int evening = 1; evening <= 5; ++evening) {
    by_fifth = std::max(by_fifth, after_evening(season, evening));
  }
  CHECK(by_fifth >= Level::moderate);
}

TEST_CASE("one irrigation, or one every third day, is never Moderate in dry weather") {
  CHECK(sprinkled(12, 27, 20, 23, 1).highest_humid() == Level::none);
  CHECK(sprinkled(12, 27, 20, 23, 24, 3).highest_humid() == Level::none);
}

TEST_CASE("drip wets no leaf") {
  const season::Plan plan = plan_of({});
  field::Diary diary = sprinklers(plan, growing, 20, 20, 23);
  for (auto& set : diary.irrigations) set.method = field::Method::drip;
  const Outcome season =
      fold_season(plan, diary, synthetic::dry_inland(stretch_of(plan, 90), 12, 27));
  CHECK(season.highest_humid() == Level::none);
}

TEST_CASE("fog alone on a cool coast is seldom a problem") {
  PlainSeason coast;
  coast.latitude = 44.6;
  coast.longitude = -124.0;
  coast.elevation = 20;
  coast.irrigation = field::Method::none;
  coast.sown =
      std::chrono::year_month_day{std::chrono::year{2026}, std::chrono::May, std::chrono::day{1}};
  const season::Plan plan = plan_of(coast);
  int days = 0, grave = 0, humid_hours = 0, hours = 0;
  for (std::uint64_t seed = 1; seed <= 10; ++seed) {
    const auto samples = synthetic::cool_fog_coast(stretch_of(plan, 123, seed));
    const Outcome season = fold_season(plan, {}, samples);
    const CivilDay july =
        CivilDay{std::chrono::sys_days{std::chrono::year{2026} / 7 / 1}.time_since_epoch()};
    for (const auto& day : season.chronicle.humid_days) {
      if (day.date < july) continue;
      ++days;
      if (day.level >= Level::severe) ++grave;
    }
    for (const auto& sample : samples) {
      if (sample.time < plan.calendar.start_of(july)) continue;
      ++hours;
      if (sample.humidity->value >= 90) ++humid_hours;
    }
  }
  CHECK(humid_hours * 3 >= hours);  // a third or more of all hours
  INFO(grave << " of " << days << " days Severe or Extreme");
  CHECK(grave * 20 <= days);  // at most 5 %
}

TEST_CASE("season length in a cool maritime spring sowing") {
  for (double mean : {13.0, 15.0, 17.0}) {
    const season::Plan plan = plan_of({});
    const Outcome season =
        fold_season(plan, {}, synthetic::maritime_spring_sown(stretch_of(plan, 170), mean));
    REQUIRE(season.state.crop.reached[5]);
    const auto length = (*season.state.crop.reached[5] - plan.field.sown).count();
    INFO("mean " << mean << " °C: ripe after " << length << " days");
    CHECK(length >= 90);
    CHECK(length <= 150);
  }
}

TEST_CASE("sown on 28 April at a cool coast of 13 °C: buds by week 8, flower from week 10 to 12") {
  const season::Plan plan = plan_of({});
  const Outcome season =
      fold_season(plan, {}, synthetic::maritime_spring_sown(stretch_of(plan, 170), 13.0));
  const auto after = [&](std::size_t i) {
    REQUIRE(season.state.crop.reached[i]);
    return (*season.state.crop.reached[i] - plan.field.sown).count();
  };
  CHECK(after(1) > 5 * 7);   // still a rosette at five weeks
  CHECK(after(1) <= 8 * 7);  // buds by week 8
  CHECK(after(2) >= 9 * 7);  // the tenth week begins
  CHECK(after(2) <= 12 * 7);
}

TEST_CASE("heat with sprinklers: both hazards speak, and each in its own episode") {
  PlainSeason plain;
  const season::Plan plan = plan_of(plain);
  // A cool spring brings the field into its window; then a week of 18 to 36 °C with sprinklers.
  auto samples = synthetic::dry_inland(stretch_of(plan, 70), 8, 22);
  auto later = stretch_of(plan, 10);
  later.start += std::chrono::days{70};
  const auto hot = synthetic::dry_inland(later, 18, 36);
  samples.insert(samples.end(), hot.begin(), hot.end());
  const Outcome season = fold_season(plan, sprinklers(plan, 70, 9, 20, 23), samples);
  int heat = 0, humid = 0;
  for (const auto& episode : season.state.episodes) {
    if (episode.kind == alerts::Kind::heat && episode.peak >= Level::severe) ++heat;
    if (episode.kind == alerts::Kind::humid_spell) ++humid;
  }
  CHECK(heat == 1);
  CHECK(humid == 1);
  CHECK(exposure_of(season.state.heat, season.state.crop, plan).exposed > 0);
  const auto status = season::status(
      season.state, plan, season::DiaryView(sprinklers(plan, 70, 9, 20, 23), plan.place()));
  CHECK(status.humid.night_sets_last_five >= 4);
  CHECK(status.humid.if_watered_tonight >= status.humid.if_not_watered);
}
