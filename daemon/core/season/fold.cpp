// See fold.hpp.
#include "core/season/fold.hpp"

#include <algorithm>

#include "core/weather/evaporation.hpp"

namespace antherd::season {
namespace {

constexpr double watt_to_megajoule_hour = 0.0036;
constexpr std::size_t day_of_hours = 24;

/// Solar radiation of the hour, measured or estimated (science §7), MJ m⁻² h⁻¹.
double solar_of(const State& state, const Plan& plan, const Air& air) {
  if (air.solar) return *air.solar * watt_to_megajoule_hour;
  std::optional<CelsiusDifference> range;
  if (state.temperatures.size() == day_of_hours) {
    const auto [low, high] =
        std::minmax_element(state.temperatures.begin(), state.temperatures.end());
    range = CelsiusDifference(*high - *low);
  }
  const auto station = static_cast<std::size_t>(std::max(0, air.station));
  return weather::estimated_solar(air.extraterrestrial, range,
                                  plan.stations[station].radiation_coefficient);
}

Drying add_energy_terms(HourRecord& record, State& state, const Plan& plan) {
  const Air& air = record.air;
  if (!air.valid()) return {};
  weather::HourAir terms;
  terms.temperature = *air.temperature;
  terms.humidity = *air.humidity;
  terms.wind = air.wind.value_or(MetrePerSecond(2));
  terms.solar = solar_of(state, plan, air);
  terms.clear_sky = weather::clear_sky_radiation(air.extraterrestrial, plan.field.elevation);
  terms.elevation = plan.field.elevation;
  weather::look_up(state.sky, air.start, terms, air.extraterrestrial);
  const double clearness = weather::clearness_at(state.sky, air.start);
  const auto leaf_with = [&](double humidity) {
    terms.humidity = Percent(std::clamp(humidity, 0.0, 100.0));
    return LeafWeather{weather::potential_drying(terms), weather::leaf_exchange(terms, clearness)};
  };
  const double humidity = air.humidity->value;
  Drying drying;
  drying.drier = leaf_with(humidity - humidity_doubt);
  drying.damper = leaf_with(humidity + humidity_doubt);
  record.leaf = drying.measured = leaf_with(humidity);
  if (air.wind && air.solar) record.eto = weather::reference_evapotranspiration(terms);
  return drying;
}

void remember_temperature(State& state, const Air& air) {
  if (!air.temperature) {
    state.temperatures.clear();
    return;
  }
  if (state.temperatures.size() == day_of_hours) {
    state.temperatures.erase(state.temperatures.begin());
  }
  state.temperatures.push_back(air.temperature->value);
}

void remember_hour(State& state, const Air& air) {
  if (state.last_day.size() == day_of_hours) {
    state.last_day.erase(state.last_day.begin());
    state.last_flags.erase(state.last_flags.begin());
  }
  state.last_day.push_back(air);
  state.last_day.back().measured = nullptr;  // the state outlives the hours it was made from
  state.last_flags.push_back(air.measured ? air.measured->flags : std::vector<weather::Flag>{});
  if (air.temperature) state.last_reading = end_of(air.start);
  state.last = air.start;
}

void enter_day(State& state, const Plan& plan, HourStart start) {
  if (state.last && Instant(start) < state.next_day) return;
  state.day = plan.calendar.day_of(start);
  state.next_day = plan.calendar.start_of(state.day + std::chrono::days{1});
}

/// Past stage 89 by the estimate and, while a note is held against it, by that note too: a grower
/// who has just seen open flowers is not left alone.
bool is_ripe(const Phenology& crop, const Plan& plan) {
  if (!crop.known()) return false;
  double latest = crop.belief.mean;
  for (const HeldNote& held : crop.held) latest = std::max(latest, held.with.mean);
  return crop.time.value >= plan.traits.needs.ripe.value * latest &&
         (crop.held.empty() || crop.part != Part::window);
}

/// A field past ripe, or sown long ago, or harvested is not watched.
void update_watch(State& state, const Plan& plan) {
  constexpr auto sown_long_ago = std::chrono::days{240};
  // What was ripe stays so when the station falls silent afterwards: a gap makes no crop younger.
  const bool ripe = state.crop.known() ? is_ripe(state.crop, plan) : state.ripe_since.has_value();
  if (!ripe) {
    state.ripe_since.reset();
  } else if (!state.ripe_since) {
    state.ripe_since = state.day;
  }
  if (plan.field.harvested && state.day > *plan.field.harvested) {
    state.watch = Watch::harvested;
  } else if (state.day - plan.field.sown > sown_long_ago) {
    state.watch = Watch::sown_long_ago;
  } else {
    state.watch = ripe ? Watch::ripe : Watch::watched;
  }
}

}  // namespace

Step advance(State& state, const Plan& plan, const DiaryView& diary, const Air& air) {
  enter_day(state, plan, air.start);
  Step step;
  HourRecord& record = step.hour;
  record.air = air;
  const Drying drying = add_energy_terms(record, state, plan);
  const PhenologyHour grown = advance(state.crop, plan, diary, air, state.day);
  update_watch(state, plan);

  const HourContext hour{plan,
                         diary,
                         air,
                         state.crop,
                         state.day,
                         end_of(air.start) >= state.next_day,
                         state.watch == Watch::watched};
  step.day = advance(state.heat, state.episodes, hour, grown.flower_share);
  step.humid_day = advance(state.humid, state.episodes, hour, drying, record.wet);
  step.watered = advance(state.water, hour, record.eto);
  if (step.day) step.day->ks = state.water.ks;
  give_notices(state, plan, diary, hour, grown.note_was_held);
  remember_temperature(state, air);
  remember_hour(state, air);

  record.unit = grown.unit;
  record.time = state.crop.time;
  record.known = state.crop.known();
  record.part = state.crop.part;
  record.stage = state.crop.stage(plan);
  record.ks = state.water.ks;
  if (state.water.ks) record.missing = state.water.account->missing();
  if (record.known) record.p_flower = state.crop.odds(plan).in_flower(state.crop.time);
  return step;
}

State fold(const Plan& plan, const DiaryView& diary, const StationHours& hours, HourStart until,
           Chronicle* chronicle, const std::function<void(const State&, const Step&)>& look) {
  State state;
  state.crop.belief.sd = plan.traits.prior_sigma;
  HourPicker picker(hours);
  for (HourStart start = plan.first_hour(); start < until; start += std::chrono::hours{1}) {
    const auto picked = picker.pick(start);
    const Step step =
        advance(state, plan, diary, air_at_field(plan, start, picked.hour, picked.station));
    if (chronicle != nullptr) {
      if (step.day) chronicle->days.push_back(*step.day);
      if (step.humid_day) chronicle->humid_days.push_back(*step.humid_day);
      chronicle->watered.insert(chronicle->watered.end(), step.watered.begin(), step.watered.end());
    }
    if (look) look(state, step);
  }
  return state;
}

}  // namespace antherd::season
