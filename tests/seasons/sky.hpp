// The invented weather of a season and what its stations make of it. It must not know what is
// computed from it.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "core/units/time.hpp"
#include "core/weather/sample.hpp"

namespace antherd::seasons {

/// From one moment up to, not including, another.
struct Stretch {
  Instant from, to;
  bool holds(Instant at) const { return at >= from && at < to; }
};

/// Days with a weather of their own; what they do not say is the season's.
struct Spell {
  CivilDay first{}, last{};
  std::optional<double> night, afternoon;  // °C, coolest and warmest
  std::optional<double> dew_below_night;   // °C between the coolest air and its dew point
};
struct FixedHour {
  Instant at;
  std::optional<double> temperature, humidity;  // °C, %
};
struct Rain {
  Stretch when;
  double each_hour = 1;  // mm
};

struct Sky {
  bool fog_coast = false;  // the generator's coast; otherwise an inland year of these numbers:
  double midsummer = 20, midwinter = 0, range = 13;  // °C: means of the days, night to afternoon
  CivilDay warmest{};                                // any year's warmest day
  double day_to_day = 1.2, dew_below_night = 4;      // °C
  std::uint64_t seed = 1;
  double longitude = 0;
  std::vector<Spell> spells;
  std::vector<FixedHour> hours;
  std::vector<Rain> rain;
};

/// Readings of true air and rain from `from` (a whole hour) on.
std::vector<weather::Sample> readings(const Sky& sky, Instant from, int days, Seconds every);

/// A stretch whose readings come in a file of their own, at once.
struct LateFile {
  Stretch when;
  Instant arrives;
};
struct Stuck {
  Stretch when;
  std::string value;  // temperature | humidity
};

/// A station: when it reads, what is wrong with it.
struct Source {
  std::string station;
  Seconds every{1800};
  double warmer_by = 0;  // °C, than the sky's air
  bool whole_degrees = false;
  std::vector<Stretch> silent;
  std::vector<LateFile> late;
  std::vector<Stuck> stuck;
};

/// What the station makes of the air, its silent hours left out.
std::vector<weather::Sample> as_read(const Source& source, std::vector<weather::Sample> air);

constexpr const char* csv_header = "time,temp_c,temp_f,rh_pct,rain_mm\n";
/// One line of the station's file, UTC.
std::string csv_row(const weather::Sample& sample);

}  // namespace antherd::seasons
