// See leaf.hpp for sources. This file must not know what is wet, nor why.
#include "core/weather/leaf.hpp"

#include <algorithm>
#include <chrono>
#include <cmath>
#include <numeric>

#include "core/weather/air.hpp"

namespace antherd::weather {
namespace {

constexpr double high_sun = 4.92 * 0.29552;  // Ra at an altitude of 0.3 rad, MJ m⁻² h⁻¹
constexpr std::size_t hours_remembered = 3;

constexpr double water_of_energy = 0.408;              // mm per MJ/m² (FAO-56 eq. 20)
constexpr double hourly_stefan_boltzmann = 2.043e-10;  // MJ m⁻² h⁻¹ K⁻⁴ (FAO-56 p. 74)
constexpr double seconds_per_hour = 3600.0;
constexpr double leaf_width = 0.05;  // m
constexpr double wind_at_leaf = 0.42;  // of the wind at 2 m: ln((h−d)/z0) / ln((2−d)/z0), h = 1 m,
                                       // d = 2h/3, z0 = 0.123 h (FAO-56 box 4)
constexpr double stillest = 0.5;  // m/s at 2 m
constexpr double sun_absorbed = 0.5 * (1.0 + 0.23);
constexpr double vapour_to_heat = 0.93;  // resistance of a laminar boundary layer

/// Heat that a cubic metre of air holds, MJ m⁻³ K⁻¹. Source: FAO-56 box 6 and eq. 8.
double heat_capacity(const HourAir& air) {
  const double density =
      air_pressure(air.elevation).value / (0.287 * 1.01 * (air.temperature.value + 273.0));
  return 1.013e-3 * density;
}

}  // namespace

void look_up(Sky& sky, HourStart hour, const HourAir& air, double extraterrestrial) {
  if (extraterrestrial < high_sun || air.clear_sky <= 0.0) return;
  if (sky.clearness.size() == hours_remembered) sky.clearness.erase(sky.clearness.begin());
  sky.clearness.push_back(std::clamp(air.solar / air.clear_sky, 0.3, 1.0));
  sky.seen = hour;
}

double clearness_at(const Sky& sky, HourStart hour) {
  constexpr double not_known = 0.8;
  if (!sky.seen || hour - *sky.seen > std::chrono::hours{24}) return not_known;
  return std::accumulate(sky.clearness.begin(), sky.clearness.end(), 0.0) /
         static_cast<double>(sky.clearness.size());
}

Millimetre leaf_exchange(const HourAir& air, double clearness) {
  const double kelvin = air.temperature.value + 273.16;
  const double capacity = seconds_per_hour * heat_capacity(air);
  const double wind = wind_at_leaf * std::max(stillest, air.wind.value);
  const double heat = 2.0 / (307.0 * std::sqrt(leaf_width / wind));  // m/s, both sides
  const double radiative = 8.0 * hourly_stefan_boltzmann * kelvin * kelvin * kelvin / capacity;
  const double both = heat + radiative;
  const double vapour = heat / vapour_to_heat;

  const double net =
      sun_absorbed * air.solar - net_long_wave(air.temperature, air.humidity, clearness);
  const double slope = saturation_slope(air.temperature);
  const double gamma = psychrometric_constant(air_pressure(air.elevation));
  const double deficit = vapour_pressure_deficit(air.temperature, air.humidity).value;
  return Millimetre(water_of_energy * (slope * net + capacity * both * deficit) /
                    (slope + gamma * both / vapour));
}

}  // namespace antherd::weather
