// Heat over a season, day by day; see hazards.hpp.
#include <algorithm>

#include "core/season/hazards.hpp"
#include "core/weather/sun.hpp"

namespace antherd::season {
namespace {

constexpr int whole_day = 20;  // valid hours from which a day may close an episode
constexpr std::array<double, 3> shifts{0.0, -1.0, 1.0};

risk::Standing standing_of(Part part, bool watched) {
  if (!watched) return risk::Standing::outside;
  if (part == Part::window) return risk::Standing::window;
  const bool shoulder = part == Part::shoulder_before || part == Part::shoulder_after;
  return shoulder ? risk::Standing::shoulder : risk::Standing::outside;
}

void add_to_track(HeatTrack& track, const HourContext& hour, double shift) {
  const Air& air = hour.air;
  if (!air.temperature) {
    risk::add_gap(track.tally);
    return;
  }
  risk::add_hour(track.tally, air.start, *air.temperature + CelsiusDifference(shift),
                 air.whole_degrees, hour.plan.rules.heat);
  const double before_2 = track.before[0] + track.before[1];
  const double before_4 = before_2 + track.before[2] + track.before[3];
  const Level level = risk::heat_level(track.tally, before_2, before_4);
  track.weather_level = std::max(track.weather_level, level);
  track.level =
      std::max(track.level, risk::placed(level, standing_of(hour.crop.part, hour.watched)));
}

/// Begins a civil day; days that never came (the fold has none, but a jump would) count 0.
void begin_day(HeatHazard& heat, CivilDay day) {
  heat.day = day;
  heat.flower_share = 0;
  heat.in_window = false;
  heat.hours.clear();
}

void shift_days(HeatTrack& track) {
  std::rotate(track.before.rbegin(), track.before.rbegin() + 1, track.before.rend());
  track.before[0] = track.tally.degree_hours;
  track.tally = risk::HeatTally{};
  track.level = track.weather_level = Level::none;
}

/// What flowers open on the day met, or meet so far; nothing once they are cut.
std::optional<DayHeat> heat_met(const HeatHazard& heat, const Plan& plan) {
  const bool cut = plan.field.harvested && heat.day > *plan.field.harvested;
  if (!heat.day || cut) return std::nullopt;
  const auto noon = plan.calendar.at(CivilTime(*heat.day) + std::chrono::hours{12});
  const auto solar_day =
      std::chrono::floor<std::chrono::days>(weather::solar_time(noon, plan.field.longitude));
  const auto sun = weather::sun_day(solar_day, plan.place());
  const bool severe = heat.tracks[0].tally.hours_severe >= 1;
  const DayHeat dark{*heat.day, severe, 0, 0};
  if (!sun.rise || !sun.set) return dark;
  return day_heat(*heat.day, severe, heat.hours, *sun.rise, *sun.set).value_or(dark);
}

/// Warm nights, 20:00–09:00 farm time, between stages 60 and 89 (Lesjak & Calderini 2017).
void count_night(HeatHazard& heat, const HourContext& hour) {
  const auto clock = hour.plan.calendar.civil(Instant(hour.air.start)) - CivilTime(hour.day);
  const auto hour_of_day = std::chrono::floor<std::chrono::hours>(clock).count();
  if (hour_of_day >= 9 && hour_of_day < 20) {
    if (heat.night_hours >= 10) {
      const double mean = heat.night_sum / heat.night_hours;
      double usual = 0;
      for (const double night : heat.nights) usual += night;
      const bool above_usual =
          heat.nights.size() >= 20 && mean >= usual / static_cast<double>(heat.nights.size()) + 4;
      const double stage = hour.crop.stage(hour.plan);
      if ((mean >= 18 || above_usual) && stage >= 60 && stage < 89) ++heat.warm_nights;
      heat.nights.push_back(mean);
      if (heat.nights.size() > 20) heat.nights.pop_front();
    }
    heat.night_sum = 0;
    heat.night_hours = 0;
  } else if (hour.air.temperature) {
    heat.night_sum += hour.air.temperature->value;
    ++heat.night_hours;
  }
}

/// An episode falls to the day's level at its end; missing data lowers nothing.
void settle_episode(HeatHazard& heat, std::vector<alerts::Episode>& episodes,
                    const HourContext& hour, const HeatDay& day) {
  if (!heat.episode) return;
  const Level now = episodes[*heat.episode].level;
  if (day.valid_hours < whole_day || day.level >= now) return;
  const auto figure = day.t_max ? std::optional<double>(day.t_max->value) : std::nullopt;
  move_episode(episodes, heat.episode, alerts::Kind::heat, hour.plan.field.name, hour.air.start,
               day.level, certainty_of(hour.crop, hour.plan), figure);
}

HeatDay end_day(HeatHazard& heat, const HourContext& hour) {
  const HeatDay day = day_so_far(heat);
  if (const auto met = heat_met(heat, hour.plan)) {
    heat.days.push_back(*met);
    if (day.hours_35.value_or(0) >= 1 && day.in_window) ++heat.hot_days;
  }
  heat.yesterday = day;
  return day;
}

/// Flowers that met a Severe hour are worth a count of seeds later: once an episode, where it is
/// known that there were flowers.
void remember_severe(HeatHazard& heat, const HourContext& hour, bool opened_now) {
  if (opened_now) heat.episode_severe = false;
  const bool severe = heat.episode && heat.tracks[0].level >= Level::severe &&
                      hour.crop.part == Part::window && hour.crop.known() && hour.watched;
  if (!severe || heat.episode_severe) return;
  heat.episode_severe = true;
  heat.severe_since.push_back(hour.day);
}

}  // namespace

HeatDay day_so_far(const HeatHazard& heat) {
  const HeatTrack& track = heat.tracks[0];
  HeatDay day;
  day.date = heat.day.value_or(CivilDay{});
  day.in_window = heat.in_window;
  day.flower_share = heat.flower_share;
  day.level = track.level;
  day.weather_level = track.weather_level;
  day.valid_hours = track.tally.hours;
  if (track.tally.hours == 0) return day;
  day.t_max = track.tally.t_max;
  day.t_max_hour = track.tally.t_max_hour;
  day.hours_32 = track.tally.hours_sustained;
  day.hours_35 = track.tally.hours_severe;
  day.hours_38 = track.tally.hours_extreme;
  day.degree_hours = track.tally.degree_hours;
  day.longest_run = track.tally.longest_run;
  day.first_hot_hour = track.tally.first_hot;
  return day;
}

Exposure exposure_of(const HeatHazard& heat, const Phenology& crop, const Plan& plan) {
  const bool day_is_over = !heat.days.empty() && heat.days.back().date == heat.day;
  const auto today = day_is_over ? std::nullopt : heat_met(heat, plan);
  if (!today) return exposure_of(crop, plan, heat.days);
  std::vector<DayHeat> days = heat.days;
  days.push_back(*today);
  return exposure_of(crop, plan, days);
}

std::optional<HeatDay> advance(HeatHazard& heat, std::vector<alerts::Episode>& episodes,
                               const HourContext& hour, double flower_share) {
  if (heat.day != hour.day) {
    if (heat.day) {
      for (HeatTrack& track : heat.tracks) shift_days(track);
    }
    begin_day(heat, hour.day);
  }
  heat.flower_share += flower_share;
  heat.in_window = heat.in_window || hour.crop.part == Part::window;
  for (std::size_t i = 0; i < shifts.size(); ++i) add_to_track(heat.tracks[i], hour, shifts[i]);
  if (hour.air.temperature) heat.hours.emplace_back(hour.air.start, hour.air.temperature->value);
  count_night(heat, hour);

  const std::string& name = hour.plan.field.name;
  const Certainty certainty = certainty_of(hour.crop, hour.plan);
  const HeatTrack& measured = heat.tracks[0];
  const auto figure =
      measured.tally.t_max ? std::optional<double>(measured.tally.t_max->value) : std::nullopt;
  const bool over = !hour.watched || hour.crop.part == Part::after;
  const bool was_open = heat.episode.has_value();
  if (over) {
    move_episode(episodes, heat.episode, alerts::Kind::heat, name, hour.air.start, Level::none,
                 certainty, figure);
  } else if (!heat.episode || measured.level > episodes[*heat.episode].level) {
    move_episode(episodes, heat.episode, alerts::Kind::heat, name, hour.air.start, measured.level,
                 certainty, figure);
  }
  remember_severe(heat, hour, !was_open && heat.episode);
  if (!hour.day_ends) return std::nullopt;
  const HeatDay day = end_day(heat, hour);
  if (!over) settle_episode(heat, episodes, hour, day);
  return day;
}

}  // namespace antherd::season
