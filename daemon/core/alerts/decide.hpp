// Whether to speak. decide() is a function of the episodes that the fold found, what was already
// said, and now; it keeps nothing. This file must not know words, addresses or clocks.
#pragma once

#include <span>
#include <string>
#include <vector>

#include "core/alerts/episode.hpp"

namespace antherd::alerts {

enum class Saying { opened, raised, reminder, eased, ended, notice, learned_late };

/// One thing said of one episode or notice: the ledger, kept for ever.
struct Said {
  std::string episode;   // identity: see identity()
  Kind kind = Kind::heat;
  std::string subject;
  Instant start;         // of the episode as it stood when this was said
  std::optional<Instant> until;  // the episode's last known extent when this was said
  Saying saying = Saying::opened;
  Level level = Level::none;
  Instant at;            // when it was said
  Instant about;         // the change it spoke of
  bool seen = false;     // a person marked it seen: no reminders at this level
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
  Instant about;          // when the deciding hour closed
  bool late = false;      // learned more than 12 h after it happened
  std::vector<Change> changes;  // learned late: all of them
  std::optional<CivilDay> day;  // notices
  std::string key;              // notices
};

struct Policy {
  Level min_level = Level::moderate;       // of heat, heat_ahead, humid_spell
  Seconds remind_after{24 * 3600};
  Seconds late_after{12 * 3600};
  Seconds forget_after{7 * 24 * 3600};     // older: the review only
  std::optional<Instant> first_start;      // what is older than the first start is not told
};

/// @param episodes  all episodes of the season so far, of any subjects
/// @param said      the ledger of those subjects
/// @return tellings in order of severity, then subject
std::vector<Telling> decide(std::span<const Episode> episodes, std::span<const Notice> notices,
                            std::span<const Said> said, const Policy& policy, Instant now);

/// The entry that the ledger gains when a telling is handed over.
Said record_of(const Telling& telling, Instant now);

/// A stable name of an episode that is new: "heat/north bench/2026-07-14T20:00:00Z".
std::string identity(Kind kind, const std::string& subject, Instant start);

}  // namespace antherd::alerts
