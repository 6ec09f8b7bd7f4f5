// See water_balance.hpp.
#include "core/season/water_balance.hpp"

#include <algorithm>

namespace antherd::season {
namespace {

constexpr int whole_day = 20;  // hours from which a day speaks for itself

void open_once(WaterBalance& water, const Plan& plan) {
  if (water.asked) return;
  water.asked = true;
  if (const auto held = risk::soil_water(plan.field.soil)) {
    water.account = risk::open_account(*held, plan.field.soil_water_at_sowing);
  }
}

void add_extremes(WaterBalance& water, const Air& air) {
  Celsius high = *air.temperature, low = *air.temperature;
  if (air.measured != nullptr && air.measured->temperature) {
    const CelsiusDifference offset = *air.temperature - *air.measured->temperature;
    if (air.measured->temperature_max) high = *air.measured->temperature_max + offset;
    if (air.measured->temperature_min) low = *air.measured->temperature_min + offset;
  }
  water.highest = water.highest ? std::max(*water.highest, high) : high;
  water.lowest = water.lowest ? std::min(*water.lowest, low) : low;
}

std::optional<Millimetre> reference_of(const WaterBalance& water) {
  if (water.eto_hours >= whole_day) return Millimetre(water.eto * 24.0 / water.eto_hours);
  if (water.hours >= whole_day) {
    return risk::hargreaves(*water.highest, *water.lowest, water.extraterrestrial);
  }
  return water.last_eto;
}

/// Irrigations count on the civil day on which they end.
std::vector<field::Irrigation> ended_today(const HourContext& hour) {
  const Instant end = end_of(hour.air.start);
  std::vector<field::Irrigation> ended;
  for (const field::Irrigation& irrigation : hour.diary.irrigations) {
    if (irrigation.start >= end) break;
    const bool today =
        irrigation.end <= end && hour.plan.calendar.day_of(irrigation.end - Seconds{1}) == hour.day;
    if (today) ended.push_back(irrigation);
  }
  return ended;
}

std::vector<Watered> end_day(WaterBalance& water, const HourContext& hour) {
  const auto reference = reference_of(water);
  risk::WaterDay day;
  day.stage = hour.crop.stage(hour.plan);
  day.reference = reference.value_or(Millimetre(0));
  day.rain = water.rain;
  std::vector<Watered> watered;
  std::vector<std::optional<Millimetre>> depths;
  for (const field::Irrigation& irrigation : ended_today(hour)) {
    watered.push_back(night_of(irrigation, hour.diary));
    depths.push_back(depth_over_field(irrigation, hour.plan.field));
    day.irrigation += depths.back().value_or(Millimetre(0));
    day.irrigation_unknown = day.irrigation_unknown || !depths.back();
  }
  // A stage that is not known gives no crop coefficient, and no reference gives no use.
  water.ks.reset();
  if (water.account && hour.crop.known() && reference) {
    const auto poured = risk::pour(*water.account, day, depths);
    for (std::size_t i = 0; i < poured.size(); ++i) {
      if (!poured[i]) continue;
      watered[i].before = poured[i]->before;
      watered[i].after = poured[i]->after;
      watered[i].drained = poured[i]->drained;
    }
    water.ks = risk::book_day(*water.account, day);
  }
  water.last_eto = reference;
  water.hours = water.eto_hours = 0;
  water.eto = water.extraterrestrial = 0;
  water.highest.reset();
  water.lowest.reset();
  water.sunny_hottest.reset();
  water.sunny_deficit.reset();
  water.rain = Millimetre(0);
  return watered;
}

void remember_sun(WaterBalance& water, const Air& air) {
  constexpr double strong_sun = 400;  // W/m²
  const bool sunny = air.daylight && air.valid() && air.vpd && air.solar.value_or(0) > strong_sun;
  if (!sunny || (water.sunny_hottest && *air.temperature < *water.sunny_hottest)) return;
  water.sunny_hottest = air.temperature;
  water.sunny_deficit = air.vpd;
}

}  // namespace

std::vector<Watered> advance(WaterBalance& water, const HourContext& hour,
                             std::optional<Millimetre> eto) {
  open_once(water, hour.plan);
  const Air& air = hour.air;
  water.extraterrestrial += air.extraterrestrial;
  if (air.temperature) {
    ++water.hours;
    add_extremes(water, air);
  }
  if (eto) {
    ++water.eto_hours;
    water.eto += eto->value;
  }
  if (air.rain) water.rain += *air.rain;
  remember_sun(water, air);
  return hour.day_ends ? end_day(water, hour) : std::vector<Watered>{};
}

Watered night_of(const field::Irrigation& irrigation, const DiaryView& diary) {
  Watered watered;
  watered.irrigation = irrigation;
  if (irrigation.method != field::Method::overhead) return watered;
  for (const risk::NightSet& set : diary.sets) {
    if (set.start != irrigation.start || set.end != irrigation.end || !set.enough) continue;
    watered.wet_until = set.sunrise;
    watered.limit_near = set.close_to_limit;
  }
  return watered;
}

std::optional<Millimetre> depth_over_field(const field::Irrigation& irrigation,
                                           const field::Field& field) {
  if (!irrigation.depth) return std::nullopt;
  const bool one_of_several = irrigation.set > 0 && field.sets > 1;
  return one_of_several ? *irrigation.depth / field.sets : *irrigation.depth;
}

}  // namespace antherd::season
