// Moist air; see air.hpp for sources. One saturation curve serves forward and inverse formulas.
// This file must not know where a temperature was measured.
#include "core/weather/air.hpp"

#include <algorithm>
#include <cmath>

namespace antherd::weather {

Kilopascal saturation_pressure(Celsius t) {
  return Kilopascal(0.6108 * std::exp(17.27 * t.value / (t.value + 237.3)));
}

double saturation_slope(Celsius t) {
  const double shifted = t.value + 237.3;
  return 4098.0 * saturation_pressure(t).value / (shifted * shifted);
}

Kilopascal vapour_pressure(Celsius t, Percent humidity) {
  return saturation_pressure(t) * (humidity.value / 100.0);
}

Kilopascal vapour_pressure_deficit(Celsius t, Percent humidity) {
  return std::max(Kilopascal(0.0), saturation_pressure(t) - vapour_pressure(t, humidity));
}

Celsius dew_point(Celsius t, Percent humidity) {
  const Percent bounded(std::clamp(humidity.value, 1.0, 100.0));
  const double log_ratio = std::log(vapour_pressure(t, bounded).value / 0.6108);
  return std::min(t, Celsius(237.3 * log_ratio / (17.27 - log_ratio)));
}

Percent relative_humidity(Celsius t, Kilopascal vapour) {
  return Percent(std::min(100.0, 100.0 * (vapour / saturation_pressure(t))));
}

Kilopascal air_pressure(Metre elevation) {
  return Kilopascal(101.3 * std::pow((293.0 - 0.0065 * elevation.value) / 293.0, 5.26));
}

double psychrometric_constant(Kilopascal pressure) { return 0.665e-3 * pressure.value; }

std::optional<Celsius> wet_bulb(Celsius t, Percent humidity, Kilopascal pressure) {
  if (!(humidity.value > 0.0)) return std::nullopt;
  if (humidity.value >= 100.0) return t;
  const double vapour = vapour_pressure(t, humidity).value;
  // What the psychrometer would show too much of, were `bulb` its wet temperature: rises with it.
  const auto excess = [&](double bulb) {
    const double coefficient = 6.53e-4 * (1.0 + 0.000944 * bulb);
    return saturation_pressure(Celsius(bulb)).value -
           coefficient * pressure.value * (t.value - bulb) - vapour;
  };
  // The dew point is never above the wet bulb; below 1 % it is clamped, so go far under it.
  double low = humidity.value >= 1.0 ? dew_point(t, humidity).value : t.value - 80.0;
  double high = t.value;
  for (int step = 0; step < 50; ++step) {
    const double middle = 0.5 * (low + high);
    (excess(middle) < 0.0 ? low : high) = middle;
  }
  return Celsius(0.5 * (low + high));
}

}  // namespace antherd::weather
