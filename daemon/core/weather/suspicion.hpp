// What shows only over days: a column in the wrong unit, swapped columns, a clock that is off, a
// hygrometer that never reaches its top or never leaves it. A pure function of one station's hours,
// each hour judged by itself and the hours before it, so that a replay says what was said.
// This file must not know fields, crops or letters.
#pragma once

#include <memory>
#include <optional>
#include <span>
#include <vector>

#include "core/weather/hour.hpp"

namespace antherd::weather {

/// The hours with what was found written into them as flags; without a finding, the same hours.
/// - Temperature that cannot be air temperature (`fahrenheit_as_celsius`, `celsius_as_fahrenheit`,
///   `columns_swapped`, or `not_air_temperature` until there is a day to tell which) is wrong from
///   the first hour that proves it: it leaves the hour, which then counts as not measured. Swapped
///   columns take the humidity too.
/// - `clock_off` (value: hours by which the stamps are late, negative: early) and the two findings
///   about humidity (value: the highest reading, %) are suspect: the values are used.
/// @param hours  one station's hours as gathered, in time order, gaps allowed
std::vector<Hour> with_suspicions(std::vector<Hour> hours, const Station& station);

/// The same hour by hour: what was seen so far of one station. A copy goes on from where it was
/// made, so that a new hour does not cost a season.
class Suspector {
 public:
  explicit Suspector(const Station& station);
  Suspector(const Suspector& other);
  Suspector& operator=(const Suspector& other);
  ~Suspector();
  /// Writes what is found into the hour. Hours come in time order, each once.
  void judge(Hour& hour);

 private:
  struct Watchers;
  std::unique_ptr<Watchers> watchers_;
};

/// Limits of what air does. None of them is reached on a farm, all of them by a wrong unit.
/// Dew point beyond any that was measured over land: about 35 °C on the Persian Gulf, July 2003
/// (from memory).
constexpr double dew_point_never_seen = 36.0;  // °C
/// Such a dew point speaks against the thermometer only in air hotter than this: below it a
/// hygrometer that reads high is the likelier fault, and the heat may be real.
constexpr double heat_hardly_seen = 44.0;  // °C
/// A day's coolest reading on a farm: the warmest nights ever measured, on desert coasts, stayed
/// above 42 °C (from memory), but no place where quinoa is sown has one of 36.
constexpr double night_never_seen = 36.0;   // °C
constexpr double night_hardly_seen = 33.0;  // °C, together with three hours beyond 55
constexpr double night_common = 28.0;       // °C: one reading below speaks for °C
/// Air with the sun 6° and more below the horizon; only the hottest deserts have come near.
constexpr double dark_heat_never_seen = 48.0;  // °C
/// Air of 45 °C read as °F: below it for ten days of long light is no growing season.
constexpr double summer_never_seen = 7.0;  // °C

/// How far two stations have drifted apart: the mean of (a − b) over the newest 14 days less that
/// over the 14 days before. Elevation, shade and slope are in both and cancel. Hours count that are
/// valid at both.
struct Drift {
  double temperature = 0.0;  // °C
  double humidity = 0.0;     // %
  int hours_before = 0, hours_after = 0;
  /// Worth a word: above 1.5 °C or 8 % (common practice: twice and more of what sensors differ by).
  bool large() const;
};
/// @param until  end of the newest 14 days
/// @return nothing with fewer than 168 common hours in either half
/// Source: the double difference of neighbouring stations (common practice); the limits are a
/// judgement. By hand: a − b = 0.5 °C for 14 days, then 2.5: drift 2.0 °C.
std::optional<Drift> drift_between(std::span<const Hour> a, std::span<const Hour> b, Instant until);

}  // namespace antherd::weather
