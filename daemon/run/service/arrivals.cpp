// How old readings are when they come (weather/arrivals.hpp), as the desk sees it and the store
// keeps it; and what becomes of rows that were ahead of a clock which is put forward later.
#include <nlohmann/json.hpp>

#include "edge/station/limits.hpp"
#include "run/service/desk_work.hpp"
#include "run/service/log.hpp"

namespace antherd::service {
namespace {

using nlohmann::json;

constexpr Seconds a_step = station::limits::ahead;  // between two turns
constexpr std::size_t most_hours = 24;

std::string key_of(const std::string& station) { return "arrivals/" + station; }

std::string text_of(const weather::Arrivals& arrivals) {
  json hours = json::array();
  for (const auto& hour : arrivals.hours()) {
    hours.push_back({hour.hour.time_since_epoch().count(), hour.came, hour.youngest.count(),
                     hour.oldest.count(), hour.refused, hour.least_ahead.count()});
  }
  json all = {{"hours", hours}};
  if (const auto& last = arrivals.last()) {
    all["last"] = {last->at.time_since_epoch().count(), last->age.count()};
  }
  return all.dump();
}

/// What cannot be read begins anew: it is a day's bookkeeping.
weather::Arrivals arrivals_of(const std::string& text) {
  try {
    const json all = json::parse(text);
    std::vector<weather::Arrivals::Hour> hours;
    for (const json& row : all.at("hours")) {
      weather::Arrivals::Hour hour;
      hour.hour = HourStart{std::chrono::hours{row.at(0).get<int>()}};
      hour.came = row.at(1).get<int>();
      hour.youngest = Seconds{row.at(2).get<long long>()};
      hour.oldest = Seconds{row.at(3).get<long long>()};
      hour.refused = row.at(4).get<int>();
      hour.least_ahead = Seconds{row.at(5).get<long long>()};
      if (hours.size() < most_hours) hours.push_back(hour);
    }
    std::optional<weather::Arrival> last;
    if (all.contains("last")) {
      const json& row = all.at("last");
      last = weather::Arrival{Instant{Seconds{row.at(0).get<long long>()}},
                              Seconds{row.at(1).get<long long>()}};
    }
    return {std::move(hours), last};
  } catch (const json::exception&) {
    return {};
  }
}

}  // namespace

weather::Arrivals stored_arrivals(const store::Store& store, const std::string& station) {
  const auto note = store.note(key_of(station));
  return note && *note ? arrivals_of(**note) : weather::Arrivals{};
}

/// At a start. The clock may have been put right meanwhile: what was ahead is looked at again.
void DeskWork::remember_arrivals(const std::string& name, Source& source, Keeper& keeper,
                                 Instant now) const {
  source.arrivals = stored_arrivals(store_, name);
  if (source.arrivals.any_refused()) {
    source.arrivals.forget_refused();
    source.bookmarks.clear();
  }
  source.newest = keeper.lookout().last_sample(name, now + station::limits::ahead);
  keeper.lookout().set_arrivals(name, source.arrivals);
}

/// Only of what comes while the service runs by a clock that is set, and goes on from the newest
/// reading: a backlog says nothing of a station's clock.
store::Notes DeskWork::note_arrivals(const std::string& name, const station::Readings& readings,
                                     Instant now) {
  Source& source = sources_.at(name);
  const weather::Station& station = settings_->station(name)->station;
  std::optional<Instant> newest = source.newest;
  for (const auto& sample : readings.samples) {
    if (sample.time > now + station::limits::ahead) continue;  // no clock set: a stray
    if (!newest || sample.time > *newest) newest = sample.time;
  }
  const bool goes_on = source.newest && newest > source.newest;
  if (newest != source.newest) source.heard = now - Seconds{ahead_.load()};
  source.newest = newest;
  if (!clock_set_) return {};
  if (readings.ahead > 0) source.arrivals.refused(now, readings.ahead, readings.least_ahead);
  if (goes_on && !settling_since_) {
    const bool at_start = station.stamp == weather::Stamp::start;
    source.arrivals.came({now, now - (*newest + (at_start ? station.interval : Seconds{0}))});
  } else if (readings.ahead == 0) {
    return {};
  }
  keeper_->lookout().set_arrivals(name, source.arrivals);
  return {{key_of(name), text_of(source.arrivals)}};
}

/// Between two turns lies a sleep of the computer, or its clock was put forward. Of the stations
/// that are polled nothing can be known: they are asked before any is called silent. And rows that
/// were refused as ahead stand in another light: the files that hold them are read anew.
void DeskWork::mind_step(Instant now, bool clock_set) {
  if (!clock_set) return;
  const bool forward = last_turn_ && now - *last_turn_ > a_step;
  last_turn_ = now;
  if (!forward) return;
  for (const auto& station : settings_->stations) {
    if (!station.http) continue;
    Source& source = sources_.at(station.station.name);
    source.answered = false;
    source.next_poll = now;
    if (!settling_since_) settling_since_ = now;
  }
  for (auto& [name, source] : sources_) {
    if (!source.arrivals.any_refused()) continue;
    source.arrivals.forget_refused();
    source.bookmarks.clear();
    keeper_->lookout().set_arrivals(name, source.arrivals);
    look_due_ = true;
    log_info(name +
             ": the computer's clock was put forward; rows that it had refused as ahead are "
             "read again");
  }
}

}  // namespace antherd::service
