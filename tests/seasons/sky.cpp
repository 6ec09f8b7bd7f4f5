// See sky.hpp.
#include "seasons/sky.hpp"

#include <algorithm>
#include <cmath>
#include <cstdio>

#include "support/weather_generator.hpp"

namespace antherd::seasons {
namespace {

using std::numbers::pi;

/// A day's ends, °C.
struct Ends {
  double low, high, dew;
};

std::vector<Ends> days_of(const Sky& sky, CivilDay first, int count) {
  synthetic::Dice dice(sky.seed);
  std::vector<Ends> days;
  double weather = 0;
  for (int d = 0; d < count; ++d) {
    const CivilDay date = first + std::chrono::days{d};
    weather = 0.7 * weather + sky.day_to_day * dice.normal();
    const double from_warmest = static_cast<double>((date - sky.warmest).count());
    const double summer = 0.5 + 0.5 * std::cos(2 * pi * from_warmest / 365.25);
    const double mean = sky.midwinter + (sky.midsummer - sky.midwinter) * summer + weather;
    Ends ends{mean - sky.range / 2, mean + sky.range / 2, 0};
    double below = sky.dew_below_night;
    for (const Spell& spell : sky.spells) {
      if (date < spell.first || date > spell.last) continue;
      ends.low = spell.night.value_or(ends.low);
      ends.high = spell.afternoon.value_or(ends.high);
      below = spell.dew_below_night.value_or(below);
    }
    ends.dew = ends.low - below;
    days.push_back(ends);
  }
  return days;
}

/// Half a cosine from one value to another.
double between(double from, double to, double share) {
  return from + (to - from) * (0.5 - 0.5 * std::cos(pi * share));
}

/// Coolest at 05:00, warmest at 15:00 solar, without a step at midnight.
weather::Sample inland(const std::vector<Ends>& days, Instant at, std::size_t today, double hour) {
  const Ends &before = days[today - 1], &day = days[today], &after = days[today + 1];
  double t = 0, dew = 0;
  if (hour < 5) {
    t = between(before.high, day.low, (hour + 9) / 14);
    dew = before.dew + (day.dew - before.dew) * (hour + 19) / 24;
  } else {
    t = hour < 15 ? between(day.low, day.high, (hour - 5) / 10)
                  : between(day.high, after.low, (hour - 15) / 14);
    dew = day.dew + (after.dew - day.dew) * (hour - 5) / 24;
  }
  // A ripple, so that no sensor seems to stand still.
  t += 0.1 * std::sin(static_cast<double>(at.time_since_epoch().count()) / 1300);
  return synthetic::reading(at, t, dew);
}

void add_rain_and_fixed_hours(const Sky& sky, Seconds every, weather::Sample& sample) {
  sample.rain = Millimetre(0);
  for (const Rain& rain : sky.rain) {
    if (!rain.when.holds(sample.time)) continue;
    const double share = static_cast<double>(every.count()) / 3600.0;
    sample.rain = Millimetre(sample.rain->value + rain.each_hour * share);
    const double wave =
        std::sin(static_cast<double>(sample.time.time_since_epoch().count()) / 9000);
    sample.humidity = Percent(std::max(97.0 + 1.5 * wave, std::min(98.5, sample.humidity->value)));
  }
  for (const FixedHour& hour : sky.hours) {
    if (sample.time < hour.at || sample.time >= hour.at + one_hour) continue;
    if (hour.temperature) sample.temperature = Celsius(*hour.temperature);
    if (hour.humidity) sample.humidity = Percent(*hour.humidity);
  }
}

}  // namespace

std::vector<weather::Sample> readings(const Sky& sky, Instant from, int days, Seconds every) {
  synthetic::Stretch stretch{from, days, Degree(sky.longitude), sky.seed, every, Seconds{0}};
  const auto shift = Seconds(std::llround(sky.longitude * 240.0));
  const CivilDay solar_first =
      std::chrono::floor<std::chrono::days>(CivilTime((from + shift).time_since_epoch()));
  std::vector<weather::Sample> samples;
  if (sky.fog_coast) {
    samples = synthetic::cool_fog_coast(stretch);
  } else {
    const auto ends = days_of(sky, solar_first - std::chrono::days{1}, days + 4);
    samples = synthetic::each_hour(stretch, [&](Instant at, int number, double hour) {
      return inland(ends, at, static_cast<std::size_t>(number) + 1, hour);
    });
  }
  for (weather::Sample& sample : samples) add_rain_and_fixed_hours(sky, every, sample);
  return samples;
}

std::vector<weather::Sample> as_read(const Source& source, std::vector<weather::Sample> air) {
  std::vector<std::optional<weather::Sample>> held(source.stuck.size());
  std::erase_if(air, [&](const weather::Sample& sample) {
    return std::any_of(source.silent.begin(), source.silent.end(),
                       [&](const Stretch& silent) { return silent.holds(sample.time); });
  });
  for (weather::Sample& sample : air) {
    sample.temperature = Celsius(sample.temperature->value + source.warmer_by);
    if (source.whole_degrees) sample.temperature = Celsius(std::round(sample.temperature->value));
    for (std::size_t i = 0; i < source.stuck.size(); ++i) {
      if (!source.stuck[i].when.holds(sample.time)) continue;
      if (!held[i]) held[i] = sample;
      if (source.stuck[i].value == "temperature") sample.temperature = held[i]->temperature;
      if (source.stuck[i].value == "humidity") sample.humidity = held[i]->humidity;
    }
  }
  return air;
}

std::string csv_row(const weather::Sample& sample) {
  const auto day = std::chrono::floor<std::chrono::days>(sample.time);
  const std::chrono::year_month_day date{day};
  const std::chrono::hh_mm_ss time{sample.time - day};
  const double t = sample.temperature->value;
  char text[120];
  std::snprintf(text, sizeof text, "%04d-%02u-%02u %02d:%02d,%.2f,%.1f,%.1f,%.2f\n",
                static_cast<int>(date.year()), static_cast<unsigned>(date.month()),
                static_cast<unsigned>(date.day()), static_cast<int>(time.hours().count()),
                static_cast<int>(time.minutes().count()), t, t * 1.8 + 32, sample.humidity->value,
                sample.rain->value);
  return text;
}

}  // namespace antherd::seasons
