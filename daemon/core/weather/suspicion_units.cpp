// Temperature that is not air temperature in °C; see suspicion.hpp.
#include <algorithm>
#include <chrono>

#include "core/weather/air.hpp"
#include "core/weather/judge.hpp"
#include "core/weather/suspicion.hpp"
#include "core/weather/suspicion_parts.hpp"

namespace antherd::weather {
namespace {

using std::chrono::hours;

constexpr hours one_day{24}, two_days{48}, ten_days{240};
constexpr int enough_of_a_day = 18;  // hours with a temperature
constexpr int enough_of_ten_days = 200;
constexpr int several = 3;
constexpr double working_humidity = 90.0;    // %: at its top a hygrometer may be broken
constexpr double dark = -6.0, light = 10.0;  // altitude of the sun, degrees
constexpr double inverted = 3.0;             // °C or %: night above day by this much
constexpr double highest_air_as_humidity = 50.0;
constexpr double highest_humidity = 104.0;
constexpr double bright_day = 100.0;     // W/m²
constexpr double long_light = 14.5;      // h
constexpr double high_plateau = 2000.0;  // m: above it summers may be as cold

/// A mean that may have nothing in it.
struct Mean {
  double sum = 0.0;
  int n = 0;
  void add(double value) {
    sum += value;
    ++n;
  }
  double value() const { return n > 0 ? sum / n : 0.0; }
};

std::optional<double> reading_above_range(const Hour& hour) {
  for (const Flag& flag : hour.flags) {
    if (flag.element == Element::temperature && flag.reason == Reason::out_of_range &&
        flag.value > temperature_range.most) {
      return flag.value;
    }
  }
  return std::nullopt;
}

}  // namespace

struct UnitWatch::Day {
  int hours = 0, beyond = 0, impossible_dew = 0;
  bool dark_heat = false;
  std::optional<double> coolest;
  Mean by_day, by_night;
};

UnitWatch::Day UnitWatch::last_day(HourStart now) const {
  Day day;
  for (auto seen = seen_.rbegin(); seen != seen_.rend() && seen->start > now - one_day; ++seen) {
    const std::optional<double> shown = seen->mean ? seen->mean : seen->beyond;
    if (!shown) continue;
    ++day.hours;
    if (seen->beyond) ++day.beyond;
    if (seen->impossible_dew) ++day.impossible_dew;
    day.dark_heat = day.dark_heat || seen->dark_heat;
    if (seen->low) day.coolest = day.coolest ? std::min(*day.coolest, *seen->low) : *seen->low;
    if (seen->altitude > light) day.by_day.add(*shown);
    if (seen->altitude < dark) day.by_night.add(*shown);
  }
  return day;
}

/// The "humidity" runs like a temperature and stays in its range, the "temperature" runs against
/// it. A clock half a day off would look the same in dry air, so either some of the "temperature"
/// leaves the range of air or the measured sun says that the clock is right.
bool UnitWatch::columns_swapped(HourStart now) const {
  Mean warm_day, warm_night, humid_day, humid_night, sun_day, sun_night;
  int beyond = 0, n = 0;
  for (auto seen = seen_.rbegin(); seen != seen_.rend() && seen->start > now - two_days; ++seen) {
    const std::optional<double> shown = seen->beyond ? seen->beyond : seen->mean;
    if (!shown || !seen->humidity) continue;
    if (*shown > highest_humidity || *seen->humidity > highest_air_as_humidity) return false;
    ++n;
    if (seen->beyond) ++beyond;
    if (seen->solar && seen->altitude > light) sun_day.add(*seen->solar);
    if (seen->solar && seen->altitude < dark) sun_night.add(*seen->solar);
    if (seen->altitude > light) {
      warm_day.add(*shown);
      humid_day.add(*seen->humidity);
    } else if (seen->altitude < dark) {
      warm_night.add(*shown);
      humid_night.add(*seen->humidity);
    }
  }
  const bool clock_right = sun_day.n >= several && sun_night.n >= several &&
                           sun_day.value() > 5.0 * sun_night.value() + bright_day;
  if (n < enough_of_a_day || warm_day.n == 0 || warm_night.n == 0) return false;
  if (beyond < 2 * several && !clock_right) return false;
  return warm_night.value() - warm_day.value() >= inverted &&
         humid_day.value() - humid_night.value() >= inverted;
}

/// Ten days of long light without a warm hour.
bool UnitWatch::never_warm(const SunnyHour& now) const {
  if (place_.elevation.value > high_plateau) return false;
  int n = 0;
  for (const Seen& seen : seen_) {
    if (!seen.high) continue;
    if (*seen.high > summer_never_seen) return false;
    ++n;
  }
  if (n < enough_of_ten_days) return false;
  const double light_then = day_length_hours(now.solar_day - std::chrono::days{10}, place_);
  return std::min(light_then, day_length_hours(now.solar_day, place_)) >= long_light;
}

bool UnitWatch::beyond_air(HourStart now, const Day& day) const {
  const double coolest = day.coolest.value_or(temperature_range.most);
  if (coolest < night_common) return false;
  if (day.hours >= enough_of_a_day) {
    if (day.coolest && coolest >= night_never_seen) return true;
    if (coolest >= night_hardly_seen && day.beyond >= several) return true;
    if (day.impossible_dew >= several) return true;
  }
  // One hour is enough where nothing in ten days has spoken for °C.
  if (day.impossible_dew == 0 && !day.dark_heat) return false;
  return std::none_of(seen_.begin(), seen_.end(), [&](const Seen& seen) {
    return seen.start > now - ten_days && seen.low && *seen.low < night_common;
  });
}

std::optional<Suspicion> UnitWatch::look(const SunnyHour& now) {
  Seen seen;
  seen.start = now.hour.start;
  if (now.hour.temperature) {
    seen.low = now.hour.temperature_min->value;
    seen.high = now.hour.temperature_max->value;
    seen.mean = now.hour.temperature->value;
  }
  seen.beyond = reading_above_range(now.hour);
  if (now.hour.humidity) seen.humidity = now.hour.humidity->value;
  if (now.hour.solar) seen.solar = now.hour.solar->value;
  seen.altitude = now.altitude;
  if (seen.mean && *seen.mean >= heat_hardly_seen && seen.humidity &&
      *seen.humidity <= working_humidity) {
    const Celsius dew = dew_point(Celsius(*seen.mean), Percent(*seen.humidity));
    seen.impossible_dew = dew.value >= dew_point_never_seen;
  }
  seen.dark_heat = seen.mean && *seen.mean >= dark_heat_never_seen && now.altitude < dark;
  while (!seen_.empty() && seen_.front().start <= now.hour.start - ten_days) seen_.pop_front();
  seen_.push_back(seen);

  if (columns_swapped(now.hour.start)) return Suspicion{Reason::columns_swapped, 0.0};
  const Day day = last_day(now.hour.start);
  if (beyond_air(now.hour.start, day)) {
    // °F has its day warmer than its night; what runs the other way is something else.
    const bool told_apart = day.by_day.n >= several && day.by_night.n >= several &&
                            day.by_day.value() - day.by_night.value() >= inverted;
    return Suspicion{told_apart ? Reason::fahrenheit_as_celsius : Reason::not_air_temperature,
                     day.coolest.value_or(temperature_range.most)};
  }
  if (seen.high && *seen.high <= summer_never_seen && never_warm(now)) {
    return Suspicion{Reason::celsius_as_fahrenheit, *seen.high};
  }
  return std::nullopt;
}

}  // namespace antherd::weather
