// Moist air (science §1). Saturation over water, Tetens' form as in FAO-56 (Allen et al. 1998).
#pragma once

#include <optional>

#include "core/units/quantity.hpp"

namespace antherd::weather {

/// Saturation vapour pressure e0 over water.
/// @param t −60…60 °C  @return kPa
/// Source: FAO-56 (Allen et al. 1998) eq. 11. e0(20 °C) = 2.338 kPa.
Kilopascal saturation_pressure(Celsius t);

/// Slope Δ of the saturation curve, kPa/°C. Source: FAO-56 eq. 13. Δ(20 °C) = 0.1447.
double saturation_slope(Celsius t);

/// Actual vapour pressure ea = e0(T) RH/100.
/// @param t −60…60 °C  @param humidity 0…100 %  @return kPa
/// Source: FAO-56 eq. 54. 38 °C, 52 %: 3.445 kPa (example 19, from memory).
Kilopascal vapour_pressure(Celsius t, Percent humidity);

/// VPD = e0(T) − ea, never below 0.
/// @param t −60…60 °C  @param humidity 0…100 %  @return kPa
/// Source: FAO-56 (Allen et al. 1998), the deficit of eq. 53. 38 °C, 52 %: 3.180 kPa.
Kilopascal vapour_pressure_deficit(Celsius t, Percent humidity);

/// Dew point from temperature and humidity; RH is clamped to 1…100 before the logarithm; never
/// above t.
/// @param t −60…60 °C  @param humidity %  @return °C
/// Source: inverse of FAO-56 eq. 11. 20 °C, 50 %: 9.27 °C.
Celsius dew_point(Celsius t, Percent humidity);

/// Relative humidity from temperature and vapour pressure, capped at 100 %.
/// @param t −60…60 °C  @param vapour kPa, not negative  @return %
/// Source: FAO-56 eq. 10. 38 °C, 3.445 kPa: 52 %.
Percent relative_humidity(Celsius t, Kilopascal vapour);

/// Air pressure by elevation, kPa. −500…9000 m. Source: FAO-56 eq. 7. P(1800 m) = 81.8 kPa.
Kilopascal air_pressure(Metre elevation);

/// Psychrometric constant γ, kPa/°C. Source: FAO-56 eq. 8. γ(81.8 kPa) = 0.054.
double psychrometric_constant(Kilopascal pressure);

/// Wet-bulb temperature: solves the psychrometer equation of WMO-No. 8 by bracketing.
/// @param t −40…60 °C  @param humidity %  @param pressure kPa, 30…110
/// @return °C, never above t; nothing when humidity is not above 0
/// Source: WMO-No. 8, e = e0(Tw) − 6.53e-4 (1 + 0.000944 Tw) p (T − Tw) (from memory). About
/// 13.7 °C at 20 °C, 50 % by the fit of Stull 2011; this equation gives 13.84.
std::optional<Celsius> wet_bulb(Celsius t, Percent humidity, Kilopascal pressure);

}  // namespace antherd::weather
