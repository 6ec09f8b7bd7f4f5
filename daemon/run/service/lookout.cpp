// See lookout.hpp.
#include "run/service/lookout.hpp"

#include <algorithm>
#include <tuple>
#include <utility>

#include "core/alerts/stations.hpp"
#include "edge/station/limits.hpp"
#include "run/service/farm.hpp"

namespace antherd::service {
namespace {

constexpr auto sample_times_kept = std::chrono::days{10};

/// The newest of sorted times up to a moment.
std::optional<Instant> newest_until(const std::vector<Instant>& times, Instant until) {
  const auto later = std::upper_bound(times.begin(), times.end(), until);
  return later == times.begin() ? std::nullopt : std::optional(*std::prev(later));
}

void keep_times(std::vector<Instant>& kept, const std::vector<Instant>& times, Seconds interval) {
  if (times.empty()) return;
  kept.insert(kept.end(), times.begin(), times.end());
  std::sort(kept.begin(), kept.end());
  kept.erase(std::unique(kept.begin(), kept.end()), kept.end());
  const Instant oldest = *newest_believed(kept, interval) - sample_times_kept;
  kept.erase(kept.begin(), std::lower_bound(kept.begin(), kept.end(), oldest));
}

/// Heat ends by the rules at midnight, and sprinklers are counted when they stop: neither is worth
/// a sleep, both are told at six.
bool wakes_nobody(const alerts::Telling& telling) {
  const bool heat_over =
      telling.kind == alerts::Kind::heat && telling.saying == alerts::Saying::eased;
  return heat_over || telling.kind == alerts::Kind::sprinkler_streak;
}

}  // namespace

Lookout::Lookout(std::shared_ptr<const settings::Settings> settings)
    : settings_(std::move(settings)), policy_(settings_->policy) {
  policy_.calendar = &settings_->calendar;
  for (const settings::Station& station : settings_->stations) {
    stations_[station.station.name].station = station.station;
  }
  for (const settings::FieldPlan& field : settings_->fields) {
    fields_[field.field.name].plan = plan_of(*settings_, field);
  }
}

void Lookout::replace_hours(const std::string& station, HourStart from, HourStart to,
                            std::vector<weather::Hour> fresh) {
  StationMemory& memory = stations_.at(station);
  auto& hours = memory.hours;
  const auto before = [](const weather::Hour& hour, HourStart start) { return hour.start < start; };
  const auto first = std::lower_bound(hours.begin(), hours.end(), from, before);
  const auto last = std::lower_bound(first, hours.end(), to, before);
  const bool same = std::equal(first, last, fresh.begin(), fresh.end());
  if (same) return;
  const auto unchanged = static_cast<std::size_t>(first - hours.begin());
  const auto at = hours.erase(first, last);
  hours.insert(at, std::make_move_iterator(fresh.begin()), std::make_move_iterator(fresh.end()));
  judge_anew(station, memory, unchanged);
}

/// A late hour may change what is to be thought of later ones: the first that is not as it was
/// decides what is folded again. New hours go on from a checkpoint a few days back.
/// @param unchanged  so many hours at the beginning are as they were
void Lookout::judge_anew(const std::string& name, StationMemory& station, std::size_t unchanged) {
  constexpr std::size_t open_hours = 72, apart = 24;
  const std::size_t count = station.hours.size();
  const bool resume = station.checkpoint && station.checkpoint_at <= std::min(unchanged, count);
  const std::size_t from = resume ? station.checkpoint_at : 0;
  weather::Suspector suspector = resume ? *station.checkpoint : weather::Suspector(station.station);
  if (!resume) station.checkpoint.reset();
  const std::size_t next = count > open_hours ? count - open_hours : 0;
  std::vector<weather::Hour> fresh(station.hours.begin() + static_cast<std::ptrdiff_t>(from),
                                   station.hours.end());
  for (std::size_t i = from; i < count; ++i) {
    if (i == next && (!resume || next >= from + apart)) {
      station.checkpoint = suspector;
      station.checkpoint_at = i;
    }
    suspector.judge(fresh[i - from]);
  }
  const auto tail =
      station.judged.begin() + static_cast<std::ptrdiff_t>(std::min(from, station.judged.size()));
  const auto [old_hour, new_hour] =
      std::mismatch(tail, station.judged.end(), fresh.begin(), fresh.end());
  HourStart changed = HourStart::max();
  if (old_hour != station.judged.end()) changed = old_hour->start;
  if (new_hour != fresh.end()) changed = std::min(changed, new_hour->start);
  station.judged.erase(tail, station.judged.end());
  station.judged.insert(station.judged.end(), std::make_move_iterator(fresh.begin()),
                        std::make_move_iterator(fresh.end()));
  for (auto& [field_name, field] : fields_) {
    const auto& used = field.plan.field.stations;
    if (std::find(used.begin(), used.end(), name) == used.end()) continue;
    if (changed < field.folded_until) field.stale = true;
  }
}

void Lookout::set_diary(const std::string& field, field::Diary diary) {
  FieldMemory& memory = fields_.at(field);
  memory.diary = season::DiaryView(std::move(diary), memory.plan.place());
  memory.stale = true;
}

void Lookout::add_sample_times(const std::string& station, const std::vector<Instant>& times) {
  StationMemory& memory = stations_.at(station);
  keep_times(memory.times, times, memory.station.interval);
}

void Lookout::add_bare_times(const std::string& station, const std::vector<Instant>& times) {
  StationMemory& memory = stations_.at(station);
  keep_times(memory.bare_times, times, memory.station.interval);
}

void Lookout::add_samples(const std::string& station, const std::vector<weather::Sample>& samples) {
  std::vector<Instant> times, bare;
  for (const auto& sample : samples) (sample.temperature ? times : bare).push_back(sample.time);
  add_sample_times(station, times);
  add_bare_times(station, bare);
}

void Lookout::set_ledger(std::vector<alerts::Said> said) {
  said_ = std::move(said);
  for (const alerts::Said& entry : said_) last_place_ = std::max(last_place_, entry.place);
}

void Lookout::take_seen(const std::vector<alerts::Said>& stored) {
  // Entry by entry, as a restart would read it: what was said since the mark is not seen by it.
  const auto key = [](const alerts::Said& entry) {
    return std::tie(entry.episode, entry.level, entry.saying, entry.at, entry.about);
  };
  for (const alerts::Said& theirs : stored) {
    if (!theirs.seen) continue;
    for (alerts::Said& ours : said_) {
      if (key(ours) == key(theirs)) ours.seen = true;
    }
  }
}

void Lookout::set_source_news(const std::string& station, SourceNews news) {
  stations_.at(station).news = std::move(news);
}

void Lookout::set_waited_from(const std::string& station, std::optional<Instant> from) {
  stations_.at(station).waited_from = from;
}

void Lookout::set_arrivals(const std::string& station, weather::Arrivals arrivals) {
  stations_.at(station).arrivals = std::move(arrivals);
}

void Lookout::fold_field(FieldMemory& field, const Closed& closed) {
  HourStart until = HourStart::max();
  for (const std::string& station : field.plan.field.stations) {
    until = std::min(until, closed.at(station));
  }
  if (field.plan.field.harvested) {
    const Instant end =
        settings_->calendar.start_of(*field.plan.field.harvested + std::chrono::days{2});
    until = std::min(until, antherd::hour_of(end));
  }
  season::StationHours hours;
  for (const std::string& station : field.plan.field.stations) {
    hours.emplace_back(stations_.at(station).judged);
  }
  // A clock that stood far ahead: the season was folded into days that never were.
  const HourStart due = std::max(until, field.plan.first_hour());
  if (field.folded_until - due > std::chrono::days{1}) field.stale = true;
  if (field.stale || field.folded_until == HourStart{}) {
    field.state = season::fold(field.plan, field.diary, hours, until);
    field.folded_until = due;
    field.stale = false;
    return;
  }
  season::HourPicker picker(hours);
  for (; field.folded_until < until; field.folded_until += std::chrono::hours{1}) {
    const auto picked = picker.pick(field.folded_until);
    season::advance(
        field.state, field.plan, field.diary,
        season::air_at_field(field.plan, field.folded_until, picked.hour, picked.station));
  }
}

Turn Lookout::turn(Instant now, const Closed& closed, bool clock_set) {
  clock_set_ = clock_set;
  episodes_.clear();
  std::vector<alerts::Notice> notices;
  for (auto& [name, field] : fields_) {
    fold_field(field, closed);
    episodes_.insert(episodes_.end(), field.state.episodes.begin(), field.state.episodes.end());
    notices.insert(notices.end(), field.state.notices.begin(), field.state.notices.end());
  }
  for (const auto& [name, station] : stations_) gather_station_episodes(station, now);
  episodes_.insert(episodes_.end(), mail_troubles_.begin(), mail_troubles_.end());

  Turn turn;
  turn.tellings = alerts::decide(episodes_, notices, said_, policy_, now);
  std::erase_if(turn.tellings, [&](const alerts::Telling& telling) {
    return wakes_nobody(telling) && alerts::awake(now, &settings_->calendar) != now;
  });
  // "Still hot" is said on a hot afternoon, not in the cool morning after it: a reminder of heat
  // waits until today has a level of its own.
  std::erase_if(turn.tellings, [&](const alerts::Telling& telling) {
    const bool reminder =
        telling.kind == alerts::Kind::heat && telling.saying == alerts::Saying::reminder;
    return reminder &&
           season::day_so_far(fields_.at(telling.subject).state.heat).level == risk::Level::none;
  });
  if (turn.tellings.empty()) return turn;
  for (const alerts::Telling& telling : turn.tellings) {
    turn.said.push_back(alerts::record_of(telling, now));
    turn.said.back().place = ++last_place_;
  }
  turn.letters = letters::compose(turn.tellings, settings_->recipients, desk(now));
  said_.insert(said_.end(), turn.said.begin(), turn.said.end());
  return turn;
}

letters::StationStory Lookout::story_of(const StationMemory& station, Instant now) const {
  letters::StationStory story;
  story.station = station.station.name;
  const Instant until = now + station::limits::ahead;
  story.last_reading = last_sample(station.station.name, until);
  story.no_temperature = lacks_temperature(station.station.name, now);
  story.fields = fields_of(*settings_, station.station.name);
  for (const std::string& name : story.fields) {
    if (fields_.at(name).state.crop.part == season::Part::window) {
      story.fields_in_window.push_back(name);
    }
  }
  for (const std::string& name : story.fields) {
    for (const std::string& other : settings_->field(name)->field.stations) {
      const auto last = last_sample(other, until);
      const bool fresh = last && now - *last < settings_->station(other)->station.silent_after;
      if (other == station.station.name || !fresh) continue;
      story.stand_in[name] = other;
      break;
    }
  }
  const settings::Station* setting = settings_->station(station.station.name);
  if (setting != nullptr) story.source = setting->source();
  story.refused_rows = station.news.refused_rows_24;
  story.last_trouble = station.news.last_trouble;
  story.clock = station.arrivals.doubt(now, station.station.interval);
  story.last_arrival = station.arrivals.last();
  const Instant since = now - std::chrono::days{1};
  for (auto hour = station.judged.rbegin(); hour != station.judged.rend(); ++hour) {
    if (Instant(hour->start) < since) break;
    if (Instant(hour->start) > now) continue;
    story.flags_24.insert(story.flags_24.end(), hour->flags.begin(), hour->flags.end());
  }
  return story;
}

letters::Desk Lookout::desk(Instant now) const {
  letters::Desk desk;
  desk.farm = settings_->farm;
  desk.calendar = &settings_->calendar;
  desk.now = now;
  desk.units = settings_->units;
  desk.clock_set = clock_set_;
  desk.remind_after = policy_.remind_after;
  desk.exercise = settings_->exercise;
  bool in_window = false;
  for (const auto& [name, field] : fields_) {
    desk.heat_rules[name] = field.plan.rules.heat;
    desk.fields[name] = season::status(field.state, field.plan, field.diary);
    in_window = in_window || field.state.crop.part == season::Part::window;
  }
  for (const auto& [name, station] : stations_) desk.stations[name] = story_of(station, now);
  if (settings_->mail) {
    if (in_window) desk.next_daily = next_daily(*settings_, now);
    desk.next_weekly = next_weekly(*settings_, now);
  }
  return desk;
}

const season::State& Lookout::state(const std::string& field) const {
  return fields_.at(field).state;
}
const season::Plan& Lookout::plan(const std::string& field) const { return fields_.at(field).plan; }
const season::DiaryView& Lookout::diary(const std::string& field) const {
  return fields_.at(field).diary;
}
const std::vector<weather::Hour>& Lookout::station_hours(const std::string& station) const {
  return stations_.at(station).hours;
}

const std::vector<weather::Hour>& Lookout::judged_hours(const std::string& station) const {
  return stations_.at(station).judged;
}

season::StationHours Lookout::hours_of(const std::string& field) const {
  season::StationHours hours;
  for (const std::string& station : fields_.at(field).plan.field.stations) {
    hours.emplace_back(stations_.at(station).judged);
  }
  return hours;
}

std::optional<Instant> Lookout::last_sample(const std::string& station, Instant until) const {
  return newest_until(stations_.at(station).times, until);
}

std::optional<Instant> Lookout::last_of_any(const std::string& station, Instant until) const {
  const auto bare = newest_until(stations_.at(station).bare_times, until);
  const auto last = last_sample(station, until);
  return last && bare ? std::max(last, bare) : (last ? last : bare);
}

bool Lookout::lacks_temperature(const std::string& station, Instant now) const {
  const StationMemory& memory = stations_.at(station);
  const Seconds patience = memory.station.silent_after;
  const auto bare = newest_until(memory.bare_times, now + station::limits::ahead);
  const auto whole = newest_until(memory.times, now + station::limits::ahead);
  return bare && now - *bare <= patience && (!whole || now - *whole >= patience);
}

std::optional<Instant> Lookout::time_of_stations() const {
  std::optional<Instant> newest;
  for (const auto& [name, station] : stations_) {
    for (const auto* times : {&station.times, &station.bare_times}) {
      const auto time = newest_in_company(*times, station.station.interval);
      if (time && (!newest || *time > *newest)) newest = time;
    }
  }
  return newest;
}

Instant next_daily(const settings::Settings& settings, Instant now) {
  const CivilDay today = settings.calendar.day_of(now);
  const std::chrono::minutes clock{settings.mail->daily_minute};
  const Instant due = settings.calendar.at(CivilTime(today) + clock);
  return due > now ? due : settings.calendar.at(CivilTime(today + std::chrono::days{1}) + clock);
}

Instant next_weekly(const settings::Settings& settings, Instant now) {
  const CivilDay today = settings.calendar.day_of(now);
  const std::chrono::minutes clock{settings.mail->weekly.minute};
  for (int ahead = 0; ahead <= 7; ++ahead) {
    const CivilDay day = today + std::chrono::days{ahead};
    const auto weekday = std::chrono::weekday{std::chrono::sys_days{day.time_since_epoch()}};
    if (weekday.iso_encoding() != static_cast<unsigned>(settings.mail->weekly.weekday)) continue;
    const Instant due = settings.calendar.at(CivilTime(day) + clock);
    if (due > now) return due;
  }
  return settings.calendar.at(CivilTime(today + std::chrono::days{7}) + clock);
}

}  // namespace antherd::service
