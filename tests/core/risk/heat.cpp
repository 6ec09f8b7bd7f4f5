// Heat of a day: what is kept of it, and where its level stands. The levels themselves are in
// tests/tables/risk-heat.csv.
#include "core/risk/heat.hpp"

#include "support/catch.hpp"

using namespace antherd;
using namespace antherd::risk;

namespace {

constexpr HourStart noon{std::chrono::hours{460000}};

HeatTally day_of(std::initializer_list<double> temperatures) {
  HeatTally day;
  HourStart hour = noon;
  for (double t : temperatures) {
    if (t < -90) {
      add_gap(day);
    } else {
      add_hour(day, hour, Celsius(t), false, HeatRules{});
    }
    hour += std::chrono::hours{1};
  }
  return day;
}

}  // namespace

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
