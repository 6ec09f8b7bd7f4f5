// Radiation and evaporation terms of one hour; see evaporation.hpp for sources.
// This file must not know what is wet, nor why.
#include "core/weather/evaporation.hpp"

#include <algorithm>
#include <chrono>
#include <cmath>
#include <numbers>

#include "core/failures/result.hpp"
#include "core/weather/air.hpp"
#include "core/weather/sun.hpp"

namespace antherd::weather {
namespace {

constexpr double water_of_energy = 0.408;              // mm per MJ/m² (FAO-56 eq. 20)
constexpr double hourly_stefan_boltzmann = 2.043e-10;  // MJ m⁻² h⁻¹ K⁻⁴ (FAO-56 p. 74)

/// Relative distance earth–sun, inverse. Source: FAO-56 eq. 23, by the day of the solar year.
double inverse_distance(Instant at, const Place& place) {
  using namespace std::chrono;
  const auto day = floor<days>(solar_time(at, place.longitude));
  const year_month_day date{day};
  const auto first = local_days{date.year() / January / 1};
  const double number = static_cast<double>((day - first).count() + 1);
  return 1.0 + 0.033 * std::cos(2.0 * std::numbers::pi / 365.0 * number);
}

/// What Penman's two forms share; they differ in the denominator alone.
struct PenmanTerms {
  double numerator = 0.0;
  double slope = 0.0;
  double gamma = 0.0;
};

PenmanTerms penman_terms(const HourAir& air) {
  const double net = net_radiation(air);
  const double ground = (air.solar > 0.0 ? 0.1 : 0.5) * net;  // FAO-56 eq. 45, 46
  PenmanTerms terms;
  terms.slope = saturation_slope(air.temperature);
  terms.gamma = psychrometric_constant(air_pressure(air.elevation));
  const double deficit = vapour_pressure_deficit(air.temperature, air.humidity).value;
  terms.numerator = water_of_energy * terms.slope * (net - ground) +
                    terms.gamma * 37.0 / (air.temperature.value + 273.0) * air.wind.value * deficit;
  return terms;
}

}  // namespace

double extraterrestrial_radiation(HourStart hour, const Place& place) {
  const Instant middle = middle_of(hour);
  const double altitude = sun_altitude(middle, place).value * std::numbers::pi / 180.0;
  return std::max(0.0, 4.92 * inverse_distance(middle, place) * std::sin(altitude));
}

double clear_sky_radiation(double extraterrestrial, Metre elevation) {
  return (0.75 + 2e-5 * elevation.value) * extraterrestrial;
}

double estimated_solar(double extraterrestrial, std::optional<CelsiusDifference> range_24h,
                       double coefficient) {
  if (!range_24h) return 0.75 * extraterrestrial;
  return coefficient * std::sqrt(std::max(0.0, range_24h->value)) * extraterrestrial;
}

double net_long_wave(Celsius temperature, Percent humidity, double clearness) {
  const double kelvin = temperature.value + 273.16;
  const double vapour = vapour_pressure(temperature, humidity).value;
  return hourly_stefan_boltzmann * kelvin * kelvin * kelvin * kelvin *
         (0.34 - 0.14 * std::sqrt(vapour)) * (1.35 * clearness - 0.35);
}

double net_radiation(const HourAir& air) {
  const double clearness =
      air.clear_sky <= 0.05 ? 0.8 : std::clamp(air.solar / air.clear_sky, 0.3, 1.0);
  return 0.77 * air.solar - net_long_wave(air.temperature, air.humidity, clearness);
}

Millimetre potential_drying(const HourAir& air) {
  const PenmanTerms terms = penman_terms(air);
  return Millimetre(std::max(0.0, terms.numerator / (terms.slope + terms.gamma)));
}

Millimetre reference_evapotranspiration(const HourAir& air) {
  const PenmanTerms terms = penman_terms(air);
  const double resistance = terms.gamma * (1.0 + 0.34 * air.wind.value);
  return Millimetre(std::max(0.0, terms.numerator / (terms.slope + resistance)));
}

MetrePerSecond wind_at_2m(MetrePerSecond wind, Metre height) {
  ANTHERD_CHECK(height.value >= 0.1);
  if (height.value == 2.0) return wind;  // the equation's rounded constants give 1.0002 here
  return wind * (4.87 / std::log(67.8 * height.value - 5.42));
}

}  // namespace antherd::weather
