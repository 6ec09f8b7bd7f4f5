// See flowers.hpp.
#include "core/crop/flowers.hpp"

#include <algorithm>
#include <cmath>

namespace antherd::crop {
namespace {

double density(double t) { return 0.00558 * std::pow(t, 0.63) - 0.000969 * t - 0.00383; }
double integral(double t) {  // of density, from 0
  return 0.00558 * std::pow(t, 1.63) / 1.63 - 0.000969 * t * t / 2.0 - 0.00383 * t;
}

/// The first positive t: density is negative below it and positive up to 100.
double find_first_flower() {
  double low = 0.0, high = 5.0;
  for (int i = 0; i < 60; ++i) {
    const double middle = (low + high) / 2.0;
    (density(middle) > 0 ? high : low) = middle;
  }
  return high;
}

}  // namespace

double share_opened(double percent_of_duration) {
  static const double first = find_first_flower();
  static const double whole = integral(100.0) - integral(first);
  const double x = std::clamp(percent_of_duration, first, 100.0);
  return (integral(x) - integral(first)) / whole;
}

}  // namespace antherd::crop
