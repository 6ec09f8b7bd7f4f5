// Radiation and evaporation terms of one hour (FAO-56 hourly form; science §7 and §9).
#pragma once

#include <optional>

#include "core/units/quantity.hpp"
#include "core/units/time.hpp"
#include "core/weather/station.hpp"

namespace antherd::weather {

/// What the energy terms of an hour need. Radiation in MJ m⁻² h⁻¹.
struct HourAir {
  Celsius temperature;
  Percent humidity;        // 0…100
  MetrePerSecond wind{2};  // at 2 m
  double solar = 0.0;      // Rs, MJ m⁻² h⁻¹
  double clear_sky = 0.0;  // Rso
  Metre elevation{0};
};

/// Extraterrestrial radiation of an hour by the altitude at its middle:
/// Ra = 4.92 dr sin(altitude), not below 0, MJ m⁻² h⁻¹ (science §7; dr by FAO-56 eq. 23).
double extraterrestrial_radiation(HourStart hour, const Place& place);

/// Rso = (0.75 + 2e-5 z) Ra, MJ m⁻² h⁻¹. Source: FAO-56 eq. 37.
double clear_sky_radiation(double extraterrestrial, Metre elevation);

/// Rs without a sensor: kRs √range Ra; without 24 h of range 0.75 Ra (science §7; FAO-56 eq. 50).
double estimated_solar(double extraterrestrial, std::optional<CelsiusDifference> range_24h,
                       double coefficient);

/// Long-wave radiation that a surface at air temperature loses to the sky in an hour, MJ m⁻² h⁻¹:
/// σ T⁴ (0.34 − 0.14 √ea) (1.35 Rs/Rso − 0.35). Source: FAO-56 eq. 39 with 2.043e-10 and T +
/// 273.16. 15 °C, 90 %, clear: 0.2346.
/// @param clearness  Rs/Rso, 0.3…1
double net_long_wave(Celsius temperature, Percent humidity, double clearness);

/// Net radiation Rn = 0.77 Rs − Rnl of an hour, Rnl by FAO-56 eq. 39 with 2.043e-10 and T + 273.16,
/// Rs/Rso clamped to 0.3…1 and 0.8 where Rso ≤ 0.05 (science §7), MJ m⁻² h⁻¹.
double net_radiation(const HourAir& air);

/// Potential drying of a wet leaf, mm in the hour, never below 0: Penman without surface
/// resistance (science §7).
Millimetre potential_drying(const HourAir& air);

/// Reference evapotranspiration of an hour, mm. Source: FAO-56 eq. 53; may be slightly negative at
/// night and is then 0. Example 19: 0.63 mm/h at 14–15 h (from memory).
Millimetre reference_evapotranspiration(const HourAir& air);

/// Wind at 2 m from wind at another height. Height above 0.1 m. Source: FAO-56 eq. 47.
MetrePerSecond wind_at_2m(MetrePerSecond wind, Metre height);

}  // namespace antherd::weather
