// Episodes about stations as the lookout sees them; see lookout.hpp.
#include <algorithm>
#include <map>

#include "core/alerts/stations.hpp"
#include "edge/station/limits.hpp"
#include "run/service/farm.hpp"
#include "run/service/lookout.hpp"

namespace antherd::service {
namespace {

using std::chrono::days;

constexpr auto season_lasts_after_ripe = days{30};
constexpr auto doubt_looks_back = days{60};  // longer, and its start would slide

/// When the fields of a station need it.
struct Need {
  std::vector<alerts::Span> in_window, watched;
};

void add_need(Need& need, const season::Plan& plan, const season::State& state, Instant now) {
  const Calendar& calendar = plan.calendar;
  const Instant open_end = now + days{1};
  Instant end = open_end;
  if (plan.field.harvested) {
    end = calendar.start_of(*plan.field.harvested + days{1});
  } else if (state.ripe_since) {
    end = calendar.start_of(*state.ripe_since + season_lasts_after_ripe);
  } else if (state.watch == season::Watch::sown_long_ago) {
    end = calendar.start_of(plan.field.sown + days{241});
  }
  need.watched.push_back({plan.first_hour(), end});
  if (!state.crop.window_first) return;
  const Instant closes =
      state.crop.window_last ? calendar.start_of(*state.crop.window_last + days{1}) : open_end;
  need.in_window.push_back({calendar.start_of(*state.crop.window_first), closes});
}

/// Half of an hour's values failed, or all that counted.
bool fails(const weather::Hour& hour, const weather::Flag& flag) {
  if (flag.reason == weather::Reason::unconfirmed) return false;
  return flag.count * 2 >= std::max(1, hour.n);
}

std::vector<alerts::FailingHour> failing_hours(const std::vector<weather::Hour>& hours,
                                               Instant now) {
  const HourStart from = hour_of(now - doubt_looks_back);
  const auto first = std::lower_bound(hours.begin(), hours.end(), from,
                                      [](const auto& h, HourStart s) { return h.start < s; });
  std::map<std::string, bool> checks;
  for (auto hour = first; hour != hours.end() && end_of(hour->start) <= now; ++hour) {
    for (const weather::Flag& flag : hour->flags) {
      if (fails(*hour, flag)) checks[weather::describe(flag)] = true;
    }
  }
  std::vector<alerts::FailingHour> result;
  for (const auto& [name, any] : checks) {
    const std::string& check = name;  // clang 14 lets no lambda take a part of a binding
    for (auto hour = first; hour != hours.end() && end_of(hour->start) <= now; ++hour) {
      const bool failing =
          std::any_of(hour->flags.begin(), hour->flags.end(), [&](const weather::Flag& flag) {
            return fails(*hour, flag) && weather::describe(flag) == check;
          });
      result.push_back({hour->start, check, failing, true});
    }
  }
  return result;
}

}  // namespace

/// The beginning of a silence of the station that was told and not told to be over.
std::optional<Instant> Lookout::silence_told(const std::string& station) const {
  const alerts::Said* told = nullptr;
  for (const alerts::Said& said : said_) {
    const bool of_it = said.kind == alerts::Kind::no_data && said.subject == station;
    if (of_it && (told == nullptr || said.place >= told->place)) told = &said;
  }
  const bool lasts = told != nullptr && told->saying != alerts::Saying::ended &&
                     told->saying != alerts::Saying::learned_late;
  return lasts ? std::optional(told->start) : std::nullopt;
}

/// A station whose clock is behind, or whose values come late, is not silent anew with each
/// reading. What was told of and still comes later than the patience is the same silence; what
/// comes late but within it is silent when it is later than usual. Only the last stretch, that of
/// now, is touched: which silences there were depends on the samples alone.
void Lookout::heed_arrivals(const StationMemory& memory, Seconds patience, Instant now,
                            std::vector<alerts::Silence>& gaps) const {
  const auto& last = memory.arrivals.last();
  if (gaps.empty() || gaps.back().back || !last) return;
  if (last->age <= memory.station.interval + weather::late_on_arrival) return;
  alerts::Silence& open = gaps.back();
  if (last->age <= patience) {
    if (now - open.last <= patience + last->age) gaps.pop_back();
    return;
  }
  const auto told = silence_told(memory.station.name);
  if (told && now - open.last > patience) open.last = std::min(open.last, *told);
}

void Lookout::gather_station_episodes(const StationMemory& memory, Instant now) {
  const weather::Station& station = memory.station;
  Need need;
  std::optional<Instant> first_needed;
  for (const std::string& name : fields_of(*settings_, station.name)) {
    const FieldMemory& field = fields_.at(name);
    add_need(need, field.plan, field.state, now);
    const Instant sown = field.plan.first_hour();
    first_needed = first_needed ? std::min(*first_needed, sown) : sown;
  }
  if (!first_needed) return;
  alerts::StationWatch watch{station.name, station.interval, station.silent_after,
                             station.arrives_every, &settings_->calendar};
  std::vector<Instant> times;
  std::copy_if(memory.times.begin(), memory.times.end(), std::back_inserter(times),
               [&](Instant time) { return time <= now + station::limits::ahead; });
  std::vector<alerts::Silence> gaps = alerts::silences_from(times, alerts::patience_of(watch));
  heed_arrivals(memory, alerts::patience_of(watch), now, gaps);
  if (times.empty()) {
    // It never spoke: it should have since sowing, or since we were started.
    const Instant since = std::max(*first_needed, policy_.first_start.value_or(*first_needed));
    if (since < now) gaps.push_back({since, std::nullopt});
  }
  // By a clock that is not set a station is silent for as long as this desk has waited for it: who
  // knows how long that was before. What was told already stays told.
  if (memory.waited_from && !gaps.empty() && !gaps.back().back) {
    const auto told = silence_told(station.name);
    if (!told || *told < gaps.back().last) gaps.back().waited_from = memory.waited_from;
  }
  auto silent = alerts::silences(watch, gaps, need.in_window, need.watched, now);
  auto doubtful =
      alerts::doubtful(watch, failing_hours(memory.judged, now), need.in_window, need.watched, now);
  std::move(silent.begin(), silent.end(), std::back_inserter(episodes_));
  std::move(doubtful.begin(), doubtful.end(), std::back_inserter(episodes_));
}

}  // namespace antherd::service
