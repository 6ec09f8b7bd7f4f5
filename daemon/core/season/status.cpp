// The field as it stands, for letters and screens; see status.hpp.
#include <algorithm>
#include <cmath>

#include "core/crop/development.hpp"
#include "core/season/fold.hpp"
#include "core/weather/sun.hpp"

namespace antherd::season {
namespace {

using std::chrono::days;

FlowerStatus flower_status(const State& state, const Plan& plan) {
  const Phenology& crop = state.crop;
  const auto odds = crop.odds(plan);
  const WindowEdges edges = window_edges(crop, plan);
  FlowerStatus flower;
  flower.known = crop.known();
  flower.scouted = crop.scouted;
  flower.last_note = crop.last_note;
  flower.last_note_stage = crop.last_note_stage;
  flower.note_held = !crop.held.empty();
  flower.part = crop.part;
  flower.stage = crop.stage(plan);
  flower.filled_share = crop.filled_share();
  flower.thermal_time = crop.time.value;
  flower.needed_first_anthers = odds.begins;
  flower.window_first = crop.window_first;
  flower.window_last = crop.window_last;
  if (!flower.known) return flower;
  flower.p_begun = odds.begun(crop.time);
  flower.p_over = odds.over(crop.time);
  flower.p_flower = odds.in_flower(crop.time);
  if (!flower.window_first) flower.window_first = expected_day(state, edges.opens.value);
  // A note moves the window's first day as it moves the other dates.
  if (const auto opened = crossed_on(crop, edges.opens.value)) flower.window_first = opened;
  if (!flower.window_last) flower.window_last = expected_day(state, edges.closes.value);
  if (crop.done) flower.window_last = crop.done;
  const auto crossing = [&](double needed, std::size_t stage) {
    if (crop.time.value < needed) return expected_day(state, needed);
    const auto crossed = crossed_on(crop, needed);
    return crossed ? crossed : crop.reached[stage];
  };
  flower.flower_first = crossing(odds.begins, 2);
  flower.flower_last = crossing(odds.begins + odds.lasts, 4);
  const double daily = crop.units.mean_14_days();
  if (daily > 0) flower.flower_first_days = odds.sd_begin / daily;
  if (crop.part == Part::window && flower.window_first && *flower.window_first <= state.day) {
    flower.day_of_window = static_cast<int>((state.day - *flower.window_first).count()) + 1;
  }
  if (flower.window_first && flower.window_last) {
    flower.days_in_window =
        static_cast<int>((*flower.window_last - *flower.window_first).count()) + 1;
  }
  if (flower.flower_first) {
    const auto after = (*flower.flower_first - plan.field.sown).count();
    flower.implausible = after < 40 || after > 100;
  }
  return flower;
}

/// The two windows that a held note keeps apart.
void add_held_windows(FlowerStatus& flower, const State& state, const Plan& plan) {
  if (state.crop.held.empty() || !flower.known) return;
  const auto day_of = [&](ThermalTime time) {
    return state.crop.time < time ? expected_day(state, time.value)
                                  : crossed_on(state.crop, time.value);
  };
  const WindowEdges without = window_edges(state.crop, plan, state.crop.belief);
  const WindowEdges with = window_edges(state.crop, plan, state.crop.held.back().with);
  flower.without_note_first = day_of(without.opens);
  flower.without_note_last = day_of(without.closes);
  flower.with_note_first = day_of(with.opens);
  flower.with_note_last = day_of(with.closes);
}

std::optional<alerts::Episode> recent_episode(const State& state, alerts::Kind kind) {
  for (auto episode = state.episodes.rbegin(); episode != state.episodes.rend(); ++episode) {
    if (episode->kind != kind) continue;
    const bool recent = episode->open() || end_of(*state.last) - *episode->closed <= days{1};
    return recent ? std::optional(*episode) : std::nullopt;
  }
  return std::nullopt;
}

HeatStatus heat_status(const State& state, const Plan& plan) {
  HeatStatus heat;
  heat.today = day_so_far(state.heat);
  heat.yesterday = state.heat.yesterday;
  const HeatTrack& track = state.heat.tracks[0];
  heat.degree_hours_3_days = track.tally.degree_hours + track.before[0] + track.before[1];
  heat.degree_hours_5_days = heat.degree_hours_3_days + track.before[2] + track.before[3];
  heat.exposed_share = exposure_of(state.heat, state.crop, plan).exposed;
  heat.hot_days = state.heat.hot_days;
  heat.if_cooler = state.heat.tracks[1].level;
  heat.if_hotter = state.heat.tracks[2].level;
  heat.episode = recent_episode(state, alerts::Kind::heat);
  return heat;
}

constexpr Seconds length_of_set = 2 * one_hour;  // of the what-if

/// When a grower would water tonight, while a set still fits before sunrise, and the morning that
/// follows.
struct Tonight {
  Instant start;
  CivilDay morning{};  // the humid day that holds the night bears this date
};

Tonight tonight(const State& state, const Plan& plan) {
  const Instant now = end_of(*state.last);
  const CivilDay today = std::chrono::floor<days>(weather::solar_time(now, plan.field.longitude));
  Tonight night{now, today + days{1}};
  for (const CivilDay day : {today - days{1}, today, today + days{1}}) {
    const auto sunset = weather::sun_day(day, plan.place()).set;
    const auto sunrise = weather::sun_day(day + days{1}, plan.place()).rise;
    if (!sunset || !sunrise) continue;
    const Instant start = std::max(now, *sunset);
    if (start + length_of_set > *sunrise) continue;  // this night is over
    night.start = start;
    night.morning = day + days{1};
    break;
  }
  return night;
}

/// One more hour of the last 24 hours' weather.
Step advance_as_before(State& ahead, const Plan& plan, const DiaryView& diary,
                       const std::vector<Air>& pattern, std::size_t hour) {
  Air air = pattern[hour % pattern.size()];
  air.start = *ahead.last + std::chrono::hours{1};
  return advance(ahead, plan, diary, air);
}

/// Runs the fold on to the end of a humid day with the last 24 hours' weather again.
Level level_after(const State& state, const Plan& plan, const DiaryView& diary, CivilDay morning) {
  State ahead = state;
  const std::vector<Air> pattern = state.last_day;
  for (std::size_t i = 0; i < 60; ++i) {
    const Step step = advance_as_before(ahead, plan, diary, pattern, i);
    if (step.humid_day && step.humid_day->date >= morning) return step.humid_day->level;
  }
  return ahead.humid.spell.level;
}

/// The same diary with an overhead set of two hours tonight.
DiaryView watered(const Tonight& night, const Plan& plan, const DiaryView& diary) {
  field::Diary changed{diary.irrigations, diary.notes};
  field::Irrigation set;
  set.field = plan.field.name;
  set.start = night.start;
  set.end = night.start + length_of_set;
  set.method = field::Method::overhead;
  changed.irrigations.push_back(set);
  return DiaryView(std::move(changed), plan.place());
}

HumidStatus humid_status(const State& state, const Plan& plan, const DiaryView& diary) {
  HumidStatus humid;
  humid.last_five = state.humid.last_five;
  if (!humid.last_five.empty()) humid.last = humid.last_five.back();
  humid.film = plan.rules.humid.film;
  humid.sensor = state.humid.sensor;
  humid.sensor_hours_24 = static_cast<int>(
      std::count_if(state.last_day.begin(), state.last_day.end(),
                    [](const Air& air) { return air.valid() && air.wet_minutes; }));
  if (humid.last) {
    humid.if_drier = state.humid.drier.spell.level;
    humid.if_damper = state.humid.damper.spell.level;
  }
  const Instant now = end_of(*state.last);
  const CivilDay today = state.day;
  std::vector<CivilDay> mornings;
  for (const risk::NightSet& set : diary.sets) {
    if (set.end > now || !set.enough) continue;
    const CivilDay morning = plan.calendar.day_of(set.sunrise);
    if (today - morning >= days{5} || morning > today + days{1}) continue;
    if (std::find(mornings.begin(), mornings.end(), morning) == mornings.end()) {
      mornings.push_back(morning);
    }
    humid.close_to_sunset_limit = humid.close_to_sunset_limit || set.close_to_limit;
  }
  humid.night_sets_last_five = static_cast<int>(std::min<std::size_t>(5, mornings.size()));
  if (state.streak_last && today - *state.streak_last <= days{0}) {
    humid.streak = static_cast<int>((*state.streak_last - *state.streak_first).count()) + 1;
  }
  for (const field::Scouting& note : diary.notes) {
    const bool this_season = note.date >= plan.field.sown && note.date <= today;
    humid.disease_seen = humid.disease_seen || (note.disease.value_or(false) && this_season);
  }
  humid.episode = recent_episode(state, alerts::Kind::humid_spell);
  if (plan.field.irrigation == field::Method::overhead && state.last_day.size() == 24) {
    const Tonight night = tonight(state, plan);
    humid.if_watered_tonight = level_after(state, plan, watered(night, plan, diary), night.morning);
    humid.if_not_watered = level_after(state, plan, diary, night.morning);
  }
  return humid;
}

WaterStatus water_status(const WaterBalance& water) {
  WaterStatus status;
  if (!water.ks) return status;
  status.ks = water.ks;
  status.days_to_stress = risk::days_to_stress(*water.account);
  status.missing = water.account->missing();
  status.root_zone = water.account->total();
  if (water.sunny_deficit) status.canopy = risk::canopy_minus_air(*water.sunny_deficit, *water.ks);
  return status;
}

void merge_flags(std::vector<weather::Flag>& all, const std::vector<weather::Flag>& more) {
  for (const weather::Flag& flag : more) {
    const auto same = std::find_if(all.begin(), all.end(), [&](const weather::Flag& f) {
      return f.element == flag.element && f.verdict == flag.verdict && f.reason == flag.reason;
    });
    if (same == all.end()) {
      all.push_back(flag);
    } else {
      same->count += flag.count;
    }
  }
}

DataStatus data_status(const State& state, const Plan& plan) {
  DataStatus data;
  data.last_reading = state.last_reading;
  bool still_sun = false;
  for (const Air& air : state.last_day) {
    if (!air.temperature) ++data.hours_missing_24;
    if (air.station < 0) continue;
    data.whole_degrees = air.whole_degrees;
    data.station = plan.stations[static_cast<std::size_t>(air.station)].name;
    const auto hot = state.heat.tracks[0].tally.t_max_hour;
    if (hot == air.start && air.daylight && air.wind && air.wind->value < 1.0) still_sun = true;
  }
  for (const auto& flags : state.last_flags) merge_flags(data.flags_24, flags);
  if (data.station.empty() && !plan.stations.empty()) data.station = plan.stations.front().name;
  for (const weather::Station& station : plan.stations) {
    if (station.name != data.station) continue;
    data.rain_measured = station.measures_rain;
    data.shield_may_read_high = still_sun && station.shield != weather::Shield::fanned;
  }
  return data;
}

}  // namespace

State carried_to(const State& state, const Plan& plan, const DiaryView& diary, Instant until) {
  State ahead = state;
  const std::vector<Air> pattern = state.last_day;
  if (pattern.empty()) return ahead;
  for (std::size_t i = 0; end_of(*ahead.last) < until; ++i) {
    advance_as_before(ahead, plan, diary, pattern, i);
  }
  return ahead;
}

std::optional<CivilDay> expected_day(const State& state, double thermal_time) {
  const double missing = thermal_time - state.crop.time.value;
  const double daily = state.crop.units.mean_14_days();
  if (missing <= 0 || state.crop.units.count() < 120 || daily <= 0) return std::nullopt;
  return state.day + days{static_cast<int>(std::ceil(missing / daily))};
}

FieldStatus status(const State& state, const Plan& plan, const DiaryView& diary) {
  FieldStatus result;
  result.field = plan.field.name;
  result.irrigation = plan.field.irrigation;
  result.watch = state.watch;
  if (!state.last) return result;
  result.as_of = end_of(*state.last);
  if (!state.last_day.empty()) {
    result.temperature = state.last_day.back().temperature;
    result.humidity = state.last_day.back().humidity;
  }
  for (const field::Irrigation& irrigation : diary.irrigations) {
    const bool this_season = irrigation.end > Instant(plan.first_hour());
    if (this_season && irrigation.start < result.as_of) {
      result.last_irrigation_end = irrigation.end;
    }
  }
  result.flower = flower_status(state, plan);
  add_held_windows(result.flower, state, plan);
  result.heat = heat_status(state, plan);
  result.humid = humid_status(state, plan, diary);
  result.data = data_status(state, plan);
  result.water = water_status(state.water);
  return result;
}

}  // namespace antherd::season
