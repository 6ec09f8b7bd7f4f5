// See wetness.hpp.
#include "core/risk/wetness.hpp"

#include <algorithm>
#include <cmath>

#include "core/weather/sun.hpp"

namespace antherd::risk {
namespace {

constexpr double film_counts_from = 0.02;  // mm

std::size_t at(Film film) { return static_cast<std::size_t>(film); }

bool film_by_humidity(const LeafHour& hour, const HumidRules& rules) {
  return hour.humidity.value >= rules.film_humidity ||
         (hour.humidity.value >= rules.film_humidity_calm && hour.drying.value < 0.1);
}

bool film_by_dew_point(LeafState& state, const LeafHour& hour) {
  // The dew point comes back from a humidity of six decimals: exactly 2.0 must not hang on noise.
  const double depression = std::round((hour.temperature - hour.dew_point).value * 1e4) / 1e4;
  if (depression <= 2.0) state.humid_film = true;
  if (depression >= 3.8) state.humid_film = false;
  return state.humid_film;
}

/// @param spent  what the water film took of the hour's drying, mm
bool film_by_energy(LeafState& state, const LeafHour& hour, double spent, const HumidRules& rules) {
  const double exchange = hour.exchange.value;
  state.dew_mm = std::min(rules.bucket_mm, state.dew_mm + std::max(0.0, -exchange));
  const bool dew = state.dew_mm > film_counts_from;
  state.dew_mm = std::max(0.0, state.dew_mm - std::max(0.0, exchange - spent));
  return dew || hour.humidity.value >= rules.film_humidity;
}

/// The night that holds the end of an irrigation, if that end lies between sunset − 3 h and
/// sunrise, both included. The sunset is the one before that sunrise.
std::optional<NightSet> night_of(const field::Irrigation& irrigation, const weather::Place& place) {
  using std::chrono::days;
  const CivilDay day =
      std::chrono::floor<days>(weather::solar_time(irrigation.end, place.longitude));
  for (const CivilDay morning : {day, day + days{1}}) {
    const auto rise = weather::sun_day(morning, place).rise;
    const auto set = weather::sun_day(morning - days{1}, place).set;
    if (!rise || !set || irrigation.end > *rise) continue;
    if (irrigation.end < *set - 3 * one_hour) return std::nullopt;
    NightSet night{irrigation.start, irrigation.end, *set, *rise, true, false};
    night.enough = !irrigation.depth || irrigation.depth->value >= 1.0;
    night.close_to_limit = irrigation.end - one_hour < *set - 3 * one_hour;
    return night;
  }
  return std::nullopt;
}

}  // namespace

Wet wet_hour(LeafState& state, const LeafHour& hour, const Watering& water,
             const HumidRules& rules) {
  constexpr double rain_counts_from = 0.2, sensor_wet_from = 30.0;
  state.film_mm = std::min(rules.bucket_mm, state.film_mm + hour.rain.value + water.depth.value);
  if (water.unknown_depth) state.film_mm = rules.bucket_mm;
  const bool film = state.film_mm > film_counts_from;
  const double before = state.film_mm;
  state.film_mm = std::max(0.0, state.film_mm - hour.drying.value);
  ByFilm<bool> damp{};
  damp[at(Film::humidity)] = film_by_humidity(hour, rules);
  damp[at(Film::dew_point)] = film_by_dew_point(state, hour);
  damp[at(Film::energy)] = film_by_energy(state, hour, before - state.film_mm, rules);

  Wet result;
  const bool fallen = hour.rain.value >= rain_counts_from || water.overlaps;
  const bool held = fallen || film || water.night_set;
  for (std::size_t i = 0; i < film_rules; ++i) result.estimate[i] = held || damp[i];
  if (hour.sensor_minutes) {
    const bool sensed = *hour.sensor_minutes >= sensor_wet_from;
    result.sensor = sensed;
    result.water = fallen || (sensed && (film || water.night_set));
    result.wet = fallen || sensed;
  } else {
    result.water = held;
    result.wet = result.estimate[at(rules.film)];
  }
  return result;
}

void after_gap(LeafState& state) { state = LeafState{}; }

int SensorRecord::right(Film film) const { return hours - missed[at(film)] - imagined[at(film)]; }

void compare(SensorRecord& record, const Wet& wet) {
  if (!wet.sensor) return;
  ++record.hours;
  if (*wet.sensor) ++record.wet;
  for (std::size_t i = 0; i < film_rules; ++i) {
    if (*wet.sensor && !wet.estimate[i]) ++record.missed[i];
    if (!*wet.sensor && wet.estimate[i]) ++record.imagined[i];
  }
}

std::vector<NightSet> night_sets(const std::vector<field::Irrigation>& irrigations,
                                 const weather::Place& place) {
  std::vector<NightSet> sets;
  for (const field::Irrigation& irrigation : irrigations) {
    if (irrigation.method != field::Method::overhead) continue;
    if (auto night = night_of(irrigation, place)) sets.push_back(*night);
  }
  std::stable_sort(sets.begin(), sets.end(),
                   [](const NightSet& a, const NightSet& b) { return a.end < b.end; });
  return sets;
}

Watering watering_of(HourStart hour, const std::vector<field::Irrigation>& irrigations,
                     const std::vector<NightSet>& sets) {
  Watering result;
  const Instant from = hour, to = end_of(hour);
  for (const field::Irrigation& irrigation : irrigations) {
    if (irrigation.start >= to) break;  // sorted by start
    if (irrigation.method != field::Method::overhead || irrigation.end <= from) continue;
    result.overlaps = true;
    if (!irrigation.depth) {
      result.unknown_depth = true;
      continue;
    }
    const auto length = static_cast<double>((irrigation.end - irrigation.start).count());
    const auto shared = static_cast<double>(
        (std::min(irrigation.end, to) - std::max(irrigation.start, from)).count());
    result.depth += *irrigation.depth * (shared / length);
  }
  const Instant middle = middle_of(hour);
  result.night_set = std::any_of(sets.begin(), sets.end(), [&](const NightSet& set) {
    return set.enough && middle >= set.start && middle <= set.sunrise;
  });
  return result;
}

}  // namespace antherd::risk
