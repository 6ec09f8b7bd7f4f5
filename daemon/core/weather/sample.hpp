// One reading of a station, raw, in the core's units. What is missing is missing; nothing here
// judges. A station's readings arrive in any order and more than once.
#pragma once

#include <compare>
#include <optional>
#include <vector>

#include "core/units/quantity.hpp"
#include "core/units/time.hpp"

namespace antherd::weather {

struct Sample {
  Instant time;                        // as the station stamped it, UTC
  std::optional<Celsius> temperature;  // raw
  std::optional<Percent> humidity;     // raw, may exceed 100
  std::optional<Celsius> dew_point;    // where the station reports it instead of humidity
  std::optional<Millimetre> rain;      // raw value, see RainMeaning
  std::optional<MetrePerSecond> wind;  // at the station's wind height
  std::optional<WattPerSquareMetre> solar;
  std::optional<double> wet_minutes;  // leaf wetness sensor, minutes wet in an hour's share

  bool operator==(const Sample&) const = default;
  bool empty() const {
    return !temperature && !humidity && !dew_point && !rain && !wind && !solar && !wet_minutes;
  }
};

/// Whether `a` stands before `b` when one station sent both for one time: a plausible temperature
/// before an impossible one (a slip of the logger, another unit), the one with fewer impossible
/// values beside it, then the warmer, then the more humid (science §3), whatever came first. What
/// is impossible the ranges of quality control say. A strict order of single samples, so that the
/// outcome does not depend on arrival; ties beyond are broken by the remaining values.
bool stands_before(const Sample& a, const Sample& b);

/// The samples that stand, one per time, in time order, whatever order they came in.
std::vector<Sample> standing(std::vector<Sample> samples);

}  // namespace antherd::weather
