// The kinds of time: an instant (UTC), an hour named by its start (UTC), and civil days and times
// in a farm's zone. A Calendar holds one zone's rules as plain data, so that nothing in the core
// reads a zone database. This file must not know which zone is whose, nor what time it is now.
#pragma once

#include <chrono>
#include <cstdint>
#include <optional>
#include <string>
#include <vector>

namespace antherd {

using Seconds = std::chrono::seconds;
using Instant = std::chrono::sys_seconds;                     // UTC
using HourStart = std::chrono::sys_time<std::chrono::hours>;  // UTC, an hour is its start
using CivilDay = std::chrono::local_days;                     // a day in some zone
using CivilTime = std::chrono::local_seconds;                 // a clock reading in some zone
using CivilDate = std::chrono::year_month_day;

constexpr Seconds one_hour{3600};

/// The hour that holds an instant.
constexpr HourStart hour_of(Instant at) { return std::chrono::floor<std::chrono::hours>(at); }
/// The first instant after an hour.
constexpr Instant end_of(HourStart hour) { return Instant(hour) + one_hour; }
/// The instant in the middle of an hour: the sun of an hour is the sun of its middle.
constexpr Instant middle_of(HourStart hour) { return Instant(hour) + one_hour / 2; }

/// One zone's offsets from UTC as data.
class Calendar {
 public:
  struct Change {
    Instant from;    // the offset holds from this instant on
    Seconds offset;  // local minus UTC
  };
  /// What a clock reading means: one instant, none (skipped at a clock change) or two (repeated).
  struct Meaning {
    std::optional<Instant> first;
    std::optional<Instant> second;  // only of a repeated reading: the later one
  };

  /// A zone with one offset for ever (UTC by default).
  static Calendar fixed(Seconds offset = Seconds{0}, std::string name = "UTC");
  /// A zone by its changes in time order; the first change also holds for all time before it.
  Calendar(std::string name, std::vector<Change> changes);
  Calendar() : Calendar(fixed()) {}

  const std::string& name() const { return name_; }
  Seconds offset_at(Instant at) const;
  CivilTime civil(Instant at) const { return CivilTime((at + offset_at(at)).time_since_epoch()); }
  CivilDay day_of(Instant at) const { return std::chrono::floor<std::chrono::days>(civil(at)); }
  Meaning meaning_of(CivilTime reading) const;
  /// The first instant of a civil day (after a skipped midnight, the first that exists).
  Instant start_of(CivilDay day) const;
  /// The instant of a clock reading, the earlier of two, and for a skipped one the change itself.
  Instant at(CivilTime reading) const;

 private:
  std::string name_;
  std::vector<Change> changes_;
};

}  // namespace antherd
