// Small makers of episodes, notices and ledgers for the tests of the alerts room.
#pragma once

#include <algorithm>
#include <initializer_list>
#include <string>
#include <vector>

#include "core/alerts/decide.hpp"

namespace tale {

using namespace antherd;
using namespace antherd::alerts;

/// Hours after 2026-07-01 00:00 UTC.
inline Instant at(double hours) {
  const Instant july{std::chrono::sys_days{std::chrono::July / 1 / 2026}};
  return july + Seconds(static_cast<long>(hours * 3600));
}

struct Step {
  double hour;
  Level level;
};

/// An episode from its levels: `none` at the end closes it unless `stays_open`.
inline Episode episode(Kind kind, const std::string& subject, double start,
                       std::initializer_list<Step> steps, bool stays_open = false) {
  Episode e;
  e.kind = kind;
  e.subject = subject;
  e.start = at(start);
  for (const Step& step : steps) {
    Change change;
    change.at = at(step.hour);
    change.level = step.level;
    change.figure = 30.0 + 2.0 * static_cast<double>(step.level);
    if (e.changes.empty()) {
      change.phase = Phase::opened;
    } else if (step.level == Level::none && !stays_open) {
      change.phase = Phase::closed;
      e.closed = change.at;
    } else {
      change.phase = step.level > e.level ? Phase::raised : Phase::lowered;
    }
    e.level = step.level;
    e.peak = std::max(e.peak, step.level);
    e.changes.push_back(change);
  }
  return e;
}

/// What the fold would have known of an episode at a moment.
inline Episode known_at(const Episode& whole, Instant now) {
  Episode e = whole;
  std::erase_if(e.changes, [now](const Change& c) { return c.at > now; });
  e.closed.reset();
  e.level = e.peak = Level::none;
  for (const Change& c : e.changes) {
    e.level = c.level;
    e.peak = std::max(e.peak, c.level);
    if (c.phase == Phase::closed) e.closed = c.at;
  }
  return e;
}

inline std::vector<Episode> known_at(const std::vector<Episode>& all, Instant now) {
  std::vector<Episode> known;
  for (const Episode& whole : all) {
    if (Episode e = known_at(whole, now); !e.changes.empty()) known.push_back(e);
  }
  return known;
}

/// A service that keeps nothing but the ledger.
struct Service {
  Policy policy;
  std::vector<Said> ledger;

  std::vector<Telling> tick(const std::vector<Episode>& episodes, Instant now,
                            const std::vector<Notice>& notices = {}) {
    std::vector<Telling> told = decide(episodes, notices, ledger, policy, now);
    for (const Telling& telling : told) {
      ledger.push_back(record_of(telling, now));
      ledger.back().place = std::ssize(ledger);
    }
    return told;
  }
  /// Ticks every hour from `from` to `to`; each telling as "saying level@hour".
  std::string run(const std::vector<Episode>& episodes, double from, double to);
};

inline std::string word(Saying saying) {
  switch (saying) {
    case Saying::opened:
      return "opened";
    case Saying::raised:
      return "raised";
    case Saying::reminder:
      return "reminder";
    case Saying::eased:
      return "eased";
    case Saying::ended:
      return "ended";
    case Saying::notice:
      return "notice";
    case Saying::learned_late:
      return "late";
  }
  return "?";
}

inline std::string line(const Telling& telling, double hour) {
  return word(telling.saying) + " " + risk::name_of(telling.level) + "@" +
         std::to_string(static_cast<int>(hour)) + " ";
}

inline std::string Service::run(const std::vector<Episode>& episodes, double from, double to) {
  std::string heard;
  for (double hour = from; hour <= to; hour += 1.0) {
    for (const Telling& t : tick(known_at(episodes, at(hour)), at(hour))) heard += line(t, hour);
  }
  return heard;
}

}  // namespace tale
