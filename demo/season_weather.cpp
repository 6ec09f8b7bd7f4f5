#include "season_weather.hpp"

#include <algorithm>
#include <cmath>
#include <cstdio>
#include <numbers>
#include <random>

namespace demo {

using namespace std::chrono;

class Chance {
 public:
  explicit Chance(std::uint64_t seed) : engine_(seed) {}
  double uniform() { return static_cast<double>(engine_() >> 11) * 0x1.0p-53; }
  /// Mean 0, sd 1: twelve uniforms less six.
  double normal() {
    double sum = -6.0;
    for (int i = 0; i < 12; ++i) sum += uniform();
    return sum;
  }

 private:
  std::mt19937_64 engine_;
};

namespace {

struct Normal {
  Day day;
  double coolest, warmest;
};

// What the place is like by the calendar. With the weather on top, thermal time reaches the 700
// °C·d of first anthers about 1 July, so that the middle of July is full flower.
const Normal normals[] = {
    {local_days(year(2026) / 4 / 20), 3.0, 15.0},  {local_days(year(2026) / 5 / 15), 6.0, 18.5},
    {local_days(year(2026) / 6 / 15), 9.0, 22.5},  {local_days(year(2026) / 7 / 15), 12.0, 28.0},
    {local_days(year(2026) / 8 / 22), 11.5, 28.0},
};

Normal normal_of(Day day) {
  const Normal* after = std::end(normals) - 1;
  for (const Normal* n = std::begin(normals) + 1; n != std::end(normals); ++n)
    if (day < n->day) {
      after = n;
      break;
    }
  const Normal& before = *(after - 1);
  const double share = static_cast<double>((day - before.day).count()) /
                       static_cast<double>((after->day - before.day).count());
  return {day, before.coolest + share * (after->coolest - before.coolest),
          before.warmest + share * (after->warmest - before.warmest)};
}

struct Planted {
  int month, day;
  DayPlan plan;
};

const Planted planted[] = {
    // a week of fog, of which two days never clear
    {6, 20, {10.5, 18.5, 10.3, Sky::fog, 0}},
    {6, 21, {10.2, 18.0, 10.0, Sky::fog, 0}},
    {6, 22, {10.0, 17.5, 9.8, Sky::fog, 0}},
    {6, 23, {10.3, 13.6, 10.0, Sky::grey, 0}},
    {6, 24, {10.1, 13.4, 9.9, Sky::grey, 0}},
    {6, 25, {10.4, 18.0, 10.2, Sky::fog, 0}},
    {6, 26, {10.6, 19.0, 10.3, Sky::fog, 0}},
    {6, 27, {10.5, 21.5, 8.0, Sky::clear, 0}},
    // dry, mild days: the evenings of the sprinklers
    {7, 8, {12.0, 26.5, 7.0, Sky::clear, 0}},
    {7, 9, {12.2, 27.0, 7.2, Sky::clear, 0}},
    {7, 10, {12.4, 27.4, 7.5, Sky::clear, 0}},
    {7, 11, {12.5, 27.6, 7.6, Sky::clear, 0}},
    {7, 12, {12.6, 28.0, 7.8, Sky::clear, 0}},
    {7, 13, {13.0, 28.9, 8.0, Sky::clear, 0}},
    // the heat wave in flower: Severe, and on the third day Extreme
    {7, 14, {15.5, 36.0, 8.5, Sky::clear, 0}},
    {7, 15, {17.0, 36.4, 9.0, Sky::clear, 0}},
    {7, 16, {18.0, 38.8, 9.0, Sky::clear, 0}},
    {7, 17, {18.0, 35.7, 9.0, Sky::clear, 0}},
    {7, 18, {16.5, 33.4, 8.5, Sky::clear, 0}},
    {7, 19, {14.0, 29.0, 8.0, Sky::clear, 0}},
    {7, 20, {12.5, 27.0, 7.5, Sky::clear, 0}},
    {7, 21, {12.0, 27.5, 7.0, Sky::clear, 0}},
};

DayPlan changeable_day(Day day, double warmth, double moisture, Chance& chance) {
  const Normal normal = normal_of(day);
  const bool shower = day < local_days(year(2026) / 6 / 15) && chance.uniform() < 0.18;
  const double amount = 1.0 + 3.0 * chance.uniform();
  DayPlan plan{normal.coolest + 0.6 * warmth, normal.warmest + warmth, 0,
               shower ? Sky::shower : Sky::clear, shower ? amount : 0.0};
  if (shower) plan.warmest -= 3.0;
  // no heat but the planted wave
  plan.warmest = std::min(plan.warmest, 30.5);
  plan.dew_point = plan.coolest + std::min(-1.5, (shower ? -2.0 : -3.5) + moisture);
  return plan;
}

/// 0 at the coolest, 1 at the warmest; warming begins at solar hour `begin`.
double rising(double solar_hour, double begin) {
  if (solar_hour <= begin) return 0.0;
  return 0.5 - 0.5 * std::cos(std::numbers::pi * (solar_hour - begin) / (15.0 - begin));
}

struct Air {
  double temperature, dew_point;
};

/// The air at a solar hour of day `d`: from the night's coolest to the day's warmest, and down to
/// the next morning's coolest.
Air air_at(const std::vector<DayPlan>& days, std::size_t d, double solar_hour) {
  const DayPlan& today = days[d];
  const DayPlan& morning = solar_hour < 5.0 && d > 0 ? days[d - 1] : today;
  const DayPlan& next = solar_hour < 5.0 ? today : days[d + 1];
  Air air{};
  if (solar_hour >= 5.0 && solar_hour < 15.0) {
    const double begin = today.sky == Sky::fog ? 9.0 : 5.0;
    air.temperature = today.coolest + (today.warmest - today.coolest) * rising(solar_hour, begin);
  } else {
    const double since = solar_hour >= 15.0 ? solar_hour - 15.0 : solar_hour + 9.0;
    const double left = 0.5 + 0.5 * std::cos(std::numbers::pi * since / 14.0);
    air.temperature = next.coolest + (morning.warmest - next.coolest) * left;
  }
  // dew points change slowly: today's at noon, half way to the next at midnight
  const std::size_t other = solar_hour < 12.0 ? (d > 0 ? d - 1 : 0) : d + 1;
  const double share = std::abs(solar_hour - 12.0) / 24.0;
  air.dew_point = today.dew_point + share * (days[other].dew_point - today.dew_point);
  const DayPlan& night = solar_hour >= 22.0 ? days[d + 1] : today;
  const bool dark = solar_hour >= 22.0 || solar_hour < 9.0;
  if ((night.sky == Sky::fog || night.sky == Sky::grey) && dark)
    air.dew_point = std::max(air.dew_point, air.temperature - 0.2);
  if (today.sky == Sky::grey) air.dew_point = std::max(air.dew_point, air.temperature - 1.0);
  return air;
}

double saturation(double t) { return 0.6108 * std::exp(17.27 * t / (t + 237.3)); }

double humidity_of(double t, double td) {
  return td >= t ? 100.0 : 100.0 * saturation(td) / saturation(t);
}

double sky_light(const DayPlan& day, double solar_hour) {
  switch (day.sky) {
    case Sky::grey:
      return 0.25;
    case Sky::fog:
      return solar_hour < 10.0 ? 0.3 : 0.85;
    case Sky::shower:
      return solar_hour < 10.0 ? 0.35 : 0.8;
    case Sky::clear:
      break;
  }
  return 1.0;
}

/// Sunlight on the level, W/m², under a clear sky: simple declination, 0.72 of it gets through.
double clear_sunlight(Day day, double solar_hour) {
  const double radians = std::numbers::pi / 180.0;
  const double number = static_cast<double>((day - local_days(year(2026) / 1 / 1)).count()) + 1.0;
  const double declination =
      23.45 * radians * std::sin(2.0 * std::numbers::pi * (284.0 + number) / 365.0);
  const double angle = (solar_hour - 12.0) * 15.0 * radians;
  const double height = std::sin(latitude * radians) * std::sin(declination) +
                        std::cos(latitude * radians) * std::cos(declination) * std::cos(angle);
  return height > 0.0 ? 1361.0 * 0.72 * height : 0.0;
}

double solar_hour_of(Instant at) {
  const double hours = static_cast<double>(at.time_since_epoch().count()) / 3600.0;
  const double solar = hours + longitude / 15.0;
  return solar - 24.0 * std::floor(solar / 24.0);
}

Day solar_day_of(Instant at) {
  const auto shift = seconds(static_cast<int>(longitude * 240.0));
  return floor<days>(local_seconds((at + shift).time_since_epoch()));
}

}  // namespace

Instant start_of(Day day) {
  return Instant(local_seconds(day).time_since_epoch()) + farm_behind_utc;
}

static std::string stamp(std::int64_t seconds_since_1970, const char* between, const char* end) {
  const auto at = sys_seconds(seconds(seconds_since_1970));
  const auto day = floor<days>(at);
  const year_month_day date(day);
  const hh_mm_ss time(at - day);
  char text[40];
  std::snprintf(text, sizeof text, "%04d-%02u-%02u%s%02d:%02d%s", int(date.year()),
                unsigned(date.month()), unsigned(date.day()), between, int(time.hours().count()),
                int(time.minutes().count()), end);
  return text;
}

std::string farm_clock(Instant at) {
  return stamp((at - farm_behind_utc).time_since_epoch().count(), " ", "");
}

std::string utc_stamp(Instant at) { return stamp(at.time_since_epoch().count(), "T", ":00Z"); }

std::vector<DayPlan> plan_days(std::uint64_t seed) {
  Chance chance(seed);
  std::vector<DayPlan> plans;
  double warmth = 0.0, moisture = 0.0;
  for (Day day = sown; day <= last_day + days(2); day += days(1)) {
    warmth = 0.7 * warmth + 1.3 * chance.normal();
    moisture = 0.8 * moisture + 0.5 * chance.normal();
    plans.push_back(changeable_day(day, warmth, moisture, chance));
  }
  for (const Planted& p : planted) {
    const Day day = local_days(year(2026) / p.month / p.day);
    plans[static_cast<std::size_t>((day - sown).count())] = p.plan;
  }
  return plans;
}

std::vector<Weather> bench_weather(const std::vector<DayPlan>& plans, std::uint64_t seed) {
  Chance chance(seed + 1);
  std::vector<Weather> readings;
  double gust = 0.0, wander = 0.0;
  for (Instant at = start_of(sown); at < start_of(last_day + days(1)); at += minutes(5)) {
    const double hour = solar_hour_of(at);
    const Day day = std::max(sown, solar_day_of(at));
    const auto d = static_cast<std::size_t>((day - sown).count());
    const DayPlan& plan = plans[d];
    Air air = air_at(plans, d, hour);
    gust = 0.9 * gust + 0.25 * chance.normal();
    wander = 0.9 * wander + 0.04 * chance.normal();
    const bool sunny = plan.sky == Sky::clear || plan.sky == Sky::shower;
    air.temperature += sunny ? wander : 0.3 * wander;
    Weather w{};
    w.time = at;
    w.temperature = air.temperature;
    w.humidity = humidity_of(air.temperature, air.dew_point);
    // showers between seven and nine in the morning, solar time
    if (plan.sky == Sky::shower && hour >= 7.0 && hour < 9.0) w.rain_mm = plan.shower_mm / 24.0;
    const double breeze = sunny ? 1.4 + 2.2 * rising(std::min(hour, 15.0), 5.0) : 0.7;
    w.wind_ms = std::max(0.0, breeze + (sunny ? gust : 0.3 * gust));
    w.solar_wm2 = clear_sunlight(day, hour) * sky_light(plan, hour);
    readings.push_back(w);
  }
  return readings;
}

std::vector<Weather> creek_weather(const std::vector<Weather>& bench) {
  std::vector<Weather> readings;
  double rain = 0.0;
  for (std::size_t i = 0; i < bench.size(); ++i) {
    rain += bench[i].rain_mm;
    if (i % 2 != 0) continue;
    Weather w = bench[i];
    const double light = std::min(1.0, w.solar_wm2 / 400.0);
    const double vapour = saturation(w.temperature) * w.humidity / 100.0 * 1.03;
    w.temperature -= 1.6 - 0.3 * light;
    // even in fog the instrument moves a little: only the bench's is ever stuck
    const double most = 70.0 + 0.3 * w.humidity;
    w.humidity = std::min(most, 100.0 * vapour / saturation(w.temperature));
    w.wind_ms *= 0.7;
    w.rain_mm = rain;
    rain = 0.0;
    readings.push_back(w);
  }
  return readings;
}

void plant_bench_troubles(std::vector<Weather>& bench) {
  const Instant spike = start_of(spike_day) + hours(3) + minutes(10);
  const Instant stuck = start_of(stuck_day) + hours(6);
  double frozen = 0.0;
  for (Weather& w : bench) {
    if (w.time == spike) w.temperature = 41.8;
    if (w.time == stuck) frozen = w.humidity;
    if (w.time >= stuck && w.time < stuck + hours(30)) w.humidity = frozen;
  }
}

void plant_creek_troubles(std::vector<Weather>& creek) {
  const Instant silent = start_of(silent_day);
  std::erase_if(creek,
                [&](const Weather& w) { return w.time >= silent && w.time < silent + hours(24); });
}

Day day_of_thermal_time(const std::vector<Weather>& readings, double needed, double per_day) {
  double sum = 0.0;
  for (const Weather& w : readings) {
    const double t = w.temperature;
    const double unit = t <= 3.0   ? 0.0
                        : t < 22.0 ? t - 3.0
                        : t < 30.0 ? 19.0
                                   : std::max(0.0, 19.0 * (45.0 - t) / 15.0);
    sum += unit / per_day;
    if (sum >= needed)
      return floor<days>(local_seconds((w.time - farm_behind_utc).time_since_epoch()));
  }
  return last_day;
}

}  // namespace demo
