// The time that the desk works by; see desk_work.hpp. A small computer wakes in 1970 or at its last
// shutdown, and without a network nobody sets its clock: the stations' time serves then.
#include "run/service/working_time.hpp"

#include <algorithm>

#include "run/service/desk_work.hpp"
#include "run/service/farm.hpp"

namespace antherd::service {

std::optional<Instant> newest_reading_believed(const settings::Settings& settings,
                                               const store::Store& store) {
  std::optional<Instant> newest;
  for (const auto& station : settings.stations) {
    std::vector<Instant> times;
    auto last = store.last_sample(station.station.name);
    while (last && *last && times.size() < times_in_question) {
      times.push_back(**last);
      last = store.last_sample(station.station.name, times.back());
    }
    if (times.size() < 2) continue;  // one alone may be a stray
    std::reverse(times.begin(), times.end());
    const auto time = newest_believed(times, station.station.interval);
    if (time && (!newest || *time > *newest)) newest = time;
  }
  return newest;
}

bool cannot_be(Instant shown, Instant known) {
  return shown < known || shown > known + plausible_pause;
}

/// The newest time that the store knows of: readings, and what was said not long after them.
std::optional<Instant> DeskWork::known_time() const {
  const auto readings = newest_reading_believed(*settings_, store_);
  auto known = readings;
  const auto said = store_.said(Instant{});
  for (std::size_t i = 0; said && i < said->size(); ++i) {
    const Instant at = (*said)[i].at;
    const bool fits = !readings || at < *readings + plausible_pause;
    if (fits && (!known || at > *known)) known = at;
  }
  return known;
}

void DeskWork::mind_clock(Instant now, bool clock_set, std::optional<Instant> known) {
  clock_set_ = clock_set;
  never_set_ = never_set_ && !clock_set;
  if (clock_set) {
    ahead_ = 0;
  } else if (known) {
    if (cannot_be(working(now), *known)) ahead_ = (*known - now).count();
  }
}

/// A clock that runs hours ahead until it is set must not make each station silent at every start:
/// they are waited for from the start on, and from each new reading. Once it was set the time goes
/// on rightly without it.
void DeskWork::mind_waiting() {
  for (const auto& [name, source] : sources_) {
    const auto from = never_set_ ? std::optional(working(source.heard)) : std::nullopt;
    keeper_->lookout().set_waited_from(name, from);
  }
}

}  // namespace antherd::service
