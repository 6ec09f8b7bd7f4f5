// The hour record: what one station measured in one hour, after quality control (science §3).
// It is a pure function of the station's samples around it, whatever order they came in.
#pragma once

#include <optional>
#include <span>
#include <string>
#include <vector>

#include "core/units/quantity.hpp"
#include "core/units/time.hpp"
#include "core/weather/sample.hpp"
#include "core/weather/station.hpp"

namespace antherd::weather {

enum class Element { temperature, humidity, dew_point, rain, wind, solar, wetness };
enum class Verdict { good, suspect, wrong };
enum class Reason {
  none,
  out_of_range,
  above_saturation,  // humidity above 102 %, set to 100
  spike,
  unconfirmed,  // a jump whose later neighbour has not arrived (near enough to be tested:
                // 3 h, humidity 1 h): suspect, and yet left out until it has
  stuck,
  dew_above_temperature,
  rain_in_dry_air,
  // What shows only over days (suspicion.hpp); `value` of the flag is what its comment says.
  not_air_temperature,    // coolest reading of the last 24 h, °C
  fahrenheit_as_celsius,  // likewise
  celsius_as_fahrenheit,  // this hour's highest reading, °C
  columns_swapped,
  clock_off,          // hours by which the stamps are late; negative: early
  humidity_low_top,   // highest reading of the last 30 humid nights, %
  humidity_high_top,  // this hour's highest reading, %
};

/// What quality control said of one element in one hour. `count` values of the hour got this
/// verdict for this reason; `value` and `at` are those of the first.
struct Flag {
  Element element = Element::temperature;
  Verdict verdict = Verdict::good;
  Reason reason = Reason::none;
  int count = 0;
  Instant at;
  double value = 0.0;

  bool operator==(const Flag&) const = default;
};

/// One hour of one station. Means are rounded to 1e-6 (science §0). `n` counts the samples whose
/// temperature was used, `n_humidity` those whose humidity was.
struct Hour {
  HourStart start;
  int n = 0;
  int n_humidity = 0;
  double coverage = 0.0;  // min(1, n / expected), 0…1
  double humidity_coverage = 0.0;
  std::optional<Celsius> temperature;  // mean
  std::optional<Celsius> temperature_max;
  std::optional<Celsius> temperature_min;
  std::optional<Percent> humidity;  // mean, 0…100
  std::optional<Percent> humidity_max;
  std::optional<Percent> humidity_min;
  std::optional<Millimetre> rain;              // sum for the water balance
  std::optional<Millimetre> rain_for_wetness;  // the same without sums over a gap > 1 h
  std::optional<MetrePerSecond> wind;          // mean, at 2 m (FAO-56 eq. 47)
  std::optional<WattPerSquareMetre> solar;     // mean
  std::optional<double> wet_minutes;  // sensor: minutes wet in this hour, 0…60; none when
                                      // too few of its values came to call it dry
  bool whole_degrees =
      false;                // every temperature of the hour and of the 24 before is a whole °C/°F
  std::vector<Flag> flags;  // in order of element, reason

  bool operator==(const Hour&) const = default;
  /// Enough temperature to count in heat and thermal time (coverage ≥ 0.75).
  bool has_temperature() const { return temperature && coverage >= 0.75; }
  /// Temperature and humidity: what science §0 calls valid.
  bool valid() const { return has_temperature() && humidity && humidity_coverage >= 0.75; }
};

/// How far around a changed sample the hour records can change: hours that hold an instant of
/// [time − hours_touched_before, time + hours_touched_after] are to be made anew. Back: a later
/// neighbour settles spikes within 3 h, twice, a dew point's humidity within 2 h more, and an end
/// stamp shifts by one interval. Ahead: 24 h of fog or of whole degrees, 30 h of a rain counter's
/// silence, and the spike checks before them. Right for intervals up to 3 h.
constexpr Seconds hours_touched_before{12 * 3600};
constexpr Seconds hours_touched_after{36 * 3600};
/// How much more context `gather` needs on each side of the hours it is asked for.
constexpr Seconds context_before{36 * 3600};
constexpr Seconds context_after{12 * 3600};

/// Makes the hour records of [from, to).
/// @param samples  one station's standing samples in time order, one per time, holding at least
///                 [from − context_before, to + context_after) as far as they exist
/// @return one record per hour that holds at least one sample (n may be 0 when all were refused),
///         in time order; an hour without any sample has no record: it is a gap
std::vector<Hour> gather(std::span<const Sample> samples, const Station& station, HourStart from,
                         HourStart to);

/// When an hour closes if no later sample arrives: its end + max(2 intervals, 10 min).
Instant closes_at(HourStart hour, const Station& station);

/// Words for a flag without place or time: "spike", "stuck for 6 h or more". English, for verdict
/// columns and logs.
std::string describe(const Flag& flag);
const char* name_of(Element element);
const char* name_of(Verdict verdict);
const char* name_of(Reason reason);

}  // namespace antherd::weather
