// See phenology.hpp.
#include "core/season/phenology.hpp"

#include <algorithm>
#include <cmath>

#include "core/crop/development.hpp"
#include "core/crop/flowers.hpp"
#include "core/weather/sun.hpp"

namespace antherd::season {
namespace {

constexpr int unknown_from_day = 35, unknown_to_day = 110;  // after sowing, science §5
constexpr double shoulder_days = 8.0;

Instant noon_of(const Plan& plan, CivilDay day) {
  return plan.calendar.at(CivilTime(day) + std::chrono::hours{12});
}

/// The field was not watched for too long: the note says where it stands. Of the past only the days
/// that were seen since the last gap are kept, reckoned back from the note.
void anchor(Phenology& crop, const crop::Observation& seen) {
  const double moved = (seen.reached - crop.time).value;
  std::erase_if(crop.day_ends, [&](const auto& day_end) {
    return crop.seen_since && day_end.first < *crop.seen_since;
  });
  for (auto& [day, time] : crop.day_ends) time += moved;
  crop.time = seen.reached;
  crop.belief = crop::Belief{1.0, seen.sd};
  crop.held.clear();
  crop.unseen = 0;
  crop.filled = 0;
}

/// How far a note lies from a belief, in combined σ.
double distance(const crop::Belief& belief, const crop::Observation& seen) {
  return std::abs(seen.factor - belief.mean) / std::hypot(belief.sd, seen.sd);
}

/// @return whether the note is held
bool weigh(Phenology& crop, const crop::Observation& seen) {
  const auto fits = [&](const HeldNote& held) {
    return crop::agrees(held.with, seen) ||
           crop::agrees(crop::Belief{held.seen.factor, held.seen.sd}, seen);
  };
  // A prior is wide: a note may agree with several accounts, and speaks for the nearest.
  const crop::Belief* nearest = crop::agrees(crop.belief, seen) ? &crop.belief : nullptr;
  for (const HeldNote& held : crop.held) {
    const bool nearer = nearest == nullptr || distance(held.with, seen) < distance(*nearest, seen);
    if (fits(held) && nearer) nearest = &held.with;
  }
  if (nearest != nullptr) {
    crop.belief = crop::update(*nearest, seen);
    crop.held.clear();
    return false;
  }
  crop.held.push_back(HeldNote{seen, crop::update(crop.belief, seen)});
  return true;
}

bool take_note(Phenology& crop, const Plan& plan, const field::Scouting& note) {
  const int stage = *note.stage;
  crop.last_note = note.date;
  crop.last_note_stage = stage;
  if (stage < field::stage::buds || stage > field::stage::flowers_done) return false;
  const bool began = note.began || stage == field::stage::first_anthers;
  if (stage == field::stage::flowers_done && began) crop.done = note.date;
  const bool flowering = stage >= field::stage::first_anthers && stage < field::stage::flowers_done;
  if (flowering) crop.done.reset();
  const auto seen =
      crop::observe(stage, began, crop.time, crop.units.mean_10_days(), plan.traits.needs);
  crop.scouted = true;
  if (!crop.known()) {
    anchor(crop, seen);
    return false;
  }
  return weigh(crop, seen);
}

bool take_notes(Phenology& crop, const Plan& plan, const DiaryView& diary, HourStart now) {
  bool held = false;
  for (; crop.next_note < diary.notes.size(); ++crop.next_note) {
    const field::Scouting& note = diary.notes[crop.next_note];
    if (noon_of(plan, note.date) > Instant(now)) break;
    if (!note.stage || note.date < plan.field.sown) continue;  // another season's
    const auto later = std::find_if(
        diary.notes.begin() + static_cast<long>(crop.next_note) + 1, diary.notes.end(),
        [&](const field::Scouting& other) { return other.date == note.date && other.stage; });
    if (later != diary.notes.end()) continue;  // of several on one day the last entered stands
    held = take_note(crop, plan, note) || held;
  }
  return held;
}

double unit_of(const Phenology& crop, const Plan& plan, const Air& air) {
  double unit = crop::development_unit(*air.temperature);
  if (!plan.field.photoperiod) return unit;
  const double time = crop.time.value, factor = crop.belief.mean;
  const bool sensitive = time >= plan.traits.needs.emerged.value * factor &&
                         time < plan.traits.needs.first_anthers.value * factor;
  if (!sensitive) return unit;
  const auto solar_day = std::chrono::floor<std::chrono::days>(
      weather::solar_time(middle_of(air.start), plan.field.longitude));
  return unit * crop::photoperiod_factor(weather::day_length_hours(solar_day, plan.place()),
                                         plan.traits.photoperiod);
}

double next_unit(Phenology& crop, const Plan& plan, const Air& air) {
  auto& clock = crop.by_clock[static_cast<std::size_t>(
      (air.start.time_since_epoch().count() % 24 + 24) % 24)];
  ++crop.hours;
  if (air.temperature) {
    const double unit = unit_of(crop, plan, air);
    crop.units.add(unit);
    clock.add(unit);
    return unit;
  }
  ++crop.unseen;
  const auto mean = clock.mean();
  if (mean) ++crop.filled;
  return mean.value_or(0.0);
}

Part part_of(const Phenology& crop, const Plan& plan, CivilDay day) {
  if (!crop.known()) {
    const auto since = (day - plan.field.sown).count();
    if (since < unknown_from_day) return Part::before;
    return since <= unknown_to_day ? Part::window : Part::after;
  }
  const WindowEdges edges = window_edges(crop, plan);
  const bool done = crop.done && day > *crop.done;
  if (!done && crop.time >= edges.opens && crop.time < edges.closes) return Part::window;
  if (!done && crop.time < edges.opens) {
    const double ahead = crop.time.value + shoulder_days * crop.units.mean_10_days();
    return ahead >= edges.opens.value ? Part::shoulder_before : Part::before;
  }
  return crop.time < edges.seed_fill_ends ? Part::shoulder_after : Part::after;
}

void remember_dates(Phenology& crop, const Plan& plan, CivilDay day, Part part) {
  for (std::size_t i = 0; i < told_stages.size(); ++i) {
    const double needed =
        crop::requirement(told_stages[i], plan.traits.needs).value * crop.belief.mean;
    if (crop.time.value < needed) {
      crop.reached[i].reset();
    } else if (!crop.reached[i]) {
      crop.reached[i] = day;
    }
  }
  if (part == Part::window) {
    if (!crop.window_first) crop.window_first = day;
    crop.window_last.reset();
  } else if (crop.part == Part::window) {
    crop.window_last = day;
  }
  if (part == Part::before || part == Part::shoulder_before) {
    crop.window_first.reset();
    crop.window_last.reset();
  }
}

}  // namespace

void UnitMemory::add(double unit) {
  const std::size_t at = count_ % size;
  if (count_ >= size) sum_ -= ring_[at];
  if (count_ >= short_size) short_sum_ -= ring_[(count_ - short_size) % size];
  ring_[at] = unit;
  sum_ += unit;
  short_sum_ += unit;
  ++count_;
}

double UnitMemory::mean_10_days() const {
  return count_ == 0 ? 0.0 : short_sum_ / static_cast<double>(std::min(count_, short_size));
}
double UnitMemory::mean_14_days() const {
  return count_ == 0 ? 0.0 : sum_ / static_cast<double>(std::min(count_, size));
}

std::optional<double> ClockHour::mean() const {
  if (count == 0) return std::nullopt;
  const int n = std::min(count, 3);
  double sum = 0;
  for (int i = 0; i < n; ++i) sum += last[static_cast<std::size_t>(i)];
  return sum / n;
}

crop::FlowerOdds Phenology::odds(const Plan& plan) const {
  return crop::odds(plan.traits.needs, belief, filled_share());
}

double Phenology::stage(const Plan& plan) const {
  return crop::stage_at(time, plan.traits.needs, belief.mean);
}

WindowEdges window_edges(const Phenology& crop, const Plan& plan, const crop::Belief& belief) {
  const auto& needs = plan.traits.needs;
  const auto odds = crop::odds(needs, belief, crop.filled_share());
  const double seed_fill = 0.6 * (needs.ripe - needs.flowers_done).value;
  return {odds.opens(), odds.closes(), ThermalTime(odds.begins + odds.lasts + seed_fill)};
}

WindowEdges window_edges(const Phenology& crop, const Plan& plan) {
  WindowEdges result = window_edges(crop, plan, crop.belief);
  for (const HeldNote& held : crop.held) {
    const WindowEdges other = window_edges(crop, plan, held.with);
    result.opens = std::min(result.opens, other.opens);
    result.closes = std::max(result.closes, other.closes);
    result.seed_fill_ends = std::max(result.seed_fill_ends, other.seed_fill_ends);
  }
  return result;
}

std::optional<CivilDay> crossed_on(const Phenology& crop, double thermal_time) {
  if (crop.day_ends.empty() || crop.day_ends.back().second < thermal_time) return std::nullopt;
  const auto crossing =
      std::find_if(crop.day_ends.begin(), crop.day_ends.end(),
                   [&](const auto& day_end) { return day_end.second >= thermal_time; });
  const bool known_before = crossing != crop.day_ends.begin();
  return known_before ? std::optional(crossing->first) : std::nullopt;
}

PhenologyHour advance(Phenology& crop, const Plan& plan, const DiaryView& diary, const Air& air,
                      CivilDay day) {
  PhenologyHour result;
  result.note_was_held = take_notes(crop, plan, diary, air.start);
  const ThermalTime before = crop.time;
  result.unit = next_unit(crop, plan, air);
  crop.time += ThermalTime(result.unit / 24.0);
  if (crop.known()) {
    const auto odds = crop.odds(plan);
    const auto opened = [&](ThermalTime t) {
      return crop::share_opened(100.0 * (t.value - odds.begins) / odds.lasts);
    };
    result.flower_share = opened(crop.time) - opened(before);
  }
  if (crop.day_ends.empty() || crop.day_ends.back().first != day) {
    crop.unseen_today = 0;
    crop.day_ends.emplace_back(day, crop.time.value);
  } else {
    crop.day_ends.back().second = crop.time.value;
  }
  constexpr int many = 4;  // a day with 20 hours speaks for itself
  if (!air.temperature && ++crop.unseen_today > many) crop.seen_since = day + std::chrono::days{1};
  const Part part = part_of(crop, plan, day);
  remember_dates(crop, plan, day, part);
  crop.part = part;
  return result;
}

}  // namespace antherd::season
