// See humid.hpp.
#include "core/risk/humid.hpp"

#include <algorithm>

namespace antherd::risk {
namespace {

constexpr int judged_from = 20;  // valid hours
using Days = std::deque<ScoredDay>;

double sum_of_scores(const Days& days) {
  double capped = 0, others = 0;
  for (const ScoredDay& day : days) (day.capped ? capped : others) += day.score;
  return std::min(1.0, capped) + others;
}

int strong_of_last_three(const Days& days) {
  const auto count = std::min<std::ptrdiff_t>(3, std::ssize(days));
  return static_cast<int>(std::count_if(days.end() - count, days.end(),
                                        [](const ScoredDay& d) { return d.score_before >= 1; }));
}

/// The last three days, today included, were judged and none dried out.
bool three_without_dry_out(const Days& days) {
  return days.size() >= 3 && std::all_of(days.end() - 3, days.end(),
                                         [](const ScoredDay& d) { return d.judged && !d.dry_out; });
}

bool mild_and_favourable(const Days& days) {
  return std::all_of(days.end() - 3, days.end(), [](const ScoredDay& d) { return d.mild; }) &&
         std::any_of(days.end() - 3, days.end(),
                     [](const ScoredDay& d) { return d.infection >= 1; });
}

/// Sets before four of the last five mornings, this one included: it needs no measurement.
bool watered_often(const Days& days) {
  return std::count_if(days.begin(), days.end(), [](const ScoredDay& d) { return d.night_set; }) >=
         4;
}

Level level_by_scores(const Days& days, double r, int f3) {
  const bool water = std::any_of(days.begin(), days.end(), [](const ScoredDay& d) {
    return d.judged && d.infection >= 1 && d.water;
  });
  const bool never_dry = three_without_dry_out(days);
  if (r >= 4.5 && f3 >= 2 && water) return Level::extreme;
  if (r >= 3 && f3 >= 2 && (water || never_dry)) return Level::severe;
  if (r >= 2 && f3 >= 2) return Level::moderate;
  if (never_dry && mild_and_favourable(days)) return Level::moderate;
  return Level::none;
}

Level lower(Level level) {
  return level == Level::none ? level : static_cast<Level>(static_cast<int>(level) - 1);
}

/// Rises at once, falls one level a day with dry-out, ends after two quiet days.
void move_level(Spell& spell, const ScoredDay& day, Level own) {
  const bool quiet = day.judged && day.dry_out && day.score == 0 && !day.night_set;
  spell.quiet_days = quiet ? spell.quiet_days + 1 : 0;
  if (own >= spell.level) {
    spell.level = own;
  } else if (day.judged && day.dry_out) {
    spell.level = std::max(own, lower(spell.level));
  }
  if (spell.quiet_days >= 2) spell.level = Level::none;
}

}  // namespace

ScoredDay score_day(const DayWetness& wetness, const DayContext& context) {
  ScoredDay day;
  day.date = context.date;
  day.judged = wetness.valid_hours >= judged_from;
  day.night_set = context.night_set;
  if (!day.judged) return day;
  day.water = wetness.water;
  day.dry_out = wetness.dry_out;
  day.mild = wetness.mean_temperature >= 5 && wetness.mean_temperature <= 25;
  day.infection = wetness.infection;
  if (wetness.infection < 1 || !context.in_season) return day;
  if (!wetness.water) {
    day.capped = wetness.dry_out && !context.disease_seen;
    day.score_before = day.capped ? 0.5 : 1.0;
  } else {
    day.score_before = !wetness.dry_out && wetness.infection >= 2 ? 1.5 : 1.0;
  }
  day.score = context.after_hot_day ? day.score_before / 2 : day.score_before;
  return day;
}

SpellDay advance(Spell& spell, const DayWetness& wetness, const DayContext& context) {
  spell.days.push_back(score_day(wetness, context));
  if (spell.days.size() > 5) spell.days.pop_front();
  SpellDay result;
  result.day = spell.days.back();
  result.f3 = strong_of_last_three(spell.days);
  const double r = sum_of_scores(spell.days);
  if (result.day.judged) {
    result.r = r;
    result.own = level_by_scores(spell.days, r, result.f3);
  }
  if (watered_often(spell.days)) result.own = std::max(result.own, Level::moderate);
  if (context.before_buds) result.own = std::min(result.own, Level::moderate);
  move_level(spell, result.day, result.own);
  if (context.before_buds) spell.level = std::min(spell.level, Level::moderate);
  if (!context.in_season) {
    spell.level = Level::none;
    result.own = Level::none;
  }
  result.level = spell.level;
  return result;
}

}  // namespace antherd::risk
