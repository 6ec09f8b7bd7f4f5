// Small builders of samples for the tests of quality control and hours.
#pragma once

#include <algorithm>
#include <chrono>
#include <initializer_list>
#include <optional>
#include <vector>

#include "core/weather/hour.hpp"
#include "support/catch.hpp"

namespace readings {

using namespace antherd;
using namespace antherd::weather;
using namespace std::chrono_literals;
using std::chrono::days;
using std::chrono::hours;
using std::chrono::minutes;

inline const Instant start = std::chrono::sys_days{std::chrono::year{2026} / 7 / 10};

inline Station station_every(Seconds interval) {
  Station station;
  station.name = "bench";
  station.interval = interval;
  return station;
}

inline Sample reading(Instant time, std::optional<double> temperature,
                      std::optional<double> humidity = {}) {
  Sample sample;
  sample.time = time;
  if (temperature) sample.temperature = Celsius(*temperature);
  if (humidity) sample.humidity = Percent(*humidity);
  return sample;
}

/// Temperatures at one distance from `start` on.
inline std::vector<Sample> temperatures(Seconds interval, std::initializer_list<double> values) {
  std::vector<Sample> samples;
  Instant time = start;
  for (const double value : values) {
    samples.push_back(reading(time, value));
    time += interval;
  }
  return samples;
}

inline std::vector<Sample> humidities(Seconds interval, std::initializer_list<double> values) {
  std::vector<Sample> samples;
  Instant time = start;
  for (const double value : values) {
    samples.push_back(reading(time, std::nullopt, value));
    time += interval;
  }
  return samples;
}

/// Every hour that the samples touch.
inline std::vector<Hour> all_hours(const std::vector<Sample>& samples, const Station& station) {
  if (samples.empty()) return {};
  return gather(samples, station, hour_of(samples.front().time) - hours{24},
                hour_of(samples.back().time) + hours{1});
}

/// How many values of all hours were flagged so.
inline int flagged(const std::vector<Hour>& list, Element element, Verdict verdict, Reason reason) {
  int count = 0;
  for (const Hour& hour : list) {
    for (const Flag& flag : hour.flags) {
      if (flag.element == element && flag.verdict == verdict && flag.reason == reason) {
        count += flag.count;
      }
    }
  }
  return count;
}

inline int flagged(const std::vector<Hour>& list) {
  int count = 0;
  for (const Hour& hour : list) {
    for (const Flag& flag : hour.flags) count += flag.count;
  }
  return count;
}

inline const Hour& hour_at(const std::vector<Hour>& list, Instant at) {
  const auto found = std::find_if(list.begin(), list.end(),
                                  [&](const Hour& hour) { return hour.start == hour_of(at); });
  REQUIRE(found != list.end());
  return *found;
}

}  // namespace readings
