// Stories: what the fold found and what was said of it, brought together. Inside this room only.
#pragma once

#include <span>
#include <string>
#include <vector>

#include "core/alerts/decide.hpp"

namespace antherd::alerts {

/// The episodes that are one thing to a reader, with the ledger's entries about them.
struct Story {
  Kind kind = Kind::heat;
  std::string subject;
  std::string identity;
  Instant start;                // of the first episode
  std::vector<Change> changes;  // up to now, in time order
  bool gone = true;             // the ledger speaks of it and the fold no longer does
  bool open = false;
  Level level = Level::none;  // now
  Level peak = Level::none;
  std::vector<const Said*> said;  // in the order in which it was said
};

/// Stories of all kinds but notices, in an order that does not depend on the arguments' order.
std::vector<Story> stories_of(std::span<const Episode> episodes, std::span<const Said> said,
                              Instant now);

/// What is to be said of one story; nothing most of the time.
std::optional<Telling> telling_of(const Story& story, const Policy& policy, Instant now);

/// Notices that are due and were not said yet.
std::vector<Telling> tellings_of(std::span<const Notice> notices, std::span<const Said> said,
                                 const Policy& policy, Instant now);

bool is_notice(Kind kind);

/// "2026-07-14" and "2026-07-14T20:00:00Z".
std::string date_text(std::chrono::sys_days day);
std::string time_text(Instant at);

}  // namespace antherd::alerts
