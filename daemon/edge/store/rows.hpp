// How samples and hours stand in rows: the columns' order in one place for writers and readers.
#pragma once

#include <string>
#include <vector>

#include "core/weather/hour.hpp"
#include "core/weather/sample.hpp"
#include "edge/store/database.hpp"

namespace antherd::store {

/// The columns of sample and sample_conflict after `station`, as in read_sample.
#define ANTHERD_SAMPLE_COLUMNS \
  "time, temperature, humidity, dew_point, rain, wind, solar, wet_minutes"

inline void bind_sample(Statement& statement, std::int64_t station, const weather::Sample& sample) {
  statement.bind(station, sample.time, sample.temperature, sample.humidity, sample.dew_point,
                 sample.rain, sample.wind, sample.solar, sample.wet_minutes);
}

inline weather::Sample read_sample(Statement& row) {
  weather::Sample sample;
  sample.time = row.instant();
  sample.temperature = row.maybe<Celsius>();
  sample.humidity = row.maybe<Percent>();
  sample.dew_point = row.maybe<Celsius>();
  sample.rain = row.maybe<Millimetre>();
  sample.wind = row.maybe<MetrePerSecond>();
  sample.solar = row.maybe<WattPerSquareMetre>();
  sample.wet_minutes = row.maybe<double>();
  return sample;
}

/// Flags as compact JSON, and back. Throws Trouble for a text that is none of ours.
std::string flags_to_text(const std::vector<weather::Flag>& flags);
std::vector<weather::Flag> flags_from_text(const std::string& text);

}  // namespace antherd::store
