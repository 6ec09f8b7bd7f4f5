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
void add_irrigation(risk::WaterDay& day, const HourContext& hour) {
  const Instant end = end_of(hour.air.start);
  for (const field::Irrigation& irrigation : hour.diary.irrigations) {
    if (irrigation.start >= end) break;
    if (irrigation.end > end ||
        hour.plan.calendar.day_of(irrigation.end - Seconds{1}) != hour.day) {
      continue;
    }
    if (irrigation.depth) {
      day.irrigation += *irrigation.depth;
    } else {
      day.irrigation_unknown = true;
    }
  }
}

void end_day(WaterBalance& water, const HourContext& hour) {
  const auto reference = reference_of(water);
  risk::WaterDay day;
  day.stage = hour.crop.stage(hour.plan);
  day.reference = reference.value_or(Millimetre(0));
  day.rain = water.rain;
  add_irrigation(day, hour);
  // A stage that is not known gives no crop coefficient, and no reference gives no use.
  water.ks.reset();
  if (water.account && hour.crop.known() && reference) {
    water.ks = risk::book_day(*water.account, day);
  }
  water.last_eto = reference;
  water.hours = water.eto_hours = 0;
  water.eto = water.extraterrestrial = 0;
  water.highest.reset();
  water.lowest.reset();
  water.rain = Millimetre(0);
}

}  // namespace

void advance(WaterBalance& water, const HourContext& hour, std::optional<Millimetre> eto) {
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
  if (hour.day_ends) end_day(water, hour);
}

}  // namespace antherd::season
