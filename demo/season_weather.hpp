// The invented weather of one season at Larkspur Bench, hour by hour from a plan of days. It must
// not know who reads it, nor which files it ends in.
#pragma once

#include <chrono>
#include <cstdint>
#include <string>
#include <vector>

namespace demo {

using Instant = std::chrono::sys_seconds;  // UTC
using Day = std::chrono::local_days;       // of the farm

/// The farm's clock is seven hours behind UTC from March to November; the season lies inside.
constexpr std::chrono::hours farm_behind_utc{7};
constexpr double longitude = -117.18, latitude = 46.73;

constexpr Day sown = std::chrono::local_days(std::chrono::year(2026) / 4 / 20);
constexpr Day last_day = std::chrono::local_days(std::chrono::year(2026) / 8 / 20);

/// What is wrong with the stations, and when (farm days). Everything before is clean.
constexpr Day spike_day = std::chrono::local_days(std::chrono::year(2026) / 7 / 5);
constexpr Day silent_day = std::chrono::local_days(std::chrono::year(2026) / 7 / 21);
constexpr Day stuck_day = std::chrono::local_days(std::chrono::year(2026) / 7 / 23);

enum class Sky { clear, shower, fog, grey };

/// One day: its coolest (05:00 solar) and warmest (15:00 solar) temperature and dew point, °C.
struct DayPlan {
  double coolest, warmest, dew_point;
  Sky sky;
  double shower_mm;
};

struct Weather {
  Instant time;
  double temperature, humidity;  // °C, %
  double rain_mm;                // since the reading before
  double wind_ms, solar_wm2;
};

/// Random numbers that are the same everywhere: the engine is fixed by the language standard, the
/// distributions of the standard library are not and are not used.
class Chance;

/// The plan of every day from the sowing on, two more than the season has.
std::vector<DayPlan> plan_days(std::uint64_t seed);

/// Readings of the station on the bench, every 5 min, as faultless instruments would give them.
std::vector<Weather> bench_weather(const std::vector<DayPlan>& days, std::uint64_t seed);

/// The same weather down at the creek, every 10 min: cooler, most of all at night, and more humid.
std::vector<Weather> creek_weather(const std::vector<Weather>& bench);

/// Plants the troubles: the spike and the stuck humidity on the bench, the silent day at the creek.
void plant_bench_troubles(std::vector<Weather>& bench);
void plant_creek_troubles(std::vector<Weather>& creek);

/// The day on which thermal time since sowing (base 3 °C, no gain above 22 °C, none at 45 °C)
/// passes `needed` °C·d, by readings `per_day` to a day; `last_day` if never.
Day day_of_thermal_time(const std::vector<Weather>& readings, double needed, double per_day);

/// Start of a farm day.
Instant start_of(Day day);
/// "2026-07-14 13:55", farm clock.
std::string farm_clock(Instant at);
/// "2026-07-14T20:55:00Z"
std::string utc_stamp(Instant at);

}  // namespace demo
