// Humid days over a season; see hazards.hpp.
#include <algorithm>

#include "core/crop/development.hpp"
#include "core/risk/infection.hpp"
#include "core/season/hazards.hpp"
#include "core/weather/air.hpp"
#include "core/weather/sun.hpp"

namespace antherd::season {
namespace {

bool disease_was_seen(const HourContext& hour) {
  const Instant now = end_of(hour.air.start);
  return std::any_of(
      hour.diary.notes.begin(), hour.diary.notes.end(), [&](const field::Scouting& note) {
        return note.disease.value_or(false) && note.date >= hour.plan.field.sown &&
               hour.plan.calendar.at(CivilTime(note.date) + std::chrono::hours{12}) <= now;
      });
}

/// While the stage is unknown the days since sowing must do (science §5, "Stage unknown"), but a
/// gap makes no crop younger: else it would lower a level.
void place_in_season(HumidTrack& humid, risk::DayContext& context, const HourContext& hour) {
  const auto& needs = hour.plan.traits.needs;
  if (!hour.crop.known()) {
    const auto since = (hour.day - hour.plan.field.sown).count();
    context.before_buds = since < 35 && !humid.had_buds;
    context.in_season = since >= 7 || humid.had_emerged;
    return;
  }
  const double time = hour.crop.time.value, factor = hour.crop.belief.mean;
  context.in_season = time >= factor * needs.emerged.value &&
                      time <= factor * crop::requirement(field::stage::dough, needs).value;
  context.before_buds = time < factor * needs.buds.value;
  humid.had_emerged = time >= factor * needs.emerged.value;
  humid.had_buds = !context.before_buds;
}

risk::DayHour day_hour(const Air& air, const risk::Wet& wet) {
  risk::DayHour hour;
  hour.start = air.start;
  hour.valid = air.valid();
  if (!hour.valid) return hour;
  hour.temperature = air.temperature->value;
  hour.humidity = air.humidity->value;
  hour.wet = wet.wet;
  hour.water = wet.water;
  return hour;
}

risk::Wet wetness_of(HumidTrack& humid, const HourContext& hour, const Air& air,
                     const LeafWeather& weather) {
  if (!air.valid()) {
    risk::after_gap(humid.leaf);
    return {};
  }
  risk::LeafHour leaf;
  leaf.start = air.start;
  leaf.temperature = *air.temperature;
  leaf.humidity = *air.humidity;
  leaf.dew_point = *air.dew_point;
  leaf.drying = weather.drying;
  leaf.exchange = weather.exchange;
  leaf.rain = air.rain_for_wetness;
  leaf.sensor_minutes = air.wet_minutes;
  const auto water = risk::watering_of(air.start, hour.diary.irrigations, hour.diary.sets);
  return risk::wet_hour(humid.leaf, leaf, water, hour.plan.rules.humid);
}

HumidDay record_of(const risk::SpellDay& spell, const risk::DayWetness& wetness) {
  HumidDay day;
  day.date = spell.day.date;
  day.judged = spell.day.judged;
  day.score = spell.day.score;
  day.score_before_halving = spell.day.score_before;
  day.r = spell.r;
  day.f3 = spell.f3;
  day.level = spell.level;
  day.own_level = spell.own;
  day.night_set = spell.day.night_set;
  day.wet_hours = wetness.wet_hours;
  day.valid_hours = wetness.valid_hours;
  if (!day.judged) return day;
  day.infection = wetness.infection;
  day.water = wetness.water;
  day.dry_out = wetness.dry_out;
  return day;
}

HumidDay end_humid_day(HumidTrack& humid, const HourContext& hour, CivilDay date) {
  const Plan& plan = hour.plan;
  const auto sunrise = weather::sun_day(date, plan.place()).rise;
  const auto wetness =
      risk::evaluate_day(humid.hours, sunrise, plan.field.longitude, plan.rules.humid);
  risk::DayContext context;
  context.date = date;
  context.after_hot_day = humid.yesterday_hot;
  context.night_set = std::any_of(
      hour.diary.sets.begin(), hour.diary.sets.end(),
      [&](const risk::NightSet& set) { return set.enough && sunrise && set.sunrise == *sunrise; });
  context.disease_seen = disease_was_seen(hour);
  place_in_season(humid, context, hour);
  context.in_season = context.in_season && hour.watched;
  const risk::SpellDay spell = risk::advance(humid.spell, wetness, context);
  humid.yesterday_hot = wetness.hot;
  humid.hours.clear();
  return record_of(spell, wetness);
}

/// The hour's air, had its humidity been otherwise. What touches neither end stays there.
Air shifted(const Air& air, double by) {
  Air other = air;
  if (!air.valid()) return other;
  other.humidity = Percent(std::clamp(air.humidity->value + by, 0.0, 100.0));
  other.dew_point = weather::dew_point(*air.temperature, *other.humidity);
  return other;
}

/// One hour of one track. @return the humid day when it ends with this hour
std::optional<HumidDay> follow(HumidTrack& track, const HourContext& hour, const Air& air,
                               const LeafWeather& weather, risk::Wet& wet) {
  wet = wetness_of(track, hour, air, weather);
  track.hours.push_back(day_hour(air, wet));
  const Degree longitude = hour.plan.field.longitude;
  if (!risk::ends_humid_day(air.start, longitude)) return std::nullopt;
  return end_humid_day(track, hour, risk::humid_day_of(air.start, longitude));
}

}  // namespace

std::optional<HumidDay> advance(HumidHazard& humid, std::vector<alerts::Episode>& episodes,
                                const HourContext& hour, const Drying& drying, risk::Wet& wet) {
  risk::Wet other;
  follow(humid.drier, hour, shifted(hour.air, -humidity_doubt), drying.drier, other);
  follow(humid.damper, hour, shifted(hour.air, humidity_doubt), drying.damper, other);
  const auto ended = follow(humid, hour, hour.air, drying.measured, wet);
  risk::compare(humid.sensor, wet);
  if (!ended) return std::nullopt;
  const HumidDay& day = *ended;
  humid.last_five.push_back(day);
  if (humid.last_five.size() > 5) humid.last_five.erase(humid.last_five.begin());
  std::optional<double> figure = day.r;
  move_episode(episodes, humid.episode, alerts::Kind::humid_spell, hour.plan.field.name,
               hour.air.start, day.level,
               hour.crop.known() ? Certainty::likely : Certainty::possible, figure);
  return day;
}

}  // namespace antherd::season
