// The time that the desk works by; see desk_work.hpp. A small computer wakes in 1970 or at its last
// shutdown, and without a network nobody sets its clock: the stations' time serves then.
#include "run/service/desk_work.hpp"

namespace antherd::service {
namespace {

// An antherd that rests longer than this between two seasons may take a clock that is not set for
// one that is years ahead.
constexpr auto plausible_pause = std::chrono::days{400};

}  // namespace

/// The newest time that the store knows of: readings, and what was said not long after them.
std::optional<Instant> DeskWork::known_time() const {
  std::optional<Instant> known;
  const auto hear = [&](std::optional<Instant> at) {
    if (at && (!known || *at > *known)) known = at;
  };
  for (const auto& station : settings_->stations) {
    const auto last = store_.last_sample(station.station.name);
    if (last) hear(*last);
  }
  const auto said = store_.said(Instant{});
  const auto readings = known;
  for (std::size_t i = 0; said && i < said->size(); ++i) {
    const Instant at = (*said)[i].at;
    if (!readings || at < *readings + plausible_pause) hear(at);
  }
  return known;
}

void DeskWork::mind_clock(Instant now, bool clock_set, std::optional<Instant> known) {
  clock_set_ = clock_set;
  if (clock_set) {
    ahead_ = 0;
  } else if (known) {
    const Instant time = working(now);
    if (time < *known || time > *known + plausible_pause) ahead_ = (*known - now).count();
  }
}

}  // namespace antherd::service
