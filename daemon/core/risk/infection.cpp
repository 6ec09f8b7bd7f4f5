// See infection.hpp.
#include "core/risk/infection.hpp"

#include <algorithm>
#include <array>
#include <cmath>

#include "core/weather/sun.hpp"

namespace antherd::risk {
namespace {

/// A wet period inside one humid day while it is being read.
struct Period {
  double infection = 0;
  bool water = false;
  bool open = false;
};

int solar_minute(HourStart hour, Degree longitude) {
  const CivilTime middle = weather::solar_time(middle_of(hour), longitude);
  return static_cast<int>((middle - std::chrono::floor<std::chrono::days>(middle)).count() / 60);
}

void close(Period& period, DayWetness& day) {
  if (!period.open) return;
  // Twelve hours of a twelfth each are one: the sum is compared as a number of six decimals.
  period.infection = std::round(period.infection * 1e6) / 1e6;
  const bool larger = period.infection > day.infection;
  const bool equal = period.infection == day.infection;
  if (larger || (equal && period.water)) day.water = period.water;
  day.infection = std::max(day.infection, period.infection);
  period = Period{};
}

void read_periods(const std::vector<DayHour>& hours, std::optional<Instant> sunrise,
                  const HumidRules& rules, DayWetness& day) {
  Period period;
  int dry = 0;
  HourStart expected = hours.empty() ? HourStart{} : hours.front().start;
  for (const DayHour& hour : hours) {
    const bool gap = hour.start != expected || !hour.valid;
    expected = hour.start + std::chrono::hours{1};
    if (gap) close(period, day);
    if (!hour.valid) continue;
    if (!hour.wet) {
      if (++dry > 1) close(period, day);  // one observed dry hour is bridged, not counted
      continue;
    }
    dry = 0;
    period.open = true;
    period.water = period.water || hour.water;
    const bool after_sunrise = sunrise && middle_of(hour.start) > *sunrise;
    if (!period.water && !after_sunrise) continue;  // spores fly after sunrise
    if (const auto needed = wetness_needed(Celsius(hour.temperature), rules)) {
      period.infection += 1.0 / *needed;
    }
  }
  close(period, day);
}

bool dries_out(const std::vector<DayHour>& hours, Degree longitude, const HumidRules& rules) {
  int run = 0;
  HourStart expected{};
  for (const DayHour& hour : hours) {
    const int minute = solar_minute(hour.start, longitude);
    const bool in_time = minute >= 10 * 60 && minute < 18 * 60;
    const bool dry = hour.valid && !hour.wet && hour.humidity < rules.dry_out_humidity;
    run = in_time && dry ? (hour.start == expected ? run + 1 : 1) : 0;
    expected = hour.start + std::chrono::hours{1};
    if (run >= 4) return true;
  }
  return false;
}

bool was_hot(const std::vector<DayHour>& hours, std::optional<Instant> sunrise) {
  constexpr std::array<std::pair<double, int>, 4> limits{{{27, 8}, {28, 6}, {29, 4}, {30, 2}}};
  return std::any_of(limits.begin(), limits.end(), [&](const auto& limit) {
    return std::count_if(hours.begin(), hours.end(), [&](const DayHour& hour) {
             return hour.valid && hour.temperature >= limit.first && sunrise &&
                    middle_of(hour.start) > *sunrise;
           }) >= limit.second;
  });
}

}  // namespace

std::optional<double> wetness_needed(Celsius t, const HumidRules& rules) {
  const double low = rules.t_min, best = rules.t_best, high = rules.t_max;
  if (t.value <= low || t.value >= high) return std::nullopt;
  const double f = ((high - t.value) / (high - best)) *
                   std::pow((t.value - low) / (best - low), (best - low) / (high - best));
  return std::min(rules.w_min / f, rules.w_max);
}

DayWetness evaluate_day(const std::vector<DayHour>& hours, std::optional<Instant> sunrise,
                        Degree longitude, const HumidRules& rules) {
  DayWetness day;
  double sum = 0;
  for (const DayHour& hour : hours) {
    if (!hour.valid) continue;
    ++day.valid_hours;
    day.wet_hours += hour.wet ? 1 : 0;
    sum += hour.temperature;
  }
  if (day.valid_hours > 0) day.mean_temperature = sum / day.valid_hours;
  read_periods(hours, sunrise, rules, day);
  day.dry_out = dries_out(hours, longitude, rules);
  day.hot = was_hot(hours, sunrise);
  return day;
}

CivilDay humid_day_of(HourStart hour, Degree longitude) {
  return std::chrono::floor<std::chrono::days>(weather::solar_time(middle_of(hour), longitude) +
                                               6 * one_hour);
}

bool ends_humid_day(HourStart hour, Degree longitude) {
  return humid_day_of(hour + std::chrono::hours{1}, longitude) != humid_day_of(hour, longitude);
}

}  // namespace antherd::risk
