// The soil water of a season, booked once a civil day (science §9). Context for letters; it opens
// no alert. It must not know heat or humidity.
#pragma once

#include <optional>
#include <vector>

#include "core/risk/water.hpp"
#include "core/season/hazards.hpp"

namespace antherd::season {

/// Carried from hour to hour. Without a soil in the settings there is no account.
struct WaterBalance {
  std::optional<risk::WaterAccount> account;
  bool asked = false;           // the settings were looked at
  int hours = 0;                // with temperature, this day
  int eto_hours = 0;            // with hourly reference evapotranspiration
  double eto = 0;               // mm, their sum
  double extraterrestrial = 0;  // MJ m⁻² of the day
  std::optional<Celsius> highest, lowest;
  Millimetre rain{0};
  std::optional<Millimetre> last_eto;       // of the last day that had one: stands in for a gap
  std::optional<double> ks;                 // of the last whole day
  std::optional<Celsius> sunny_hottest;     // of today's hours with more than 400 W/m²
  std::optional<Kilopascal> sunny_deficit;  // vapour pressure deficit of that hour
};

/// One hour. @param eto  hourly, where wind and solar are measured
/// At the day's end the day is booked: hourly ETo where 20 hours have it (FAO-56 eq. 53), else
/// Hargreaves (eq. 52), else the last day's.
/// @return what the irrigations did that were booked with this hour
std::vector<Watered> advance(WaterBalance& water, const HourContext& hour,
                             std::optional<Millimetre> eto);

/// An irrigation as far as its night tells, without the soil's side.
Watered night_of(const field::Irrigation& irrigation, const DiaryView& diary);

/// Mean depth over the whole field, mm: an entry of one set waters its share of the field. 12 mm on
/// set 1 of 3: 4 mm. Nothing where the depth is unknown. Source: common practice, equal sets.
std::optional<Millimetre> depth_over_field(const field::Irrigation& irrigation,
                                           const field::Field& field);

}  // namespace antherd::season
