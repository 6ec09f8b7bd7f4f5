// Whether a thermometer reports whole degrees only (science §6 asks). Inside this room only.
// This file must not know why it matters.
#pragma once

#include <cstddef>

#include "core/units/time.hpp"
#include "core/weather/judge.hpp"

namespace antherd::weather {

/// Looks at a temperature series hour by hour, in time order.
class WholeDegrees {
 public:
  /// @param shift  what is taken off a value's time before it is put into an hour
  WholeDegrees(const Series& series, Seconds shift) : series_(series), shift_(shift) {}

  /// True when the hour and the 24 h before hold at least 12 plausible temperatures and all are
  /// whole °C, or all whole °F. Ask for hours in time order.
  bool in(HourStart hour);

 private:
  const Series& series_;
  Seconds shift_;
  std::size_t oldest_ = 0, next_ = 0;  // the window is [oldest_, next_)
  std::size_t values_ = 0;             // plausible ones in it
  Instant last_broken_celsius_ = Instant::min();
  Instant last_broken_fahrenheit_ = Instant::min();
};

}  // namespace antherd::weather
