// Invented climates for the scenario tests: hourly readings of one station, the same for the same
// seed on every machine. It must not know what is computed from them: saturation pressure is
// written out here a second time so that a mistake in core/weather cannot hide itself.
#pragma once

#include <algorithm>
#include <cmath>
#include <cstdint>
#include <numbers>
#include <span>
#include <vector>

#include "core/units/quantity.hpp"
#include "core/units/time.hpp"
#include "core/weather/hour.hpp"
#include "core/weather/sample.hpp"

namespace antherd::synthetic {

/// Where and when: whole hours from `start` on, `days` times 24 of them. Clock hours of the sun are
/// mean solar time, UTC + longitude / 15 h.
struct Stretch {
  Instant start;  // on a whole hour
  int days = 1;
  Degree longitude{-123};  // east positive
  std::uint64_t seed = 1;
  Seconds every = one_hour;      // from one reading to the next, a part of an hour
  Seconds first = one_hour / 2;  // the first reading, after the start
};

/// Uniform numbers by SplitMix64 (Steele, Lea & Flood 2014): integer arithmetic alone, so that a
/// seed means the same weather with every compiler.
class Dice {
 public:
  explicit Dice(std::uint64_t seed) : state_(seed) {}
  /// 0 ≤ u < 1
  double uniform() {
    state_ += 0x9E3779B97F4A7C15ULL;
    std::uint64_t z = state_;
    z = (z ^ (z >> 30)) * 0xBF58476D1CE4E5B9ULL;
    z = (z ^ (z >> 27)) * 0x94D049BB133111EBULL;
    return static_cast<double>((z ^ (z >> 31)) >> 11) * 0x1.0p-53;
  }
  /// Mean 0, sd 1, never beyond ±6: the sum of twelve uniforms less six.
  double normal() {
    double sum = -6.0;
    for (int i = 0; i < 12; ++i) sum += uniform();
    return sum;
  }

 private:
  std::uint64_t state_;
};

/// Saturation vapour pressure, kPa, of t °C (FAO-56 eq. 11).
inline double saturation(double t) { return 0.6108 * std::exp(17.27 * t / (t + 237.3)); }

/// Relative humidity, %, of air at t °C with dew point td °C; at most 100.
inline double humidity_of(double t, double td) {
  return td >= t ? 100.0 : 100.0 * saturation(td) / saturation(t);
}

/// Solar clock hours 0…24 of an instant.
inline double solar_hours(Instant at, Degree longitude) {
  const double seconds = static_cast<double>(at.time_since_epoch().count());
  const double hours = seconds / 3600.0 + longitude.value / 15.0;
  return hours - 24.0 * std::floor(hours / 24.0);
}

/// The day's course, 0 at the coolest (05:00 solar) and 1 at the warmest (15:00 solar): half a
/// cosine up in ten hours, half a cosine down in fourteen.
inline double course(double solar_hour) {
  const double pi = std::numbers::pi;
  if (solar_hour >= 5.0 && solar_hour < 15.0)
    return 0.5 - 0.5 * std::cos(pi * (solar_hour - 5.0) / 10.0);
  const double since_peak = solar_hour >= 15.0 ? solar_hour - 15.0 : solar_hour + 9.0;
  return 0.5 + 0.5 * std::cos(pi * since_peak / 14.0);
}

/// One reading with temperature and humidity alone.
inline weather::Sample reading(Instant at, double t, double td) {
  weather::Sample sample;
  sample.time = at;
  sample.temperature = Celsius(t);
  sample.humidity = Percent(humidity_of(t, td));
  return sample;
}

/// Number of the solar day from the stretch's start on, by solar midnights; 0 is the first,
/// partial.
inline int solar_day_number(const Stretch& stretch, Instant at) {
  const auto shift = Seconds(std::llround(stretch.longitude.value * 240.0));
  const auto day = [&](Instant t) { return std::chrono::floor<std::chrono::days>(t + shift); };
  return static_cast<int>((day(at) - day(stretch.start)).count());
}

/// Calls `make(instant, solar day number, solar hour)` for each reading: by default the middle of
/// every hour.
template <class Make>
std::vector<weather::Sample> each_hour(const Stretch& stretch, Make make) {
  std::vector<weather::Sample> samples;
  const auto count = one_hour * 24 * stretch.days / stretch.every;
  samples.reserve(static_cast<std::size_t>(count));
  for (int i = 0; i < static_cast<int>(count); ++i) {
    const Instant at = stretch.start + stretch.every * i + stretch.first;
    samples.push_back(make(at, solar_day_number(stretch, at), solar_hours(at, stretch.longitude)));
  }
  return samples;
}

/// What the fog coast is made of; the defaults are a coast with a cold sea in July and August.
struct FogCoast {
  double t_min = 10.5, t_max = 16.0;  // °C, middle of the nights and afternoons
  double fog_night = 0.85;            // share of nights with fog
  double grey_after_grey = 0.30;      // chance that the fog does not lift all day, after such a day
  double grey_after_clear = 0.08;     // … and after a day on which it lifted
};

/// Fog nights at RH 95 % and more, most afternoons dry out (RH below 80 %), about one day in ten
/// stays grey. 9…18 °C, no rain. More than a third of all hours are at RH ≥ 90 %.
inline std::vector<weather::Sample> cool_fog_coast(const Stretch& stretch, FogCoast coast = {}) {
  struct Day {
    double shift, lift;  // of the whole day, of its maximum, °C
    bool fog, grey;
  };
  Dice dice(stretch.seed);
  std::vector<Day> days;
  double shift = 0.0;
  bool grey = false;
  for (int d = 0; d <= stretch.days + 1; ++d) {
    shift = 0.7 * shift + 0.4 * dice.normal();
    grey = dice.uniform() < (grey ? coast.grey_after_grey : coast.grey_after_clear);
    const bool fog = dice.uniform() < coast.fog_night;
    days.push_back({shift, 0.5 * dice.normal(), fog, grey});
  }
  return each_hour(stretch, [&](Instant at, int number, double hour) {
    const Day& day = days[static_cast<std::size_t>(number)];
    const double low = coast.t_min + day.shift;
    const double high = day.grey ? low + 2.0 : coast.t_max + day.shift + day.lift;
    const double t = low + (high - low) * course(hour);
    // The sea holds the dew point just below the night's minimum, two degrees lower with a clear
    // night; fog comes in at ten in the evening and lifts at eight; a grey day stays near the dew.
    const Day& night = days[static_cast<std::size_t>(hour >= 22 ? number + 1 : number)];
    const bool in_fog = night.fog && (hour >= 22 || hour < 8);
    const double sea = low - (day.fog ? 0.3 : 2.2);
    const double td = day.grey ? t - 0.7 : (in_fog ? std::max(sea, t - 0.4) : sea);
    return reading(at, t, td);
  });
}

/// Cloudless inland summer: the same course from t_min to t_max °C every day, dew point constant
/// five degrees below t_min (RH about 70 % at dawn). No random part at all unless `day_to_day` (sd
/// of both ends, °C) is above 0.
inline std::vector<weather::Sample> dry_inland(const Stretch& stretch, double t_min, double t_max,
                                               double day_to_day = 0.0) {
  Dice dice(stretch.seed);
  std::vector<double> shifts;
  for (int d = 0; d <= stretch.days + 1; ++d) shifts.push_back(day_to_day * dice.normal());
  return each_hour(stretch, [&](Instant at, int number, double hour) {
    const double t =
        t_min + shifts[static_cast<std::size_t>(number)] + (t_max - t_min) * course(hour);
    return reading(at, t, t_min - 5.0);
  });
}

/// Spring sowing near a cool sea: the mean over all of the stretch is `season_mean` °C (13…17),
/// warmest about 1 August and 3.5 °C cooler at the ends of a half year, weather changing from day
/// to day with a memory of a few days, 8 °C between night and afternoon, dew point 2 °C below the
/// night.
inline std::vector<weather::Sample> maritime_spring_sown(const Stretch& stretch,
                                                         double season_mean = 15.0) {
  Dice dice(stretch.seed);
  std::vector<double> means;
  double weather = 0.0, sum = 0.0;
  const auto first = std::chrono::floor<std::chrono::days>(stretch.start);
  const int count = stretch.days + 2;
  for (int d = 0; d < count; ++d) {
    const auto date = std::chrono::year_month_day(first + std::chrono::days(d));
    const auto peak = std::chrono::sys_days(date.year() / std::chrono::August / 1);
    const double from_peak = static_cast<double>((first + std::chrono::days(d) - peak).count());
    weather = 0.7 * weather + 1.2 * dice.normal();
    means.push_back(3.5 * std::cos(2.0 * std::numbers::pi * from_peak / 365.0) + weather);
    sum += means.back();
  }
  auto samples = each_hour(stretch, [&](Instant at, int number, double hour) {
    const double mean = season_mean + means[static_cast<std::size_t>(number)] - sum / count;
    return reading(at, mean - 4.0 + 8.0 * course(hour), mean - 6.0);
  });
  return samples;
}

/// The hour records of such readings as a faultless station would give them: one sample an hour,
/// full coverage. (`weather::gather` makes the same but for its rounding.)
inline std::vector<weather::Hour> hours_from(std::span<const weather::Sample> samples) {
  std::vector<weather::Hour> hours;
  for (const weather::Sample& sample : samples) {
    weather::Hour hour;
    hour.start = hour_of(sample.time);
    hour.n = hour.n_humidity = 1;
    hour.coverage = hour.humidity_coverage = 1.0;
    hour.temperature = hour.temperature_max = hour.temperature_min =
        Celsius(std::round(sample.temperature->value * 1e6) / 1e6);
    hour.humidity = hour.humidity_max = hour.humidity_min =
        Percent(std::round(sample.humidity->value * 1e6) / 1e6);
    hours.push_back(hour);
  }
  return hours;
}

}  // namespace antherd::synthetic
