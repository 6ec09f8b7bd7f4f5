// Which of two readings for one time stands; see sample.hpp.
#include "core/weather/sample.hpp"

#include <algorithm>
#include <tuple>

#include "core/weather/judge.hpp"

namespace antherd::weather {
namespace {

template <class Value>
bool impossible(const std::optional<Value>& value, const Range& range) {
  if (!value) return false;
  if constexpr (std::is_same_v<Value, double>) {
    return !range.holds(*value);
  } else {
    return !range.holds(value->value);
  }
}

/// How many of the other values no air has. Of rain nothing is known before its meaning is.
int impossible_others(const Sample& s) {
  return impossible(s.humidity, humidity_range) + impossible(s.dew_point, dew_point_range) +
         impossible(s.wind, wind_range) + impossible(s.solar, solar_range) +
         impossible(s.wet_minutes, wet_minutes_range);
}

/// A missing value ranks below any number, a missing temperature below an impossible one: that one
/// leaves its flag.
auto rank(const Sample& s) {
  const bool plausible = s.temperature && !impossible(s.temperature, temperature_range);
  return std::tuple(s.temperature.has_value(), plausible, -impossible_others(s), s.temperature,
                    s.humidity, s.dew_point, s.rain, s.wind, s.solar, s.wet_minutes);
}

}  // namespace

bool stands_before(const Sample& a, const Sample& b) { return rank(b) < rank(a); }

std::vector<Sample> standing(std::vector<Sample> samples) {
  std::sort(samples.begin(), samples.end(), [](const Sample& a, const Sample& b) {
    return a.time != b.time ? a.time < b.time : stands_before(a, b);
  });
  const auto same_time = [](const Sample& a, const Sample& b) { return a.time == b.time; };
  samples.erase(std::unique(samples.begin(), samples.end(), same_time), samples.end());
  return samples;
}

}  // namespace antherd::weather
