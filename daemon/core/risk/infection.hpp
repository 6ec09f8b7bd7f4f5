// One humid day of downy mildew's weather (science §8): infection-favourable wetness, dry-out,
// heat that kills spores. It must not know days before or after.
#pragma once

#include <optional>
#include <vector>

#include "core/risk/rules.hpp"
#include "core/units/quantity.hpp"
#include "core/units/time.hpp"
#include "core/weather/station.hpp"

namespace antherd::risk {

/// Hours of wetness that infection needs at a constant temperature, h; nothing outside (Tn, Tx).
/// f = ((Tx−T)/(Tx−To)) ((T−Tn)/(To−Tn))^((To−Tn)/(Tx−To)); W = min(Wmin/f, Wmax).
/// Source: Magarey, Sutton & Thayer 2005; the parameters are surrogates from relatives of
/// Peronospora variabilis (science §8). W(20 °C) = 5.015 h.
std::optional<double> wetness_needed(Celsius t, const HumidRules& rules);

/// One hour as a humid day sees it.
struct DayHour {
  HourStart start;
  bool valid = false;      // temperature and humidity measured
  double temperature = 0;  // °C
  double humidity = 0;     // %
  bool wet = false;
  bool water = false;  // wet by water
};

struct DayWetness {
  int valid_hours = 0;
  int wet_hours = 0;
  double mean_temperature = 0;  // of the valid hours
  double infection = 0;         // I, largest of the day's periods
  bool water = false;           // that period held water
  bool dry_out = false;
  bool hot = false;  // sunrise to 18:00 solar: heat that kills spores
};

/// Evaluates one humid day, 18:00→18:00 mean solar time, from its hours in time order.
/// @param sunrise  of the day on which it ends; nothing where the sun does not rise: then hours
///                 before water never count
/// @param longitude  degrees east, for solar time
/// Source: science §8 (fresh spores fly after sunrise: Hildebrand & Sutton 1982; Bashi & Aylor
/// 1983; Scherm et al. 1995; heat: as summarised by Gilles et al. 2004).
DayWetness evaluate_day(const std::vector<DayHour>& hours, std::optional<Instant> sunrise,
                        Degree longitude, const HumidRules& rules);

/// The humid day that an hour belongs to, by its middle; it bears the date on which it ends.
CivilDay humid_day_of(HourStart hour, Degree longitude);
/// Whether an hour is the last of its humid day.
bool ends_humid_day(HourStart hour, Degree longitude);

}  // namespace antherd::risk
