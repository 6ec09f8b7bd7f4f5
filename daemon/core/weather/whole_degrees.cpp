// See whole_degrees.hpp.
#include "core/weather/whole_degrees.hpp"

#include <cmath>

namespace antherd::weather {
namespace {

constexpr std::size_t fewest_values = 12;
constexpr Seconds look_back{24 * 3600};
constexpr double celsius_slack = 1e-6;
constexpr double fahrenheit_slack = 0.02;  // °F: stations round their °C to one decimal or two

/// How far a number is from the nearest whole one.
double broken_part(double value) {
  const double below = static_cast<double>(static_cast<long long>(value));
  const double part = std::abs(value - below);
  return part > 0.5 ? 1.0 - part : part;
}

}  // namespace

bool WholeDegrees::in(HourStart hour) {
  const Instant since = Instant(hour) - look_back;
  for (; next_ < series_.size() && series_[next_].time - shift_ < end_of(hour); ++next_) {
    const Judged& judged = series_[next_];
    if ((judged.marks & mark_out_of_range) != 0) continue;
    ++values_;
    // Windows begin with an hour: one broken value an hour is enough to know.
    const Instant time = judged.time - shift_;
    if (last_broken_celsius_ < Instant(hour) && broken_part(judged.value) > celsius_slack) {
      last_broken_celsius_ = time;
    }
    if (last_broken_fahrenheit_ < Instant(hour) &&
        broken_part(judged.value * 1.8 + 32.0) >= fahrenheit_slack) {
      last_broken_fahrenheit_ = time;
    }
  }
  for (; oldest_ < next_ && series_[oldest_].time - shift_ < since; ++oldest_) {
    if ((series_[oldest_].marks & mark_out_of_range) == 0) --values_;
  }
  if (values_ < fewest_values) return false;
  return last_broken_celsius_ < since || last_broken_fahrenheit_ < since;
}

}  // namespace antherd::weather
