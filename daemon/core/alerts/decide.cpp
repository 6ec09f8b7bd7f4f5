// Whether to speak of one story, and the order of what is said; see decide.hpp.
#include "core/alerts/decide.hpp"

#include <algorithm>
#include <tuple>

#include "core/alerts/stations.hpp"
#include "core/alerts/story.hpp"

namespace antherd::alerts {

namespace {

// The watch itself: blind now is worth a letter now, however long ago it began.
bool of_the_watch(Kind kind) { return kind == Kind::no_data || kind == Kind::doubtful_sensor; }

Level least_level(Kind kind, const Policy& policy) {
  const bool hazard = kind == Kind::heat || kind == Kind::heat_ahead || kind == Kind::humid_spell;
  return hazard ? std::max(policy.min_level, Level::moderate) : Level::none;
}

// An entry after which the reader takes the trouble to be over.
bool says_over(const Said& said) {
  if (said.saying == Saying::eased || said.saying == Saying::ended) return true;
  return said.saying == Saying::learned_late && said.until == said.about;
}

bool says_level(const Said& said) {
  return said.saying != Saying::eased && said.saying != Saying::ended;
}

// What the reader has been told and not been told to be over since.
struct Standing {
  bool told = false;
  Level highest = Level::none;
};

Standing standing_of(const Story& story) {
  Standing standing;
  for (const Said* said : story.said) {
    if (says_level(*said)) {
      standing.told = true;
      standing.highest = std::max(standing.highest, said->level);
    }
    if (says_over(*said)) standing = Standing{};
  }
  return standing;
}

bool too_old(Instant at, const Policy& policy, Instant now) {
  return now - at > policy.forget_after || (policy.first_start && at < *policy.first_start);
}

// Told already: this level or a higher one, since 7 days before the change.
bool covered(const Change& change, const Story& story, const Policy& policy) {
  return std::any_of(story.said.begin(), story.said.end(), [&](const Said* said) {
    return says_level(*said) && said->level >= change.level &&
           said->at >= change.at - policy.forget_after;
  });
}

// The rises that are still to be told, in time order.
std::vector<Change> untold_rises(const Story& story, const Policy& policy, Instant now) {
  std::vector<Change> rises;
  for (const Change& change : story.changes) {
    if (change.phase != Phase::opened && change.phase != Phase::raised) continue;
    if (change.level < least_level(story.kind, policy) || covered(change, story, policy)) continue;
    if (too_old(change.at, policy, now) && !(of_the_watch(story.kind) && story.open)) continue;
    rises.push_back(change);
  }
  return rises;
}

Telling begin(const Story& story, Saying saying, Level level, const Change& change) {
  Telling telling;
  telling.saying = saying;
  telling.kind = story.kind;
  telling.subject = story.subject;
  telling.episode = story.identity;
  telling.start = story.start;
  telling.level = level;
  telling.peak = story.peak;
  telling.severity = severity_of(level);
  telling.certainty = change.certainty;
  telling.figure = change.figure;
  telling.detail = change.detail;
  telling.about = change.at;
  return telling;
}

// One telling for all that happened from `first` on.
Telling learned_late(const Story& story, Instant first, const Change& gravest) {
  Telling telling = begin(story, Saying::learned_late, gravest.level, gravest);
  telling.late = true;
  for (const Change& change : story.changes) {
    if (change.at >= first) telling.changes.push_back(change);
  }
  // While it lasts, about stays the late moment: before now, so that record_of tells it from an
  // end.
  if (!story.open) telling.about = story.changes.back().at;
  return telling;
}

std::optional<Telling> rise(const Story& story, const Policy& policy, Instant now) {
  const std::vector<Change> rises = untold_rises(story, policy, now);
  if (rises.empty()) return std::nullopt;
  Change gravest = rises.front();
  for (const Change& change : rises) {
    if (change.level >= gravest.level) gravest = change;
  }
  if (story.kind == Kind::heat_ahead && !story.open) return std::nullopt;
  if (!story.open || now - gravest.at > policy.late_after) {
    return learned_late(story, rises.front().at, gravest);
  }
  const Saying saying = standing_of(story).told ? Saying::raised : Saying::opened;
  return begin(story, saying, gravest.level, gravest);
}

bool end_is_worth_a_letter(const Story& story, const Standing& standing) {
  switch (story.kind) {
    case Kind::heat:
    case Kind::humid_spell:
      return standing.told && standing.highest >= Level::severe;
    case Kind::no_data:
      return standing.told;
    case Kind::doubtful_sensor:
      return standing.told && standing.highest >= Level::moderate;
    case Kind::mail_trouble:
      return std::none_of(story.said.begin(), story.said.end(),
                          [](const Said* said) { return says_over(*said); });
    default:
      return false;
  }
}

std::optional<Telling> end(const Story& story, const Policy& policy, Instant now) {
  if (story.open) return std::nullopt;
  const Change& closing = story.changes.back();
  if (closing.detail == season_over || too_old(closing.at, policy, now)) return std::nullopt;
  if (!end_is_worth_a_letter(story, standing_of(story))) return std::nullopt;
  if (now - closing.at > policy.late_after) return learned_late(story, closing.at, closing);
  const bool hazard = story.kind == Kind::heat || story.kind == Kind::humid_spell;
  Telling telling = begin(story, hazard ? Saying::eased : Saying::ended, Level::none, closing);
  if (telling.figure) return telling;
  for (const Change& change : story.changes) {
    if (change.level == story.peak && change.figure) telling.figure = change.figure;
  }
  return telling;
}

// The gap was filled by readings that came late: no episode is left to close, but the reader still
// believes the station to be silent.
std::optional<Telling> vanished(const Story& story, const Policy& policy, Instant now) {
  if (!of_the_watch(story.kind) || !end_is_worth_a_letter(story, standing_of(story))) {
    return std::nullopt;
  }
  const Said& last = *story.said.back();
  if (too_old(last.at, policy, now)) return std::nullopt;
  Change filled;
  filled.at = now;
  filled.phase = Phase::closed;
  Telling telling = begin(story, Saying::ended, Level::none, filled);
  telling.peak = standing_of(story).highest;
  return telling;
}

// A person has seen this level, and nothing unseen of it or of less was told since.
bool seen(const Story& story, Level level) {
  bool seen = false;
  Level at = Level::none;
  for (const Said* said : story.said) {
    if (said->seen && said->level >= level) {
      seen = true;
      at = std::max(at, said->level);
    } else if (seen && !said->seen && says_level(*said) && said->saying != Saying::reminder &&
               said->level <= at) {
      seen = false;
      at = Level::none;
    }
  }
  return seen;
}

std::optional<Telling> reminder(const Story& story, const Policy& policy, Instant now) {
  if (!story.open || story.said.empty() || story.kind == Kind::heat_ahead) return std::nullopt;
  if (story.level < std::max(least_level(story.kind, policy), Level::moderate)) return std::nullopt;
  const Said& last = *story.said.back();
  if (!says_over(last)) {
    if (now - last.at < policy.remind_after || seen(story, story.level)) return std::nullopt;
  }
  return begin(story, Saying::reminder, story.level, story.changes.back());
}

}  // namespace

std::optional<Telling> telling_of(const Story& story, const Policy& policy, Instant now) {
  if (story.gone) return vanished(story, policy, now);
  if (story.changes.empty()) return std::nullopt;  // a clock that was set back: wait
  if (story.kind != Kind::mail_trouble) {
    if (auto telling = rise(story, policy, now)) return telling;
    if (auto telling = reminder(story, policy, now)) return telling;
  }
  return end(story, policy, now);
}

namespace {

// Good news of a station is no reason to wake anybody.
bool waits_for_morning(const Telling& telling, const Policy& policy, Instant now) {
  return telling.saying == Saying::ended && of_the_watch(telling.kind) &&
         awake(now, policy.calendar) != now;
}

// "Data back" of a silence before one that has begun meanwhile, or was told of: that one's end says
// it better, and "back" beside "no data" would say nothing. Also one that later facts took away:
// two silences that a wrong clock made are over together.
bool overtaken(const Telling& telling, std::span<const Story> stories) {
  const bool end_alone =
      telling.saying == Saying::ended ||
      (!telling.changes.empty() && telling.changes.front().phase == Phase::closed);
  if (!end_alone || !of_the_watch(telling.kind)) return false;
  return std::any_of(stories.begin(), stories.end(), [&](const Story& story) {
    return story.kind == telling.kind && story.subject == telling.subject &&
           story.start > telling.start && (story.open || !story.said.empty());
  });
}

// A sensor that fails every night outside the window is one piece of news a week.
bool known_already(const Telling& telling, std::span<const Said> said, const Policy& policy) {
  if (telling.kind != Kind::doubtful_sensor || telling.level != Level::none) return false;
  if (telling.saying != Saying::opened && telling.saying != Saying::learned_late) return false;
  const Instant began = telling.changes.empty() ? telling.about : telling.changes.front().at;
  return std::any_of(said.begin(), said.end(), [&](const Said& entry) {
    return entry.kind == telling.kind && entry.subject == telling.subject && entry.at <= began &&
           began - entry.at < policy.forget_after;
  });
}

}  // namespace

namespace {

bool is_ahead(const Said& entry, Instant now) { return entry.at > now; }

// A clock that was put back by less than the time between two reminders: what was last said was
// said lately, though put_right counts it as said with its change, a day ago perhaps.
bool said_lately(const Telling& telling, std::span<const Said> said, const Policy& policy,
                 Instant now) {
  if (telling.saying != Saying::reminder) return false;
  const Said* last = nullptr;
  for (const Said& entry : said) {
    if (entry.kind != telling.kind || entry.subject != telling.subject) continue;
    const auto later = [&] {
      return std::tie(entry.place, entry.at) >= std::tie(last->place, last->at);
    };
    if (last == nullptr || later()) last = &entry;
  }
  return last != nullptr && is_ahead(*last, now) && last->at - now < policy.remind_after &&
         !says_over(*last);
}

// Were an entry of a clock that stood years ahead left as it is, all that happens until then would
// pass for the same story, told long ago.
Said put_right(Said entry, Instant now) {
  if (!is_ahead(entry, now)) return entry;
  entry.at = std::min(now, entry.about);
  if (!is_notice(entry.kind) && entry.until) {
    // An extent that ends with the change itself would say that the trouble is over.
    const Seconds lasts{*entry.until == entry.about ? 0 : 1};
    entry.until = std::max(entry.start, std::min(*entry.until, entry.at + lasts));
  }
  return entry;
}

}  // namespace

std::vector<Telling> decide(std::span<const Episode> episodes, std::span<const Notice> notices,
                            std::span<const Said> said, const Policy& policy, Instant now) {
  std::vector<Said> righted;
  const std::span<const Said> as_said = said;
  if (std::any_of(said.begin(), said.end(), [&](const Said& s) { return is_ahead(s, now); })) {
    for (const Said& entry : said) righted.push_back(put_right(entry, now));
    said = righted;
  }
  std::vector<Telling> tellings;
  const std::vector<Story> stories = stories_of(episodes, said, now);
  for (const Story& story : stories) {
    auto telling = telling_of(story, policy, now);
    if (!telling || waits_for_morning(*telling, policy, now)) continue;
    if (overtaken(*telling, stories) || said_lately(*telling, as_said, policy, now)) continue;
    if (!known_already(*telling, said, policy)) tellings.push_back(std::move(*telling));
  }
  for (Telling& telling : tellings_of(notices, said, policy, now)) {
    tellings.push_back(std::move(telling));
  }
  std::sort(tellings.begin(), tellings.end(), [](const Telling& a, const Telling& b) {
    return std::tie(b.severity, a.subject, a.kind, a.start, a.episode, a.key) <
           std::tie(a.severity, b.subject, b.kind, b.start, b.episode, b.key);
  });
  return tellings;
}

Said record_of(const Telling& telling, Instant now) {
  Said said;
  said.episode = telling.episode;
  said.kind = telling.kind;
  said.subject = telling.subject;
  said.start = telling.start;
  said.saying = telling.saying;
  said.level = telling.level;
  said.at = now;
  said.about = telling.about;
  const bool over = telling.saying == Saying::eased || telling.saying == Saying::ended ||
                    (!telling.changes.empty() && telling.changes.back().phase == Phase::closed);
  said.until = over ? telling.about : now;
  if (is_notice(telling.kind)) {
    said.until.reset();
    if (telling.day) said.until = Instant(telling.day->time_since_epoch());
  }
  return said;
}

}  // namespace antherd::alerts
