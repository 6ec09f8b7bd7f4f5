// A weather station as the numbers need it: where it stands and how its values are to be read.
// This file must not know how its readings travel.
#pragma once

#include <optional>
#include <string>

#include "core/units/quantity.hpp"
#include "core/units/time.hpp"

namespace antherd::weather {

/// A point on the ground. Latitude −90…90 north, longitude −180…180 east, elevation in m.
struct Place {
  Degree latitude{0};
  Degree longitude{0};
  Metre elevation{0};
};

enum class Stamp { instant, start, end };      // what a sample's time says of its interval
enum class Shield { fanned, plain, unknown };  // how the thermometer is shaded
enum class RainMeaning { since_last, day_total, counter };

struct Station {
  std::string name;
  Place place;
  Seconds interval{300};       // between two samples
  Seconds silent_after{3600};  // no accepted sample for this long: no_data
  Seconds arrives_every{300};  // how often readings reach us (batches)
  Stamp stamp = Stamp::instant;
  Shield shield = Shield::unknown;
  RainMeaning rain_meaning = RainMeaning::since_last;
  Calendar rain_zone;  // the zone whose midnight resets a day_total
  Metre wind_height{2};
  std::optional<Seconds> wetness_interval;  // of one value of the wetness sensor; else `interval`
  double radiation_coefficient = 0.16;      // kRs of science §7: 0.16 inland, 0.19 near a coast
  bool near_coast() const { return radiation_coefficient > 0.175; }
  bool measures_rain = false;
  bool measures_wind = false;
  bool measures_solar = false;
  bool measures_wetness = false;
};

}  // namespace antherd::weather
