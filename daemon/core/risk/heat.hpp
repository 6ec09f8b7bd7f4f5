// Heat of one civil day on a field, hour by hour (science §6). It must not know dates, flowering
// or seasons: where an hour lies in the season is applied by `placed`.
#pragma once

#include <optional>

#include "core/risk/rules.hpp"
#include "core/units/quantity.hpp"
#include "core/units/time.hpp"

namespace antherd::risk {

/// A civil day so far. Only hours with data enter; `gap` marks one without.
struct HeatTally {
  int hours = 0;                 // with data
  std::optional<Celsius> t_max;  // highest hourly mean
  std::optional<HourStart> t_max_hour;
  std::optional<HourStart> first_hot;  // first hour at or above the sustained threshold
  int hours_sustained = 0;             // ≥ 32.2 °C
  int hours_severe = 0;                // ≥ 35.0 °C
  int hours_extreme = 0;               // ≥ 38.0 °C
  bool severe_reading = false;         // an hour that counts for Severe (whole degrees: above it)
  double degree_hours = 0;             // Σ max(0, T − 32.2), °C·h
  int run = 0;                         // consecutive hours ≥ 32.2 up to now
  int longest_run = 0;
};

/// Takes one more hour in. @param whole_degrees the source reports whole degrees: Severe needs a
/// reading above the threshold, not at it.
void add_hour(HeatTally& day, HourStart hour, Celsius mean, bool whole_degrees,
              const HeatRules& rules);
/// An hour without data: it ends a run and changes nothing else.
void add_gap(HeatTally& day);

/// Level of the day so far, as if in flower.
/// @param before_2  degree-hours of the whole 2 days before (missing hours count 0), °C·h
/// @param before_4  … of the 4 days before
/// Source: science §6 — Moderate: run ≥ 3 h or DH ≥ 5; Severe: an hour at ≥ 35.0, DH ≥ 20, or
/// DH ≥ 40 over 3 days; Extreme: an hour at ≥ 38.0, DH ≥ 50, or DH ≥ 100 over 5 days; sums over
/// several days count only on a day with an hour ≥ 32.2. The words Moderate, Severe, Extreme are
/// CAP 1.2's; thresholds are common practice and judgement.
Level heat_level(const HeatTally& day, double before_2, double before_4);

/// Where an hour lies in the season.
enum class Standing { outside, shoulder, window };

/// The level as it stands there: in the window as it is, in a shoulder one lower, else none.
Level placed(Level level, Standing standing);

/// Sterile share at a temperature, S = 1/(1 + exp(−0.6 (T − T50))), 0…1. S(T50) = 0.5.
/// Source: shape of Horie's rice function; judgement (science §6).
double sterile_share(Celsius t, Celsius half);

}  // namespace antherd::risk
