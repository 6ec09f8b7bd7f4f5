// Which flowers heat met: shares by hand, and that a later note moves them (science §6).
#include "core/season/exposure.hpp"

#include "core/crop/flowers.hpp"
#include "scene.hpp"
#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::season;
using namespace antherd::season::scene;

namespace {

/// Half the flowers of a coastal crop open at 42 % of 270 °C·d (science §11): 813.4 °C·d.
Phenology two_halves(const Plan& plan) {
  Phenology crop;
  crop.belief.sd = plan.traits.prior_sigma;
  crop.hours = 72;
  crop.time = ThermalTime(970);
  crop.day_ends = {{plan.field.sown, 700.0},
                   {plan.field.sown + days{1}, 813.4},
                   {plan.field.sown + days{2}, 970.0}};
  return crop;
}

/// 35 °C from 13:00 on given days, else 13 °C.
Course hot_on(std::vector<int> hot) {
  return [hot](int n) -> std::optional<Weather> {
    const bool day = std::find(hot.begin(), hot.end(), n / 24) != hot.end();
    return day && n % 24 == 13 ? Weather{35, 20} : Weather{};
  };
}

double opened(double thermal_time, double mean) {
  return crop::share_opened(100.0 * (thermal_time - 700 * mean) / 270);
}

}  // namespace

TEST_CASE("a flower is affected once, by the worst day of the seven before it opens or its own") {
  const Plan plan = plan_at_greenwich();
  const Phenology crop = two_halves(plan);
  const CivilDay first = plan.field.sown;
  const std::vector<DayHeat> heat{{first, false, 0.0, 0.4},
                                  {first + days{1}, true, 0.02, 0.3},
                                  {first + days{2}, false, 0.1, 0.2}};
  const Exposure met = exposure_of(crop, plan, heat);
  CHECK(met.exposed == Approx(0.5).margin(0.005));
  CHECK(met.low == Approx(0.5 * 0.02 + 0.5 * 0.1).margin(0.001));
  // Both halves meet their worst day on the first: 0.4. Each counted on each day would be 0.8.
  CHECK(met.high == Approx(0.4).margin(0.005));
  CHECK(met.exposed_until(first) == 0);
  CHECK(met.exposed_until(first + days{1}) == met.exposed);
  REQUIRE(met.days.size() == 3);
  CHECK(met.days[0].high == Approx(met.high));
  CHECK(met.days[0].share == 0);

  const std::vector<DayHeat> long_before{{first - days{7}, true, 0.1, 0.4}};
  CHECK(exposure_of(crop, plan, long_before).exposed == 0);  // no flower opened that day
  CHECK(exposure_of(crop, plan, long_before).high == 0);     // eight days before the first half
}

TEST_CASE("flowers due within seven days count in the high figure only") {
  const Plan plan = plan_at_greenwich();
  Phenology crop = two_halves(plan);
  crop.day_ends = {{plan.field.sown, 690.0}, {plan.field.sown + days{1}, 700.0}};
  crop.time = ThermalTime(700);
  for (int n = 0; n < 240; ++n) crop.units.add(10);  // 10 °C·d a day
  const std::vector<DayHeat> heat{{plan.field.sown + days{1}, true, 0.2, 0.5}};
  const Exposure met = exposure_of(crop, plan, heat);
  CHECK(met.exposed == 0);
  CHECK(met.low == 0);
  CHECK(met.high == Approx(0.5 * opened(770, 1.0)));
}

TEST_CASE("the exposed share follows the note that comes later") {
  const Plan plan = plan_at_greenwich();
  const Told without = tell(plan, 90 * 24, hot_on({75}));
  const double before = without.hour(75 * 24 - 1).time.value;
  const double after = without.hour(76 * 24 - 1).time.value;
  const Exposure prior = exposure_of(without.state.heat, without.state.crop, plan);
  CHECK(prior.exposed == Approx(opened(after, 1.0) - opened(before, 1.0)));
  CHECK(prior.exposed > 0.01);
  // First anthers noted on day 80 only: day 75 had no flower open.
  const Told noted = tell(plan, 90 * 24, hot_on({75}), {{}, {note(plan, 80, 60, true)}});
  const double mean = noted.state.crop.belief.mean;
  REQUIRE(700 * mean > after);
  CHECK(exposure_of(noted.state.heat, noted.state.crop, plan).exposed == 0);
  CHECK(noted.day(75).flower_share > 0.01);  // what was believed then stays in its line
}

TEST_CASE("heat before the note that anchors an unknown stage counts as far as days were seen") {
  const Plan plan = plan_at_greenwich();
  const auto hot = hot_on({66});
  const auto late = [&](int n) { return n < 50 * 24 ? std::nullopt : hot(n); };
  const Told told = tell(plan, 72 * 24, late, {{}, {note(plan, 70, 65, true)}});
  REQUIRE(told.state.crop.known());
  // 810 at noon of day 70: day 66 ran from 765 to 775 °C·d, give or take its hot hour.
  const double expected = opened(775, 1.0) - opened(765, 1.0);
  CHECK(exposure_of(told.state.heat, told.state.crop, plan).exposed ==
        Approx(expected).margin(0.001));
  CHECK(expected > 0.03);
  // With a day of 19 hours between, what lay before it is not known.
  const auto holed = [&](int n) { return n / 24 == 68 && n % 24 < 5 ? std::nullopt : late(n); };
  const Told cut = tell(plan, 72 * 24, holed, {{}, {note(plan, 70, 65, true)}});
  CHECK(exposure_of(cut.state.heat, cut.state.crop, plan).exposed == 0);
}

TEST_CASE("today's heat counts before the day is over") {
  const Plan plan = plan_at_greenwich();
  const Told told = tell(plan, 75 * 24 + 14, hot_on({75}));
  CHECK(exposure_of(told.state.heat, told.state.crop, plan).exposed > 0);
  const Told earlier = tell(plan, 75 * 24 + 13, hot_on({75}));
  CHECK(exposure_of(earlier.state.heat, earlier.state.crop, plan).exposed == 0);
}
