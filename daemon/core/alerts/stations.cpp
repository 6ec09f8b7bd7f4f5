// Silent and doubtful stations; see stations.hpp.
#include "core/alerts/stations.hpp"

#include <algorithm>
#include <map>

namespace antherd::alerts {

namespace {

constexpr int hours_to_doubt = 6;
constexpr int hours_to_trust = 24;  // a whole day: many faults come only by day or by night
constexpr Seconds night_begins{22 * 3600};
constexpr Seconds night_ends{6 * 3600};

// Trouble as it lasts, whoever needs the station.
struct Trouble {
  Instant start;  // of the first thing that counted
  Instant from;   // when it is plain
  std::optional<Instant> to;
  std::string detail;
};

// How one kind of trouble becomes episodes.
struct Manner {
  Kind kind = Kind::no_data;
  std::string station;
  Level in_window = Level::none;
  Level elsewhere = Level::none;
  const Calendar* sleep = nullptr;  // what would be said at night waits until morning
  bool counts_hours = false;        // the figure: hours since the start
};

std::vector<Span> joined(std::span<const Span> spans) {
  std::vector<Span> ordered(spans.begin(), spans.end());
  std::erase_if(ordered, [](const Span& span) { return span.to <= span.from; });
  std::sort(ordered.begin(), ordered.end(),
            [](const Span& a, const Span& b) { return a.from < b.from; });
  std::vector<Span> result;
  for (const Span& span : ordered) {
    if (!result.empty() && span.from <= result.back().to) {
      result.back().to = std::max(result.back().to, span.to);
    } else {
      result.push_back(span);
    }
  }
  return result;
}

void add(Episode& episode, Instant at, Level level, const Manner& manner, const Trouble& trouble) {
  Change change;
  change.at = at;
  change.level = level;
  change.detail = trouble.detail;
  if (manner.counts_hours) {
    change.figure = static_cast<double>((at - trouble.start).count()) / 3600.0;
  }
  if (!episode.changes.empty()) {
    change.phase = level > episode.level ? Phase::raised : Phase::lowered;
  }
  episode.level = level;
  episode.peak = std::max(episode.peak, level);
  episode.changes.push_back(std::move(change));
}

bool holds(const Span& span, Instant at) { return span.from <= at && at < span.to; }

void add_window_changes(Episode& episode, Instant opened, Instant end, const Manner& manner,
                        const Trouble& trouble, const std::vector<Span>& windows) {
  for (const Span& window : windows) {
    const Instant rise = awake(window.from, manner.sleep);
    if (rise > opened && rise < end && rise < window.to) {
      add(episode, rise, manner.in_window, manner, trouble);
    }
    if (window.to > opened && window.to < end && episode.level == manner.in_window) {
      add(episode, window.to, manner.elsewhere, manner, trouble);
    }
  }
}

// The episode of one trouble within one stretch in which the station is needed.
std::optional<Episode> episode_of(const Trouble& trouble, const Span& needed, const Manner& manner,
                                  const std::vector<Span>& windows, Instant now) {
  const Instant opened = awake(std::max(trouble.from, needed.from), manner.sleep);
  const bool ends = trouble.to && *trouble.to <= needed.to;
  const Instant end = ends ? *trouble.to : needed.to;
  if (opened >= end || opened > now) return std::nullopt;
  Episode episode;
  episode.kind = manner.kind;
  episode.subject = manner.station;
  // Trouble that outlasts a season is another episode in the next one.
  episode.start = std::max(trouble.start, needed.from);
  const bool inside = std::any_of(windows.begin(), windows.end(),
                                  [&](const Span& window) { return holds(window, opened); });
  add(episode, opened, inside ? manner.in_window : manner.elsewhere, manner, trouble);
  const Instant known = now == Instant::max() ? now : now + Seconds{1};
  add_window_changes(episode, opened, std::min(end, known), manner, trouble, windows);
  if (end <= now) {
    add(episode, end, Level::none, manner, trouble);
    episode.changes.back().phase = Phase::closed;
    if (!ends) episode.changes.back().detail = season_over;
    episode.closed = end;
  }
  return episode;
}

std::vector<Episode> episodes_of(const std::vector<Trouble>& troubles, const Manner& manner,
                                 std::span<const Span> in_window, std::span<const Span> watched,
                                 Instant now) {
  const std::vector<Span> windows = joined(in_window);
  const std::vector<Span> needs = joined(watched);
  std::vector<Episode> episodes;
  for (const Trouble& trouble : troubles) {
    for (const Span& needed : needs) {
      if (auto episode = episode_of(trouble, needed, manner, windows, now)) {
        episodes.push_back(std::move(*episode));
      }
    }
  }
  return episodes;
}

// One check's hours in time order → when it was doubtful.
std::vector<Trouble> troubles_of(const std::string& check, std::vector<const FailingHour*> hours) {
  std::sort(hours.begin(), hours.end(),
            [](const FailingHour* a, const FailingHour* b) { return a->hour < b->hour; });
  std::vector<Trouble> troubles;
  bool open = false;
  int run = 0;  // hours that speak for the other state
  Instant run_start;
  for (const FailingHour* hour : hours) {
    if (!hour->has_data) continue;
    if (hour->failing == open) {
      run = 0;
      continue;
    }
    if (run++ == 0) run_start = Instant(hour->hour);
    if (run < (open ? hours_to_trust : hours_to_doubt)) continue;
    run = 0;
    open = !open;
    if (open) {
      troubles.push_back(Trouble{run_start, end_of(hour->hour), std::nullopt, check});
    } else {
      troubles.back().to = end_of(hour->hour);
    }
  }
  return troubles;
}

// Troubles that overlap are one: it lasts until all are over.
std::vector<Trouble> together(std::vector<Trouble> troubles) {
  std::stable_sort(troubles.begin(), troubles.end(),
                   [](const Trouble& a, const Trouble& b) { return a.from < b.from; });
  std::vector<Trouble> result;
  for (const Trouble& trouble : troubles) {
    if (result.empty() || (result.back().to && *result.back().to <= trouble.from)) {
      result.push_back(trouble);
      continue;
    }
    Trouble& last = result.back();
    if (trouble.from == last.from) last.detail += "; " + trouble.detail;
    last.start = std::min(last.start, trouble.start);
    last.to = last.to && trouble.to ? std::optional(std::max(*last.to, *trouble.to)) : std::nullopt;
  }
  return result;
}

}  // namespace

Instant awake(Instant at, const Calendar* farm_time) {
  if (!farm_time) return at;
  const CivilTime reading = farm_time->civil(at);
  const CivilDay day = std::chrono::floor<std::chrono::days>(reading);
  const Seconds clock = reading - CivilTime(day);
  if (clock >= night_begins)
    return farm_time->at(CivilTime(day + std::chrono::days{1}) + night_ends);
  if (clock < night_ends) return farm_time->at(CivilTime(day) + night_ends);
  return at;
}

Seconds patience_of(const StationWatch& watch) {
  return std::max(watch.silent_after,
                  3 * watch.interval + std::max(Seconds{0}, watch.arrives_every - watch.interval));
}

std::vector<Silence> silences_from(std::span<const Instant> sample_times, Seconds patience) {
  std::vector<Instant> times(sample_times.begin(), sample_times.end());
  if (!std::is_sorted(times.begin(), times.end())) std::sort(times.begin(), times.end());
  std::vector<Silence> gaps;
  for (std::size_t i = 1; i < times.size(); ++i) {
    if (times[i] - times[i - 1] > patience) gaps.push_back(Silence{times[i - 1], times[i]});
  }
  if (!times.empty()) gaps.push_back(Silence{times.back(), std::nullopt});
  return gaps;
}

std::vector<Episode> silences(const StationWatch& watch, std::span<const Silence> gaps,
                              std::span<const Span> in_window, std::span<const Span> watched,
                              Instant now) {
  std::vector<Trouble> troubles;
  for (const Silence& gap : gaps) {
    const Instant waited_from = std::max(gap.last, gap.waited_from.value_or(gap.last));
    troubles.push_back(Trouble{gap.last, waited_from + patience_of(watch), gap.back, {}});
  }
  const Manner manner{Kind::no_data,   watch.station,  Level::severe,
                      Level::moderate, watch.calendar, true};
  return episodes_of(troubles, manner, in_window, watched, now);
}

std::vector<Episode> doubtful(const StationWatch& watch, std::span<const FailingHour> hours,
                              std::span<const Span> in_window, std::span<const Span> watched,
                              Instant now) {
  std::map<std::string, std::vector<const FailingHour*>> checks;
  for (const FailingHour& hour : hours) checks[hour.check].push_back(&hour);
  std::vector<Trouble> troubles;
  for (const auto& [check, said] : checks) {
    for (Trouble& trouble : troubles_of(check, said)) troubles.push_back(std::move(trouble));
  }
  const Manner manner{Kind::doubtful_sensor, watch.station,  Level::moderate,
                      Level::none,           watch.calendar, false};
  return episodes_of(together(std::move(troubles)), manner, in_window, watched, now);
}

}  // namespace antherd::alerts
