// Quality control of one station's values (science §3): every value gets its marks, the raw value
// stays. Inside this room only; `gather` turns marks into hours and flags.
// This file must not know hours: it judges values by their neighbours in time.
#pragma once

#include <cstdint>
#include <optional>
#include <span>
#include <vector>

#include "core/weather/hour.hpp"
#include "core/weather/sample.hpp"

namespace antherd::weather {

/// What was found of a value; several may hold at once.
using Marks = std::uint8_t;
constexpr Marks mark_out_of_range = 1;
constexpr Marks mark_dew_above_temperature = 2;
constexpr Marks mark_spike_wrong = 4;
constexpr Marks mark_spike_suspect = 8;
constexpr Marks mark_unconfirmed = 16;
constexpr Marks mark_stuck = 32;
constexpr Marks mark_above_saturation = 64;

/// Wrong: out of the means, and no neighbour to others.
constexpr Marks marks_wrong = mark_out_of_range | mark_dew_above_temperature | mark_spike_wrong;
/// Out of the means.
constexpr Marks marks_left_out = marks_wrong | mark_unconfirmed;

/// One value with its marks.
struct Judged {
  Instant time;              // as stamped
  double value = 0.0;        // raw; of a derived humidity the derived one
  std::uint32_t sample = 0;  // its place among the samples
  Element element = Element::temperature;
  Marks marks = 0;

  bool wrong() const { return (marks & marks_wrong) != 0; }
  bool used() const { return (marks & marks_left_out) == 0; }
};
using Series = std::vector<Judged>;  // in time order

/// Plausible readings, ends included. Temperature and humidity: WMO guidelines on quality control
/// of automatic stations (Zahumenský 2004), narrowed to farm climates; the others a judgement.
struct Range {
  double least = 0.0;
  double most = 0.0;
  bool holds(double value) const { return value >= least && value <= most; }
};
constexpr Range temperature_range{-40.0, 55.0};  // °C
constexpr Range humidity_range{0.0, 104.0};      // %
constexpr Range dew_point_range{-60.0, 55.0};    // °C
constexpr Range wind_range{0.0, 75.0};           // m/s
constexpr Range solar_range{-20.0, 1600.0};      // W/m²; below 0 is a sensor's night and counts 0
constexpr Range wet_minutes_range{0.0, 60.0};
constexpr Range rain_range{0.0, 500.0};     // mm between two readings
constexpr double saturation_doubt = 102.0;  // %: above it the value is suspect
constexpr double dew_rounding = 0.5;        // °C that a dew point may be above the air

/// Spike limit of one element by the time between two values; nothing where there is no test.
struct SpikeLimit {
  double least;  // of all its limits: what differs by no more needs no look at the clock
  std::optional<double> (*by_time)(Seconds apart);
};
/// Temperature, °C. Source: science §3, after WMO practice (Zahumenský 2004).
std::optional<double> temperature_spike_limit(Seconds apart);
/// Humidity, %. Source: science §3.
std::optional<double> humidity_spike_limit(Seconds apart);

/// Temperatures with range and spike marks.
Series judge_temperature(std::span<const Sample> samples);

/// Humidities with range, saturation and spike marks, by the humidity column or, where a sample has
/// none, from its dew point and usable temperature: 100 e0(Td)/e0(T). A dew point that cannot be
/// used stands in the series as itself, marked.
Series judge_humidity(std::span<const Sample> samples, const Series& temperature);

/// Marks spikes: a value that differs from its nearest earlier and later neighbours that are not
/// wrong, both ways the same sign, each by more than the limit of its own time apart; wrong where
/// both differences exceed twice their limits. A jump from the earlier neighbour with no later one
/// near enough to test against is unconfirmed.
void judge_spikes(Series& series, const SpikeLimit& limit);

/// Marks values that end a stretch in which the sensor did not move (science §3, "stuck"): those
/// from the fulfilment of the 6, 12 or 24 hours on, not the ones that led to it.
/// @param interval  between samples: a hole above max(1 h, 2 intervals) starts the stretch anew
void judge_stuck(Series& temperature, Series& humidity, Seconds interval);

}  // namespace antherd::weather
