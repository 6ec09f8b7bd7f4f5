// The soil water of a season, booked once a civil day (science §9). Context for letters; it opens
// no alert. It must not know heat or humidity.
#pragma once

#include <optional>

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
  std::optional<Millimetre> last_eto;  // of the last day that had one: stands in for a gap
  std::optional<double> ks;            // of the last whole day
};

/// One hour. @param eto  hourly, where wind and solar are measured
/// At the day's end the day is booked: hourly ETo where 20 hours have it (FAO-56 eq. 53), else
/// Hargreaves (eq. 52), else the last day's.
void advance(WaterBalance& water, const HourContext& hour, std::optional<Millimetre> eto);

}  // namespace antherd::season
