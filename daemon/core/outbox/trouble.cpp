// When the mail itself is in trouble. See outbox.hpp.
#include <algorithm>

#include "core/outbox/outbox.hpp"

namespace antherd::outbox {
namespace {

/// A letter's long wait: from its decision to its acceptance, or still.
struct Wait {
  Instant since;
  std::optional<Instant> until;
};

bool on_its_way(State state) {
  return state == State::waiting || state == State::sending || state == State::in_doubt;
}

/// When the next letter was accepted after a moment.
std::optional<Instant> next_acceptance(std::span<const Delivery> deliveries, Instant after) {
  std::optional<Instant> next;
  for (const Delivery& delivery : deliveries) {
    if (delivery.state != State::sent || !delivery.ended || *delivery.ended < after) continue;
    if (!next || *delivery.ended < *next) next = delivery.ended;
  }
  return next;
}

std::vector<Wait> long_waits(std::span<const Delivery> deliveries, Instant now) {
  std::vector<Wait> waits;
  for (const Delivery& delivery : deliveries) {
    const bool ended = delivery.state == State::sent || delivery.state == State::parked;
    if (!ended && !on_its_way(delivery.state)) continue;
    const Instant last = ended ? delivery.ended.value_or(now) : now;
    if (last - delivery.decided < trouble_after) continue;
    Wait wait{delivery.decided, std::nullopt};
    if (delivery.state == State::sent) wait.until = delivery.ended;
    if (delivery.state == State::parked) wait.until = next_acceptance(deliveries, last);
    waits.push_back(wait);
  }
  std::sort(waits.begin(), waits.end(),
            [](const Wait& one, const Wait& other) { return one.since < other.since; });
  return waits;
}

alerts::Episode episode_of(const Wait& wait) {
  alerts::Episode episode;
  episode.kind = alerts::Kind::mail_trouble;
  episode.subject = "antherd";
  episode.start = wait.since;
  episode.peak = alerts::Level::moderate;
  alerts::Change opened;
  opened.at = wait.since + trouble_after;
  opened.level = alerts::Level::moderate;
  episode.changes = {opened};
  episode.level = alerts::Level::moderate;
  if (wait.until) {
    alerts::Change closed;
    closed.at = *wait.until;
    closed.phase = alerts::Phase::closed;
    episode.changes.push_back(closed);
    episode.level = alerts::Level::none;
    episode.closed = wait.until;
  }
  return episode;
}

}  // namespace

std::vector<alerts::Episode> mail_troubles(std::span<const Delivery> deliveries, Instant now) {
  std::vector<Wait> joined;
  for (const Wait& wait : long_waits(deliveries, now)) {
    if (joined.empty() || (joined.back().until && *joined.back().until < wait.since)) {
      joined.push_back(wait);
    } else if (joined.back().until) {
      joined.back().until =
          wait.until ? std::optional(std::max(*wait.until, *joined.back().until)) : std::nullopt;
    }
  }
  std::vector<alerts::Episode> episodes;
  for (const Wait& wait : joined) episodes.push_back(episode_of(wait));
  return episodes;
}

}  // namespace antherd::outbox
