// Heat and humid days as the fold carries them, and the episodes that they open and close
// (science §6, §8; contracts "Alerts and notices"). They must not know what was said.
#pragma once

#include <array>
#include <deque>
#include <optional>
#include <vector>

#include "core/alerts/episode.hpp"
#include "core/risk/heat.hpp"
#include "core/risk/humid.hpp"
#include "core/season/exposure.hpp"
#include "core/season/phenology.hpp"
#include "core/season/plan.hpp"
#include "core/season/status.hpp"

namespace antherd::season {

/// The day so far and the days before, for one temperature shift.
struct HeatTrack {
  risk::HeatTally tally;
  std::array<double, 4> before{};  // degree-hours of the four days before, newest first
  Level level = Level::none;       // highest placed level of the day's hours
  Level weather_level = Level::none;
};

struct HeatHazard {
  std::optional<CivilDay> day;
  std::array<HeatTrack, 3> tracks;  // as measured, 1 °C cooler, 1 °C hotter
  double flower_share = 0;
  bool in_window = false;
  std::vector<std::pair<HourStart, double>> hours;  // of the day, with their temperatures
  std::optional<HeatDay> yesterday;
  std::vector<DayHeat> days;  // whole days, oldest first
  int hot_days = 0;           // with an hour at 35.0 °C or more, in the window as then believed
  std::deque<double> nights;  // means of the last 20 nights, °C
  double night_sum = 0;
  int night_hours = 0;
  int warm_nights = 0;
  std::optional<std::size_t> episode;  // index of the open one
  bool episode_severe = false;         // it has had a Severe hour in the window
  std::vector<CivilDay> severe_since;  // of each episode the day of its first such hour
};

/// Wetness and spell by one reading of the humidity.
struct HumidTrack {
  std::vector<risk::DayHour> hours;  // of the humid day so far
  risk::LeafState leaf;
  risk::SensorRecord sensor;  // of the season
  risk::Spell spell;
  bool yesterday_hot = false;
  bool had_emerged = false, had_buds = false;  // when the stage was last known
};

/// As measured, and the same had every humidity been 3 % lower or higher: what a good hygrometer
/// may be off by.
struct HumidHazard : HumidTrack {
  HumidTrack drier, damper;
  std::vector<HumidDay> last_five;
  std::optional<std::size_t> episode;
};

struct HourContext {
  const Plan& plan;
  const DiaryView& diary;
  const Air& air;
  const Phenology& crop;
  CivilDay day;           // civil day of the hour's start
  bool day_ends = false;  // the next hour belongs to another civil day
  bool watched = true;
};

/// One hour of heat. @return the civil day when it ends with this hour
std::optional<HeatDay> advance(HeatHazard& heat, std::vector<alerts::Episode>& episodes,
                               const HourContext& hour, double flower_share);

/// What the hour's weather does to the water on a leaf.
struct LeafWeather {
  Millimetre drying{0};    // potential, never below 0
  Millimetre exchange{0};  // of a wet leaf at the top of the crop, below 0 dew
};

constexpr double humidity_doubt = 3.0;  // % (common practice: accuracy of a field hygrometer)

/// The same as measured and with the humidity 3 % lower or higher.
struct Drying {
  LeafWeather measured, drier, damper;
};

/// One hour of wetness. @return the humid day when it ends with this hour
std::optional<HumidDay> advance(HumidHazard& humid, std::vector<alerts::Episode>& episodes,
                                const HourContext& hour, const Drying& drying, risk::Wet& wet);

/// The day so far as a record. @param track  0 as measured
HeatDay day_so_far(const HeatHazard& heat);

/// Which flowers heat has met, by what is believed now; today's counts so far.
Exposure exposure_of(const HeatHazard& heat, const Phenology& crop, const Plan& plan);

/// Moves an episode to a level, opening or closing it as needed.
void move_episode(std::vector<alerts::Episode>& episodes, std::optional<std::size_t>& open,
                  alerts::Kind kind, const std::string& subject, HourStart hour, Level level,
                  Certainty certainty, std::optional<double> figure);

/// How sure an alert of heat is at this moment: Observed where a note of flowers (stage 60 or
/// later) stands, Likely where the odds of being in flower are even or better, else Possible.
Certainty certainty_of(const Phenology& crop, const Plan& plan);

}  // namespace antherd::season
