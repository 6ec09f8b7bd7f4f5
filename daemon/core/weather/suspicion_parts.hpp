// The watchers behind suspicion.hpp, one a kind of trouble. Inside this room only. Each sees one
// station's hours once, in time order, and says of each hour what is in force then.
#pragma once

#include <array>
#include <complex>
#include <deque>
#include <optional>

#include "core/weather/hour.hpp"
#include "core/weather/sun.hpp"

namespace antherd::weather {

/// An hour and where the sun stood in it.
struct SunnyHour {
  const Hour& hour;
  double altitude = 0.0;     // of the sun, middle of the hour, degrees
  double solar_clock = 0.0;  // mean solar time of the hour's middle, 0…24
  CivilDay solar_day{};      // its day
  CivilDay humid_night{};    // the day on whose morning the night ends: cut at solar noon
};

/// What a watcher says of one hour.
struct Suspicion {
  Reason reason = Reason::none;
  double value = 0.0;
};

/// Temperature in the wrong unit or the wrong column.
class UnitWatch {
 public:
  explicit UnitWatch(const Place& place) : place_(place) {}
  std::optional<Suspicion> look(const SunnyHour& now);

 private:
  struct Seen {
    HourStart start;
    std::optional<double> low, high, mean;  // plausible temperatures of the hour, °C
    std::optional<double> beyond;           // the first reading above the range, °C
    std::optional<double> humidity, solar;
    double altitude = 0.0;
    bool impossible_dew = false, dark_heat = false;
  };
  struct Day;  // the last 24 hours, summed up
  Day last_day(HourStart now) const;
  bool columns_swapped(HourStart now) const;
  bool never_warm(const SunnyHour& now) const;
  bool beyond_air(HourStart now, const Day& day) const;

  Place place_;
  std::deque<Seen> seen_;  // of the last ten days
};

/// Stamps that do not fit the sun.
class ClockWatch {
 public:
  explicit ClockWatch(const Station& station);
  std::optional<Suspicion> look(const SunnyHour& now);

 private:
  using Wave = std::complex<double>;
  struct Day {
    CivilDay day{};
    int hours = 0, solar_hours = 0;
    double solar = 0.0, temperature = 0.0;  // sums
    Wave solar_wave, sun_wave, temperature_wave, clock_wave;
  };
  void add(const SunnyHour& now);
  void judge();
  std::optional<double> by_sun() const;
  std::optional<double> by_warmth() const;

  Place place_;
  double centre_ = 0.5;  // of an hour's samples within the hour, h
  std::deque<Day> days_;
  std::optional<double> off_;
};

/// A hygrometer that never reaches its top.
class LowTopWatch {
 public:
  std::optional<Suspicion> look(const SunnyHour& now);

 private:
  struct Night {
    CivilDay night{};
    double top = 0.0;
    double rain = 0.0;
    bool dew = false;
  };
  void end_night();

  Night night_;
  // The newest stretch of the night in which humidity stood still.
  double least_ = 0.0, most_ = 0.0, first_temperature_ = 0.0;
  int still_ = 0;
  std::optional<HourStart> last_;
  std::deque<Night> humid_;
  std::optional<double> low_;
};

/// A hygrometer that stays at its top in the sun.
class HighTopWatch {
 public:
  std::optional<Suspicion> look(const SunnyHour& now);

 private:
  std::deque<CivilDay> days_;  // on which it did
  CivilDay day_{};
  int hours_ = 0;               // of this day
  std::optional<double> from_;  // temperature at which the run began
  int since_rain_ = 99;
};

}  // namespace antherd::weather
