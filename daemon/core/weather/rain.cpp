// See rain.hpp.
#include "core/weather/rain.hpp"

#include "core/weather/judge.hpp"

namespace antherd::weather {

/// Whether midnight of the gauge's zone lies between the last reading and this one.
bool RainGauge::new_day(Instant time) {
  // A reading stamped 00:00 at the end of what it measured is the ended day's total; one that
  // starts there is the new day's.
  if (station_.stamp == Stamp::instant) time -= Seconds{1};
  if (station_.stamp == Stamp::end) time -= station_.interval;
  if (day_end_ && time < *day_end_) return false;
  const CivilDay day = station_.rain_zone.day_of(time);
  const bool known = day_end_.has_value();
  day_end_ = station_.rain_zone.start_of(day + std::chrono::days{1});
  return known;
}

Fall RainGauge::read(Instant time, Millimetre value) {
  Fall fall;
  if (value.value < rain_range.least) {
    fall.wrong = true;
    return fall;
  }
  if (station_.rain_meaning == RainMeaning::since_last) {
    fall.amount = value;
  } else {
    const bool day_began = station_.rain_meaning == RainMeaning::day_total && new_day(time);
    if (last_time_ && time - *last_time_ <= longest_rain_gap) {
      const bool reset = day_began || value < last_value_;
      fall.amount = reset ? value : value - last_value_;
      fall.across_gap = time - *last_time_ > one_hour;
    }
    last_time_ = time;
    last_value_ = value;
  }
  if (!rain_range.holds(fall.amount.value)) fall = Fall{.amount = {}, .wrong = true};
  return fall;
}

}  // namespace antherd::weather
