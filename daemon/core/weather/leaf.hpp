// The water that a wet leaf at the top of the crop takes from the air at night and gives back in
// the morning: its energy balance, and the sky it looks into. Weather alone: what is wet, and what
// that means, is decided elsewhere.
#pragma once

#include <optional>
#include <vector>

#include "core/units/quantity.hpp"
#include "core/units/time.hpp"
#include "core/weather/evaporation.hpp"

namespace antherd::weather {

/// How clear the sky was when the sun last stood high enough to tell: at night, and while the sun
/// is low, that is the best a station knows of clouds. A plain value, carried from hour to hour.
struct Sky {
  std::vector<double> clearness;  // Rs/Rso of the last three hours with a high sun, 0.3…1
  std::optional<HourStart> seen;  // the last of them
};

/// Notes an hour's Rs/Rso where the sun stands at 0.3 rad (17°) or higher.
/// @param extraterrestrial  Ra of the hour, MJ m⁻² h⁻¹
void look_up(Sky& sky, HourStart hour, const HourAir& air, double extraterrestrial);

/// Rs/Rso for the long-wave balance of an hour, 0.3…1: the mean of the last three hours with a high
/// sun (at night those before sunset); 0.8 where there was none in the last 24 h.
/// Source: FAO-56 p. 75 (the 2–3 h before sunset stand for the night); ASCE-EWRI 2005 eq. 46 for
/// the sun above 0.3 rad (from memory). 0.8 as in science §7.
double clearness_at(const Sky& sky, HourStart hour);

/// Water that a wet leaf at the top of the crop gives to the air in an hour, mm per leaf area:
/// above 0 it dries, below 0 dew forms on it. Both sides exchange heat and vapour, the upper one
/// alone loses heat to the sky; the leaf is level, 5 cm wide, in a crop of 1 m.
///   Rni = 0.5 (1 + 0.23) Rs − Rnl: half of the sun's radiation is absorbed, from above and, sent
///     back by the crop, from below; Rnl by FAO-56 eq. 39 at air temperature
///   rH = 307 √(d / u) / 2 s/m, rV = 0.93 rH, u = 0.42 u2 (log profile to the top of the crop; u2
///     not below 0.5 m/s, FAO-56 p. 63), rR = ρ cp / (8 σ T³), rHR = rH and rR in parallel
///   E = 0.408 (Δ Rni + 3600 ρ cp (e0 − ea) / rHR) / (Δ + γ rV / rHR)
/// Source: energy balance of a leaf, Monteith 1957, Pedro & Gillespie 1982; the form with
/// isothermal net radiation, Jones 1992; 307 √(d/u), Sentelhas et al. 2006; 0.5, Monteith &
/// Unsworth 1990 (all from memory). Width of the leaf and height of the crop are judgements. At
/// night, 15 °C, 90 %, 1 m/s, sea level: clear sky −0.0098 mm, overcast (0.3) +0.0394 mm; at 100 %
/// and a clear sky −0.0491 mm: published dew rates stay below 0.07 mm/h (Monteith 1957; Garratt &
/// Segal 1988, from memory).
/// @param clearness  Rs/Rso for the long-wave balance, 0.3…1
Millimetre leaf_exchange(const HourAir& air, double clearness);

}  // namespace antherd::weather
