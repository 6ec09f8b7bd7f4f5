// What fell between two readings of a rain gauge (science §3). Inside this room only.
// This file must not know hours.
#pragma once

#include <optional>

#include "core/units/quantity.hpp"
#include "core/units/time.hpp"
#include "core/weather/station.hpp"

namespace antherd::weather {

/// A difference across a longer silence than this is not booked, as if the reading were the first:
/// an hour must not depend on a past without end.
constexpr Seconds longest_rain_gap{30 * 3600};

/// What one reading books to its own time.
struct Fall {
  Millimetre amount;
  bool across_gap = false;  // gathered over more than an hour: for the water balance alone
  bool wrong = false;       // out of range: books nothing
};

/// Reads one gauge's readings in time order.
class RainGauge {
 public:
  explicit RainGauge(const Station& station) : station_(station) {}
  /// @param time   as stamped
  /// @param value  raw, mm, by the station's RainMeaning
  Fall read(Instant time, Millimetre value);

 private:
  bool new_day(Instant time);
  const Station& station_;
  std::optional<Instant> last_time_;
  Millimetre last_value_;
  std::optional<Instant> day_end_;  // of the day of the last reading
};

}  // namespace antherd::weather
