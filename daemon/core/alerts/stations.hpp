// Episodes about stations: one that has fallen silent (no_data) and one whose sensor keeps failing
// a check (doubtful_sensor). Pure functions of times and verdicts; this file must not know samples,
// hours of weather or fields, only when the fields of a station need it.
#pragma once

#include <optional>
#include <span>
#include <string>
#include <vector>

#include "core/alerts/episode.hpp"

namespace antherd::alerts {

/// A stretch of time, [from, to).
struct Span {
  Instant from;
  Instant to;
  bool operator==(const Span&) const = default;
};

/// How a station speaks when it is well. All seconds > 0.
struct StationWatch {
  std::string station;
  Seconds interval{300};               // between samples
  Seconds silent_after{3600};          // the settings' wish, waiting for batches included
  Seconds arrives_every{300};          // batches: longer than the interval
  const Calendar* calendar = nullptr;  // farm time
};

/// A stretch without accepted samples: after `last`, until `back`, or still.
struct Silence {
  Instant last;
  std::optional<Instant> back;
  std::optional<Instant> waited_from = std::nullopt;  // when later than `last`: patience from here
  bool operator==(const Silence&) const = default;
};

/// The moment itself by day, 06:00 of the coming morning between 22:00 and 06:00 farm time; always
/// the moment itself without a calendar.
Instant awake(Instant at, const Calendar* farm_time);

/// How long a station may say nothing: silent_after, but never less than three intervals and what
/// a batch adds to them (arrives_every beyond the interval).
Seconds patience_of(const StationWatch& watch);

/// The gaps longer than `patience` between the times of samples (any order, repeats allowed), and
/// last the silence since the newest sample, however short. Nothing when there is no sample: of a
/// station that never spoke the caller makes one Silence from the moment it was to speak.
std::vector<Silence> silences_from(std::span<const Instant> sample_times, Seconds patience);

/// Episodes of no_data. One opens when a silence outlasts the patience while a field needs the
/// station; between 22:00 and 06:00 farm time the opening, and a rise, wait until 06:00. Severe
/// inside a flowering window, else Moderate; falls when the window closes; closes when a sample is
/// back, or with the season (detail season_over). The figure of a change is the hours of silence.
/// @param in_window  when some field of the station is in its flowering window; any order
/// @param watched    when some field of the station is between sowing and its season's end
/// @param now        nothing later than this is known
std::vector<Episode> silences(const StationWatch& watch, std::span<const Silence> gaps,
                              std::span<const Span> in_window, std::span<const Span> watched,
                              Instant now);

/// What one check of quality control said of one hour.
struct FailingHour {
  HourStart hour;
  std::string check;  // as a letter may say it: "temperature stuck"
  bool failing = false;
  bool has_data = false;  // false: the hour counts neither way and breaks nothing
};

/// Episodes of doubtful_sensor: a check that fails in 6 consecutive hours with data opens, 24
/// such hours without the failure close: what fails every night, or at every noon, is one
/// episode. Checks that fail at one time are one episode, whose detail names those that opened
/// it. Moderate in the window, else none (Minor). Between 22:00 and 06:00 farm time the opening,
/// and a rise, wait until 06:00, as those of silences do: nobody mends a sensor at midnight.
std::vector<Episode> doubtful(const StationWatch& watch, std::span<const FailingHour> hours,
                              std::span<const Span> in_window, std::span<const Span> watched,
                              Instant now);

}  // namespace antherd::alerts
