// Which of two readings for one time stands; see sample.hpp.
#include "core/weather/sample.hpp"

#include <algorithm>
#include <tuple>

namespace antherd::weather {
namespace {

auto rank(const Sample& s) {
  return std::tie(s.temperature, s.humidity, s.dew_point, s.rain, s.wind, s.solar, s.wet_minutes);
}

}  // namespace

// A missing value ranks below any number.
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
