// A field as it stands at the end of one hour: everything that `now`, a letter, the daily line and
// the review may speak of, as plain values. Made by the fold, read by the letters; no words here.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "core/alerts/episode.hpp"
#include "core/field/diary.hpp"
#include "core/field/field.hpp"
#include "core/risk/wetness.hpp"
#include "core/units/quantity.hpp"
#include "core/units/time.hpp"
#include "core/weather/hour.hpp"

namespace antherd::season {

using alerts::Certainty;
using risk::Level;

enum class Watch { before_sowing, watched, ripe, sown_long_ago, harvested };
enum class Part { before, shoulder_before, window, shoulder_after, after };  // of the season

/// Flower state of a field.
struct FlowerStatus {
  bool known = true;     // false: stage unknown (station came late, no scouting yet)
  bool scouted = false;  // a note of 51…69 stands behind the estimate
  std::optional<CivilDay> last_note;
  std::optional<int> last_note_stage;
  bool note_held = false;  // a note contradicts the estimate: the window is the union
  // While a note is held: the window by the estimate alone, and by the last held note.
  std::optional<CivilDay> without_note_first, without_note_last, with_note_first, with_note_last;
  Part part = Part::before;
  double stage = 0;  // BBCH, middle estimate, interpolated
  double p_begun = 0, p_over = 0, p_flower = 0;
  double filled_share = 0;  // of the hours since sowing, filled from neighbouring days
  std::optional<CivilDay> window_first, window_last;  // past dates or estimates
  std::optional<CivilDay> flower_first, flower_last;  // middle estimates of 60 and 69
  double flower_first_days = 0;                       // ± days of flower_first (one sd)
  std::optional<int> day_of_window;                   // 1 on the first day
  std::optional<int> days_in_window;                  // estimated length
  double thermal_time = 0;                            // °C·d
  double needed_first_anthers = 0;                    // °C·d, middle estimate
  bool implausible = false;                           // stage 60 before day 40 or after day 100
};

/// One civil day of heat (science §6). Counts are nothing where nothing was measured.
struct HeatDay {
  CivilDay date{};
  std::optional<Celsius> t_max;  // highest hourly mean
  std::optional<HourStart> t_max_hour;
  std::optional<int> hours_32, hours_35, hours_38;
  std::optional<double> degree_hours;       // above 32.2 °C
  std::optional<int> longest_run;           // hours ≥ 32.2 in a row
  std::optional<HourStart> first_hot_hour;  // first ≥ 32.2
  Level level = Level::none;                // after the part of the season was applied
  Level weather_level = Level::none;        // as if in the window
  bool in_window = false;
  double flower_share = 0;  // flowers opened this day, of the season's
  int valid_hours = 0;
  std::optional<double> ks;  // water stress of the day, 1 none … 0 full (science §9)
};

/// What one irrigation did (science §7, §9). Depletions are nothing while unknown, and before the
/// day is over on whose evening it is booked.
struct Watered {
  field::Irrigation irrigation;
  std::optional<Millimetre> before, after;  // missing from the root zone
  std::optional<Millimetre> drained;        // more than the roots could hold
  std::optional<Instant> wet_until;         // a night set: the sunrise until which leaves stay wet
  bool limit_near = false;                  // a night set that an end one hour earlier is not
};

/// One humid day, 18:00→18:00 solar, bearing the date on which it ends (science §8).
struct HumidDay {
  CivilDay date{};
  bool judged = false;              // ≥ 20 valid hours
  std::optional<double> infection;  // I
  std::optional<bool> water;
  std::optional<bool> dry_out;
  double score = 0;  // s, after halving
  double score_before_halving = 0;
  std::optional<double> r;
  int f3 = 0;
  Level level = Level::none;  // of the spell after this day
  Level own_level = Level::none;
  bool night_set = false;  // an overhead set kept leaves wet before its morning
  int wet_hours = 0;
  int valid_hours = 0;
};

struct HeatStatus {
  HeatDay today;  // so far
  std::optional<HeatDay> yesterday;
  double degree_hours_3_days = 0, degree_hours_5_days = 0;
  double exposed_share = 0;                // season: flowers opened on days with ≥ 1 h ≥ 35.0,
                                           // today's included, by what is believed now
  int hot_days = 0;                        // season, days with ≥ 1 h ≥ 35.0 in the window
  Level if_cooler = Level::none;           // today's level had every hour been 1 °C lower
  Level if_hotter = Level::none;           // … 1 °C higher
  std::optional<alerts::Episode> episode;  // open, or closed within the last 24 h
};

struct HumidStatus {
  std::optional<HumidDay> last;            // last completed humid day
  std::vector<HumidDay> last_five;         // oldest first
  int night_sets_last_five = 0;            // mornings with an overhead set before them
  int streak = 0;                          // consecutive evenings of overhead irrigation, to now
  Level if_watered_tonight = Level::none;  // were tonight watered overhead and tomorrow like today
  Level if_not_watered = Level::none;      // … and were it not
  std::optional<Level> if_drier;   // the spell's level had every humidity been 3 % lower
  std::optional<Level> if_damper;  // … 3 % higher; both nothing before the first humid day
  bool close_to_sunset_limit = false;  // a set that ended an hour earlier would not have counted
  bool disease_seen = false;
  risk::Film film = risk::Film::humidity;  // the rule that stands in for a sensor
  risk::SensorRecord sensor;               // of the season: the rules beside the sensor
  int sensor_hours_24 = 0;                 // of the last 24 hours, with a sensor's word
  std::optional<alerts::Episode> episode;  // open, or closed within the last 24 h
};

/// Soil water as of the last midnight (science §9); nothing where it is not known.
struct WaterStatus {
  std::optional<double> ks;  // 1 no stress … 0 full
  std::optional<int> days_to_stress;
  std::optional<Millimetre> missing;        // from the root zone
  std::optional<Millimetre> root_zone;      // what it holds between full and wilting
  std::optional<CelsiusDifference> canopy;  // warmer than the air in today's hottest sunny hour
};

struct DataStatus {
  std::string station;                  // that gave the last hour
  std::optional<Instant> last_reading;  // end of the last hour with data
  int hours_missing_24 = 0;             // of the last 24 closed hours
  std::vector<weather::Flag> flags_24;  // suspect and wrong values of the last 24 h, merged
  bool whole_degrees = false;
  bool shield_may_read_high = false;  // plain or unknown shield, sunny and still in the hot hours
  bool rain_measured = false;
};

struct FieldStatus {
  std::string field;
  Instant as_of;  // end of the last folded hour
  Watch watch = Watch::watched;
  field::Method irrigation = field::Method::none;
  std::optional<Instant> last_irrigation_end;
  std::optional<Celsius> temperature;  // last hour, at the field
  std::optional<Percent> humidity;
  FlowerStatus flower;
  HeatStatus heat;
  HumidStatus humid;
  DataStatus data;
  WaterStatus water;
};

}  // namespace antherd::season
