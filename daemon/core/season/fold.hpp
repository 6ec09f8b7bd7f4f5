// The one fold: hour after hour from sowing, facts become stages, hazards, episodes and notices.
// `run`, `replay`, `hours`, `now` and every what-if use this and nothing else. It must not know
// what was said, where facts come from, nor what time it is.
#pragma once

#include <functional>
#include <optional>
#include <string>
#include <vector>

#include "core/alerts/episode.hpp"
#include "core/season/diary_view.hpp"
#include "core/season/hazards.hpp"
#include "core/season/phenology.hpp"
#include "core/season/plan.hpp"
#include "core/season/status.hpp"
#include "core/season/water_balance.hpp"
#include "core/weather/leaf.hpp"

namespace antherd::season {

/// Everything the fold carries from hour to hour; a plain value.
struct State {
  std::optional<HourStart> last;  // last folded hour
  CivilDay day{};                 // its civil day
  Instant next_day{};             // first instant of the next civil day
  Watch watch = Watch::before_sowing;
  std::optional<CivilDay> ripe_since;
  Phenology crop;
  HeatHazard heat;
  HumidHazard humid;
  WaterBalance water;
  std::vector<double> temperatures;  // of the last 24 hours in a row, °C
  weather::Sky sky;                  // for nights
  std::vector<alerts::Episode> episodes;
  std::vector<alerts::Notice> notices;
  std::size_t next_set = 0;                           // index into the diary's night sets
  std::optional<CivilDay> streak_first, streak_last;  // nights of overhead irrigation, by morning
  std::vector<Air> last_day;  // the last 24 hours, gaps included, oldest first
  std::vector<std::vector<weather::Flag>> last_flags;  // of the same hours
  std::optional<Instant> last_reading;                 // end of the last hour with data
};

/// What one hour became: one line of `hours`.
struct HourRecord {
  Air air;
  LeafWeather leaf;
  std::optional<Millimetre> eto;  // hourly, where wind and solar are measured
  risk::Wet wet;
  double unit = 0;   // °C
  ThermalTime time;  // thermal time at the hour's end
  double p_flower = 0;
  bool known = true;
  Part part = Part::before;
  double stage = 0;
  std::optional<Millimetre> missing;  // from the root zone, at the last midnight
  std::optional<double> ks;           // water stress of the last whole day
};

/// What an hour closed.
struct Step {
  HourRecord hour;
  std::optional<HeatDay> day;
  std::optional<HumidDay> humid_day;
  std::vector<Watered> watered;  // irrigations that were booked with the day's end
};

/// The only step: one more hour. Hours come one after the other without a hole; an hour without
/// data is an Air without station.
Step advance(State& state, const Plan& plan, const DiaryView& diary, const Air& air);

/// A season's days, kept beside the state by those who print them.
struct Chronicle {
  std::vector<HeatDay> days;
  std::vector<HumidDay> humid_days;
  std::vector<Watered> watered;
};

/// Folds from sowing up to (not including) `until`.
/// @param look  called after every hour, may be empty
State fold(const Plan& plan, const DiaryView& diary, const StationHours& hours, HourStart until,
           Chronicle* chronicle = nullptr,
           const std::function<void(const State&, const Step&)>& look = {});

/// The field as it stands. Runs the same fold on for the what-ifs of watering tonight.
FieldStatus status(const State& state, const Plan& plan, const DiaryView& diary);

/// Emits the notices that fall due with this hour (contracts "Alerts and notices").
void give_notices(State& state, const Plan& plan, const DiaryView& diary, const HourContext& hour,
                  bool note_was_held);

/// The state carried on to a moment with the last 24 hours' weather again, where there are any.
State carried_to(const State& state, const Plan& plan, const DiaryView& diary, Instant until);

/// The day on which thermal time will cross a value, at the mean daily units of the last 14 days;
/// nothing with fewer than 5 days of data or when it is already crossed.
std::optional<CivilDay> expected_day(const State& state, double thermal_time);

}  // namespace antherd::season
