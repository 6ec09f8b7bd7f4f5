// Whether to speak. decide() is a function of the episodes that the fold found, what was already
// said, and now; it keeps nothing. This file must not know words, addresses or clocks.
//
// An episode and the ledger's entries of its kind and subject whose time overlaps it are one story,
// however a re-fold moved, split or joined it. Of one story are said
//   opened      the first level that may be told (heat, heat_ahead, humid_spell: policy.min_level)
//   raised      a level above the highest that was told since 7 days before the raise
//   reminder    remind_after after the last saying, while it lasts at Moderate or more (not of
//               heat_ahead, whose next day speaks for itself; not of a level that a person has
//               seen); at once when it was said to be over and a re-fold shows that it is not
//   eased       the end of a heat or humid_spell that was told as Severe
//   ended       readings are back (no_data that was told, doubtful_sensor told as Moderate or
//               more), told by day: at night it waits until 06:00 farm time;
//               also when late readings filled the gap so that the episode is gone; letters go
//               again (mail_trouble, of which nothing else is said)
//   learned_late  what happened more than late_after before now, or was over before it was told
// Nothing is said of changes older than forget_after or before first_start, then or later, except
// of a no_data or doubtful_sensor that still lasts: the watch is blind now. A doubtful sensor
// outside the flowering window (Minor) is said once in 7 days, however often it comes and goes: the
// review has it every week. Nothing is said of an
// outlook (heat_ahead) that is over, of other levels that fall or episodes that close, nor of an
// episode that a re-fold took away.
#pragma once

#include <span>
#include <string>
#include <vector>

#include "core/alerts/episode.hpp"

namespace antherd::alerts {

enum class Saying { opened, raised, reminder, eased, ended, notice, learned_late };

/// One thing said of one episode or notice: the ledger, kept for ever.
struct Said {
  std::string episode;  // identity: see identity()
  Kind kind = Kind::heat;
  std::string subject;
  Instant start;                 // of the episode as it stood when this was said
  std::optional<Instant> until;  // the episode's last known extent when this was said; of a
                                 // notice the day it spoke of, at 00:00 UTC
  Saying saying = Saying::opened;
  Level level = Level::none;
  Instant at;              // when it was said
  Instant about;           // the change it spoke of
  bool seen = false;       // a person marked it seen: no reminders at this level
  std::int64_t place = 0;  // in the ledger: what was said later has a greater one. A clock that is
                           // put back makes `at` say otherwise. Where all are 0 `at` decides
};

/// What is to be said now. One per episode and tick.
struct Telling {
  Saying saying = Saying::opened;
  Kind kind = Kind::heat;
  std::string subject;
  std::string episode;
  Instant start;
  Level level = Level::none;
  Level peak = Level::none;
  Severity severity = Severity::minor;
  Certainty certainty = Certainty::observed;
  std::optional<double> figure;
  std::string detail;
  Instant about;                // when the deciding hour closed
  bool late = false;            // learned more than 12 h after it happened
  std::vector<Change> changes;  // learned late: all of them
  std::optional<CivilDay> day;  // notices
  std::string key;              // notices
};

struct Policy {
  Level min_level = Level::moderate;  // of heat, heat_ahead, humid_spell
  Seconds remind_after{24 * 3600};
  Seconds late_after{12 * 3600};
  Seconds forget_after{7 * 24 * 3600};  // older: the review only
  std::optional<Instant> first_start;   // what is older than the first start is not told
  const Calendar* calendar = nullptr;   // farm time, for what waits until morning
};

/// @param episodes  all episodes of the season so far, of any subjects; of stations at least the
///                  last 8 days (an earlier end would look like a gap that was filled)
/// @param said      the ledger of those subjects, at least as far back
///                  What bears a later time than `now` was said by a clock that stood ahead: it
///                  counts as said with the change it spoke of, and reaches no further. Where
///                  that clock was ahead by less than remind_after no reminder comes meanwhile.
/// @return tellings in order of severity, then subject
std::vector<Telling> decide(std::span<const Episode> episodes, std::span<const Notice> notices,
                            std::span<const Said> said, const Policy& policy, Instant now);

/// The entry that the ledger gains when a telling is handed over. Its `until` is `now` while the
/// episode lasts and the moment of closing (= about) once it is over.
Said record_of(const Telling& telling, Instant now);

/// A stable name of an episode that is new: "heat/north bench/2026-07-14T20:00:00Z".
std::string identity(Kind kind, const std::string& subject, Instant start);

}  // namespace antherd::alerts
