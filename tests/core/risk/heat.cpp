// Heat of a day: levels by hand from science §6.
#include "core/risk/heat.hpp"

#include <cmath>

#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::risk;

namespace {

constexpr HourStart noon{std::chrono::hours{460000}};

HeatTally day_of(std::initializer_list<double> temperatures, bool whole_degrees = false) {
  HeatTally day;
  HourStart hour = noon;
  for (double t : temperatures) {
    if (t < -90) {
      add_gap(day);
    } else {
      add_hour(day, hour, Celsius(t), whole_degrees, HeatRules{});
    }
    hour += std::chrono::hours{1};
  }
  return day;
}

Level level_of(std::initializer_list<double> temperatures) {
  return heat_level(day_of(temperatures), 0, 0);
}

}  // namespace

TEST_CASE("Moderate needs three hot hours in a row or 5 °C·h") {
  CHECK(level_of({32.1, 32.1, 32.1, 32.1}) == Level::none);
  CHECK(level_of({32.2, 32.2}) == Level::none);
  CHECK(level_of({32.2, 32.2, 32.2}) == Level::moderate);
  CHECK(level_of({32.2, 32.2, 31, 32.2}) == Level::none);
  CHECK(level_of({34.7, 34.7}) == Level::moderate);         // 2 × 2.5 = 5 °C·h
  CHECK(level_of({34.6, 34.6}) == Level::none);             // 4.8 °C·h, no run of three
  CHECK(level_of({32.2, -99, 32.2, 32.2}) == Level::none);  // a gap ends a run
}

TEST_CASE("Severe is one hour at 35.0, 20 °C·h, or 40 over three days") {
  CHECK(level_of({34.9}) == Level::none);
  CHECK(level_of({35.0}) == Level::severe);
  CHECK(level_of({34.9, 34.9, 34.9, 34.9, 34.9, 34.9, 34.9}) == Level::moderate);      // 18.9
  CHECK(level_of({34.9, 34.9, 34.9, 34.9, 34.9, 34.9, 34.9, 34.9}) == Level::severe);  // 21.6
  const HeatTally warm = day_of({32.3});
  CHECK(heat_level(warm, 39.9, 0) == Level::severe);  // 39.9 + 0.1
  CHECK(heat_level(warm, 39.8, 0) == Level::none);
  CHECK(heat_level(day_of({32.1}), 60, 200) == Level::none);  // sums need an hour ≥ 32.2 today
}

TEST_CASE("Extreme is one hour at 38.0, 50 °C·h, or 100 over five days") {
  CHECK(level_of({37.9}) == Level::severe);
  CHECK(level_of({38.0}) == Level::extreme);
  CHECK(heat_level(day_of({32.3}), 0, 100.0) == Level::extreme);
  CHECK(heat_level(day_of({32.3}), 0, 99.7) == Level::none);
}

TEST_CASE("a source of whole degrees opens Severe only above the threshold") {
  CHECK(heat_level(day_of({35.0}, true), 0, 0) == Level::none);
  CHECK(heat_level(day_of({36.0}, true), 0, 0) == Level::severe);
  CHECK(day_of({35.0}, true).hours_severe == 1);  // it is still counted as measured
}

TEST_CASE("counts, runs and degree-hours of a day") {
  const HeatTally day = day_of({31, 33.2, 34.2, -99, 36.2, 38.2, 30});
  CHECK(day.hours == 6);
  CHECK(day.t_max->value == 38.2);
  CHECK(day.t_max_hour == noon + std::chrono::hours{5});
  CHECK(day.first_hot == noon + std::chrono::hours{1});
  CHECK(day.hours_sustained == 4);
  CHECK(day.hours_severe == 2);
  CHECK(day.hours_extreme == 1);
  CHECK(day.longest_run == 2);
  CHECK(day.degree_hours == Approx(1 + 2 + 4 + 6));
}

TEST_CASE("shoulders stand one lower, elsewhere nothing") {
  CHECK(placed(Level::extreme, Standing::window) == Level::extreme);
  CHECK(placed(Level::extreme, Standing::shoulder) == Level::severe);
  CHECK(placed(Level::moderate, Standing::shoulder) == Level::none);
  CHECK(placed(Level::extreme, Standing::outside) == Level::none);
}

TEST_CASE("sterile share is a logistic with slope 0.6") {
  CHECK(sterile_share(Celsius(35), Celsius(35)) == 0.5);
  CHECK(sterile_share(Celsius(40), Celsius(35)) == Approx(1 / (1 + std::exp(-3.0))));
  CHECK(sterile_share(Celsius(20), Celsius(40)) < 1e-5);
}

TEST_CASE("sums of tenths reach their threshold") {
  // 2.4 + 2.6 = 5 °C·h by hand; as binary fractions the sum falls short by 7e-15.
  CHECK(level_of({34.6, 34.8}) == Level::moderate);
  CHECK(level_of({34.6, 34.7}) == Level::none);  // 4.9
}
