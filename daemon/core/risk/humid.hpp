// The humid spell over days (science §8): scores, their sum R over five humid days, the level's
// rise and fall. It must not know hours.
#pragma once

#include <deque>
#include <optional>

#include "core/risk/infection.hpp"
#include "core/risk/rules.hpp"
#include "core/units/time.hpp"

namespace antherd::risk {

/// What the spell needs to know of a humid day besides its wetness.
struct DayContext {
  CivilDay date{};
  bool after_hot_day = false;  // the humid day before was hot
  bool night_set = false;      // an overhead set before its morning
  bool disease_seen = false;   // scouting has reported the disease
  bool in_season = true;       // TT between m·req09 and m·req85
  bool before_buds = false;    // TT below stage 51: the level is cut to Moderate
};

/// A scored humid day.
struct ScoredDay {
  CivilDay date{};
  bool judged = false;  // ≥ 20 valid hours
  bool water = false;
  bool dry_out = false;
  bool night_set = false;
  bool mild = false;    // mean T 5…25 °C
  bool capped = false;  // a dew or fog day with dry-out: counts to the sum up to 1
  double infection = 0;
  double score = 0;         // after halving
  double score_before = 0;  // before halving
};

/// Scores a day: 0 if I < 1; 0.5 dew/fog with dry-out; 1 water with dry-out or dew/fog without;
/// 1.5 water without dry-out and I ≥ 2, else 1. Halved after a hot day. Source: science §8.
ScoredDay score_day(const DayWetness& wetness, const DayContext& context);

/// Carried from day to day. Days are calendar days: one that was skipped enters as not judged.
struct Spell {
  std::deque<ScoredDay> days;  // the last five, newest last
  Level level = Level::none;
  int quiet_days = 0;  // in a row: dry-out, s = 0, no night set
};

struct SpellDay {
  ScoredDay day;
  std::optional<double> r;  // nothing when the day was not judged
  int f3 = 0;
  Level own = Level::none;    // the day's own level
  Level level = Level::none;  // of the spell after it
};

/// Takes the next humid day in. Source: science §8.
SpellDay advance(Spell& spell, const DayWetness& wetness, const DayContext& context);

}  // namespace antherd::risk
