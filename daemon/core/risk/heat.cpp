// See heat.hpp.
#include "core/risk/heat.hpp"

#include <algorithm>
#include <cmath>

namespace antherd::risk {

namespace {

/// Sums of readings in tenths are compared as tenths: 2.4 + 2.6 reaches 5 (science §0).
double rounded(double degree_hours) { return std::round(degree_hours * 1e6) / 1e6; }

}  // namespace

void add_hour(HeatTally& day, HourStart hour, Celsius mean, bool whole_degrees,
              const HeatRules& rules) {
  ++day.hours;
  if (!day.t_max || mean > *day.t_max) {
    day.t_max = mean;
    day.t_max_hour = hour;
  }
  if (mean >= rules.severe) ++day.hours_severe;
  if (whole_degrees ? mean > rules.severe : mean >= rules.severe) day.severe_reading = true;
  if (mean >= rules.extreme) ++day.hours_extreme;
  if (mean < rules.sustained) {
    day.run = 0;
    return;
  }
  ++day.hours_sustained;
  if (!day.first_hot) day.first_hot = hour;
  day.degree_hours += (mean - rules.sustained).value;
  day.longest_run = std::max(day.longest_run, ++day.run);
}

void add_gap(HeatTally& day) { day.run = 0; }

Level heat_level(const HeatTally& day, double before_2, double before_4) {
  const bool hot_today = day.hours_sustained > 0;
  const double sum_1 = rounded(day.degree_hours);
  const double sum_3 = hot_today ? rounded(before_2 + day.degree_hours) : 0.0;
  const double sum_5 = hot_today ? rounded(before_4 + day.degree_hours) : 0.0;
  if (day.hours_extreme >= 1 || sum_1 >= 50 || sum_5 >= 100) return Level::extreme;
  if (day.severe_reading || sum_1 >= 20 || sum_3 >= 40) return Level::severe;
  if (day.longest_run >= 3 || sum_1 >= 5) return Level::moderate;
  return Level::none;
}

Level placed(Level level, Standing standing) {
  if (standing == Standing::outside) return Level::none;
  if (standing == Standing::window || level == Level::none) return level;
  return static_cast<Level>(static_cast<int>(level) - 1);
}

double sterile_share(Celsius t, Celsius half) {
  return 1.0 / (1.0 + std::exp(-0.6 * (t - half).value));
}

}  // namespace antherd::risk
