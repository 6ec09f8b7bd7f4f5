// What an irrigation did, through the fold: the soil's side by hand, the night's from the sun.
#include "scene.hpp"
#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::season;
using namespace antherd::season::scene;

namespace {

Plan on_silt_loam() {
  Plan plan = plan_at_greenwich();
  plan.field.soil = "silt loam";
  plan.field.soil_water_at_sowing = 1.0;
  return plan;
}

/// Days of 22 °C and nights of 8 °C: by Hargreaves some 4 mm of use a day at this place.
std::optional<Weather> swinging(int n) {
  return n % 24 >= 8 && n % 24 < 20 ? Weather{22, 50} : Weather{8, 70};
}

}  // namespace

TEST_CASE("an irrigation's record holds the depletion before and after it and what drained") {
  const Plan plan = on_silt_loam();
  field::Irrigation flood = set_on(plan, 65, 8);
  flood.depth = Millimetre(300);
  const Told told = tell(plan, 67 * 24, swinging, {{set_on(plan, 60, 8), flood}, {}});
  REQUIRE(told.chronicle.watered.size() == 2);
  const Watered& first = told.chronicle.watered[0];
  const double missing = told.hour(60 * 24).missing->value;  // at the midnight before
  REQUIRE(first.before);
  CHECK(first.before->value >= missing);  // roots reached new soil, which was full at sowing
  CHECK(first.before->value == Approx(missing).margin(0.5));
  CHECK(first.after->value == Approx(first.before->value - 6));
  CHECK(first.drained->value == Approx(0).margin(1e-9));
  CHECK_FALSE(first.wet_until);  // by day
  const Watered& second = told.chronicle.watered[1];
  CHECK(second.after->value == 0);
  CHECK(second.drained->value == Approx(300 - second.before->value));
}

TEST_CASE("an evening's set is told with its sunrise, and whether an hour earlier would matter") {
  const Plan plan = on_silt_loam();
  // On day 60 (30 June) at 45° north the sun sets at 19:47 and rises at 4:16 of its own time: the
  // line is 16:47. Ends at 22:00, 17:00 and 16:00.
  const std::vector sets{set_on(plan, 60, 20), set_on(plan, 62, 15), set_on(plan, 64, 14)};
  const Told told = tell(plan, 66 * 24, swinging, {sets, {}});
  REQUIRE(told.chronicle.watered.size() == 3);
  const auto& [evening, near, day] =
      std::tie(told.chronicle.watered[0], told.chronicle.watered[1], told.chronicle.watered[2]);
  REQUIRE(evening.wet_until);
  const auto clock = *evening.wet_until - Instant(plan.first_hour()) - 61 * 24 * one_hour;
  CHECK(clock > 4 * one_hour);
  CHECK(clock < 5 * one_hour);
  CHECK_FALSE(evening.limit_near);
  CHECK(near.wet_until);
  CHECK(near.limit_near);
  CHECK_FALSE(day.wet_until);
}

TEST_CASE("one set of three waters a third of the field") {
  Plan plan = on_silt_loam();
  plan.field.sets = 3;
  field::Irrigation one = set_on(plan, 60, 8);
  one.set = 2;
  CHECK(depth_over_field(one, plan.field)->value == Approx(2));
  const Told told = tell(plan, 62 * 24, swinging, {{one}, {}});
  REQUIRE(told.chronicle.watered.size() == 1);
  const Watered& watered = told.chronicle.watered[0];
  CHECK((*watered.before - *watered.after).value == Approx(2));
  one.set = 0;  // the whole field
  CHECK(depth_over_field(one, plan.field)->value == Approx(6));
}

TEST_CASE("without a soil, and with a depth unknown, nothing is said of the roots") {
  Plan plan = on_silt_loam();
  field::Irrigation unknown = set_on(plan, 60, 8);
  unknown.depth.reset();
  const Told told = tell(plan, 62 * 24, swinging, {{unknown}, {}});
  REQUIRE(told.chronicle.watered.size() == 1);
  CHECK_FALSE(told.chronicle.watered[0].before);
  plan.field.soil.clear();
  const Told bare = tell(plan, 62 * 24, swinging, {{set_on(plan, 60)}, {}});
  REQUIRE(bare.chronicle.watered.size() == 1);
  CHECK_FALSE(bare.chronicle.watered[0].before);
  CHECK(bare.chronicle.watered[0].wet_until);
  CHECK_FALSE(bare.hour(61 * 24).missing);
}
