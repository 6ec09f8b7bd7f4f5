// One type per unit. A temperature is a point; a difference of temperatures is another type.
// This file must not know what any quantity is used for.
#pragma once

#include <compare>

namespace antherd {

/// A number of one unit. Quantities of one unit add, subtract, scale and compare; of two units
/// they do not mix. `value` is the plain number in the unit that the type names.
template <class Unit>
struct Quantity {
  double value = 0.0;

  constexpr Quantity() = default;
  constexpr explicit Quantity(double number) : value(number) {}

  constexpr auto operator<=>(const Quantity&) const = default;
  constexpr Quantity& operator+=(Quantity other) { return value += other.value, *this; }
  constexpr Quantity& operator-=(Quantity other) { return value -= other.value, *this; }
  friend constexpr Quantity operator+(Quantity a, Quantity b) {
    return Quantity(a.value + b.value);
  }
  friend constexpr Quantity operator-(Quantity a, Quantity b) {
    return Quantity(a.value - b.value);
  }
  friend constexpr Quantity operator-(Quantity a) { return Quantity(-a.value); }
  friend constexpr Quantity operator*(Quantity a, double k) { return Quantity(a.value * k); }
  friend constexpr Quantity operator*(double k, Quantity a) { return Quantity(a.value * k); }
  friend constexpr Quantity operator/(Quantity a, double k) { return Quantity(a.value / k); }
  friend constexpr double operator/(Quantity a, Quantity b) { return a.value / b.value; }
};

using CelsiusDifference = Quantity<struct CelsiusDifferenceUnit>;    // K
using Percent = Quantity<struct PercentUnit>;                        // relative humidity, %
using Kilopascal = Quantity<struct KilopascalUnit>;                  // vapour pressure, kPa
using Millimetre = Quantity<struct MillimetreUnit>;                  // water, mm
using Metre = Quantity<struct MetreUnit>;                            // elevation, height, m
using MetrePerSecond = Quantity<struct MetrePerSecondUnit>;          // wind, m/s
using WattPerSquareMetre = Quantity<struct WattPerSquareMetreUnit>;  // solar radiation, W/m²
using Degree = Quantity<struct DegreeUnit>;            // latitude north, longitude east, °
using ThermalTime = Quantity<struct ThermalTimeUnit>;  // development, °C·d
using DegreeHour = Quantity<struct DegreeHourUnit>;    // heat above a threshold, °C·h

/// Air temperature, °C. A point on a scale: two of them subtract to a difference, they do not add.
struct Celsius {
  double value = 0.0;

  constexpr Celsius() = default;
  constexpr explicit Celsius(double degrees) : value(degrees) {}

  constexpr auto operator<=>(const Celsius&) const = default;
  friend constexpr CelsiusDifference operator-(Celsius a, Celsius b) {
    return CelsiusDifference(a.value - b.value);
  }
  friend constexpr Celsius operator+(Celsius a, CelsiusDifference d) {
    return Celsius(a.value + d.value);
  }
  friend constexpr Celsius operator-(Celsius a, CelsiusDifference d) {
    return Celsius(a.value - d.value);
  }
};

}  // namespace antherd
