// Whether leaves are wet in an hour (science §7): humid film, water film, night sets, rain,
// irrigation, or a sensor. It must not know what wetness does.
#pragma once

#include <array>
#include <optional>
#include <vector>

#include "core/field/diary.hpp"
#include "core/risk/rules.hpp"
#include "core/units/quantity.hpp"
#include "core/units/time.hpp"
#include "core/weather/station.hpp"

namespace antherd::risk {

/// What one hour brings to a leaf. An hour without data is not given at all (see `after_gap`).
struct LeafHour {
  HourStart start;
  Celsius temperature;
  Percent humidity;
  Celsius dew_point;
  Millimetre drying;                     // potential, of the hour
  Millimetre rain{0};                    // for wetness
  Millimetre exchange{0};                // of a wet leaf: below 0 dew (weather/leaf.hpp)
  std::optional<double> sensor_minutes;  // leaf wetness sensor
};

/// What overhead irrigation brings to an hour, whether it has data or not.
struct Watering {
  bool overlaps = false;       // any overlap with an overhead irrigation
  bool unknown_depth = false;  // fills the water film
  Millimetre depth{0};         // known depth falling in this hour
  bool night_set = false;      // a night set keeps the leaves wet in this hour
};

/// By each film rule, in the order of Film.
template <class Value>
using ByFilm = std::array<Value, film_rules>;

struct Wet {
  bool wet = false;
  bool water = false;          // by water film, night set, rain or irrigation
  ByFilm<bool> estimate{};     // what each rule says without the sensor
  std::optional<bool> sensor;  // what the sensor says
};

/// Carried from hour to hour.
struct LeafState {
  double film_mm = 0;       // water film
  bool humid_film = false;  // for the dew-point option's hysteresis
  double dew_mm = 0;        // for the energy option: dew on the leaf
};

/// One hour with data. Source: science §7; constant-RH film Sentelhas et al. 2008; dew-point
/// option Huber & Gillespie 1992 (from memory); bucket and night sets are judgements.
/// Energy option: dew of `exchange` collects up to the bucket (what is more drips off: Rutter et
/// al. 1971, from memory), counts from 0.02 mm, and leaves after the water film has; air at
/// `film_humidity` is wet without it, being nearer to the dew point (0.8 °C at 95 %) than the
/// balance is exact. Source: Pedro & Gillespie 1982 (from memory); thresholds as for the bucket.
Wet wet_hour(LeafState& state, const LeafHour& hour, const Watering& water,
             const HumidRules& rules);
/// An hour without data: the films start empty after it.
void after_gap(LeafState& state);

/// How often the rules were right where a sensor tells the truth.
struct SensorRecord {
  int hours = 0, wet = 0;  // hours with data and sensor; wet ones of them
  ByFilm<int> missed{};    // wet by the sensor, dry by the rule
  ByFilm<int> imagined{};  // the other way round

  bool operator==(const SensorRecord&) const = default;
  /// Hours in which a rule agreed with the sensor. Source: a count.
  int right(Film film) const;
};

/// Adds an hour to the record where it has a sensor.
void compare(SensorRecord& record, const Wet& wet);

/// An overhead irrigation of ≥ 1 mm or unknown depth that ends between sunset − 3 h and the next
/// sunrise: leaves stay wet from its start to that sunrise.
struct NightSet {
  Instant start;
  Instant end;
  Instant sunset;
  Instant sunrise;
  bool enough = true;           // ≥ 1 mm or unknown; otherwise it only counts as an evening
  bool close_to_limit = false;  // had it ended an hour earlier it would not have counted
};

/// All evening and night irrigations of a diary, by end. Source: science §7, "Night sets".
std::vector<NightSet> night_sets(const std::vector<field::Irrigation>& irrigations,
                                 const weather::Place& place);

/// What the overhead irrigations and night sets bring to an hour.
Watering watering_of(HourStart hour, const std::vector<field::Irrigation>& irrigations,
                     const std::vector<NightSet>& sets);

}  // namespace antherd::risk
