// antherd replay: a past season through the very same fold and the very same decisions. Sends
// nothing, writes nothing.
#include <algorithm>
#include <iostream>
#include <map>
#include <nlohmann/json.hpp>
#include <set>

#include "core/alerts/stations.hpp"
#include "core/crop/development.hpp"
#include "core/season/fold.hpp"
#include "run/commands/common.hpp"

namespace antherd::commands {
namespace {

using nlohmann::ordered_json;

/// One line of the replay and its place in time.
struct Event {
  Instant at;
  int order = 0;  // of lines at one moment
  ordered_json line;
};
using Events = std::vector<Event>;

template <class Value>
ordered_json or_null(const std::optional<Value>& value) {
  return value ? ordered_json(*value) : ordered_json(nullptr);
}
ordered_json number(const std::optional<double>& value, int decimals = 4) {
  return value ? ordered_json(rounded(*value, decimals)) : ordered_json(nullptr);
}

void add_days(Events& events, const season::Plan& plan, const season::Chronicle& chronicle) {
  for (const season::HeatDay& day : chronicle.days) {
    ordered_json line;
    line["what"] = "day";
    line["date"] = day_text(day.date);
    line["field"] = plan.field.name;
    line["tmax_c"] = day.t_max ? ordered_json(rounded(day.t_max->value, 4)) : ordered_json(nullptr);
    line["hours_32"] = or_null(day.hours_32);
    line["hours_35"] = or_null(day.hours_35);
    line["hours_38"] = or_null(day.hours_38);
    line["degree_hours"] = number(day.degree_hours);
    line["heat_level"] = static_cast<int>(day.level);
    line["in_window"] = day.in_window;
    line["flower_share"] = rounded(day.flower_share, 6);
    line["ks"] = number(day.ks);
    events.push_back({plan.calendar.start_of(day.date + std::chrono::days{1}), 2, line});
  }
  for (const season::HumidDay& day : chronicle.humid_days) {
    ordered_json line;
    line["what"] = "humid_day";
    line["date"] = day_text(day.date);
    line["field"] = plan.field.name;
    line["infection"] = number(day.infection);
    line["water"] = or_null(day.water);
    line["dry_out"] = or_null(day.dry_out);
    line["score"] = rounded(day.score, 4);
    line["r"] = number(day.r);
    line["level"] = static_cast<int>(day.level);
    const auto evening = std::chrono::floor<Seconds>(
        std::chrono::duration<double>(18.0 * 3600 - plan.field.longitude.value * 240.0));
    events.push_back({Instant{day.date.time_since_epoch()} + evening, 3, line});
  }
}

ordered_json alert_line(const alerts::Episode& episode, const alerts::Change& change) {
  ordered_json line;
  line["what"] = "alert";
  line["at"] = utc_text(change.at);
  line["field"] = episode.subject;
  line["kind"] = alerts::name_of(episode.kind);
  line["phase"] = alerts::name_of(change.phase);
  line["severity"] = change.phase == alerts::Phase::closed
                         ? ordered_json(nullptr)
                         : ordered_json(alerts::name_of(alerts::severity_of(change.level)));
  line["certainty"] = alerts::name_of(change.certainty);
  line["episode"] = alerts::identity(episode.kind, episode.subject, episode.start);
  line["figure"] = number(change.figure);
  return line;
}

void add_stages(Events& events, const season::Plan& plan, const season::State& state) {
  for (std::size_t i = 0; i < season::told_stages.size(); ++i) {
    if (!state.crop.reached[i]) continue;
    const double needed =
        crop::requirement(season::told_stages[i], plan.traits.needs).value * state.crop.belief.mean;
    const auto crossed = season::crossed_on(state.crop, needed);
    const CivilDay date = crossed.value_or(*state.crop.reached[i]);
    ordered_json line;
    line["what"] = "stage";
    line["field"] = plan.field.name;
    line["stage"] = season::told_stages[i];
    line["date"] = day_text(date);
    events.push_back({plan.calendar.start_of(date), 1, line});
  }
}

Events events_of(const service::Lookout& lookout, const std::string& name, HourStart until,
                 ordered_json& sum) {
  const season::Plan& plan = lookout.plan(name);
  Events events;
  ordered_json season_line;
  season_line["what"] = "season";
  season_line["field"] = name;
  season_line["sown"] = day_text(plan.field.sown);
  season_line["crop_type"] = plan.traits.name;
  events.push_back({Instant::min(), 0, season_line});
  season::Chronicle chronicle;
  const season::State state =
      season::fold(plan, lookout.diary(name), lookout.hours_of(name), until, &chronicle);
  add_days(events, plan, chronicle);
  add_stages(events, plan, state);
  for (const alerts::Episode& episode : state.episodes) {
    for (const auto& change : episode.changes) {
      events.push_back({change.at, 4, alert_line(episode, change)});
    }
  }
  sum["what"] = "sum";
  sum["field"] = name;
  sum["days"] = chronicle.days.size();
  sum["hours_seen"] = state.crop.hours - state.crop.unseen;
  sum["hours_unseen"] = state.crop.unseen;
  sum["hot_days"] = state.heat.hot_days;
  const season::Exposure met = season::exposure_of(state.heat, state.crop, plan);
  sum["exposed_share"] = rounded(met.exposed, 6);
  sum["affected_low"] = rounded(met.low, 6);
  sum["affected_high"] = rounded(met.high, 6);
  return events;
}

/// Hour by hour with only what was known then: each fact arrives at its own time.
class Turner {
 public:
  Turner(const Past& past, HourStart until) : past_(past), until_(until), lookout_(past.settings) {
    for (const auto& [name, hours] : past.hours) {
      lookout_.replace_hours(name, HourStart::min(), HourStart::max(), hours);
    }
    for (const auto& plan : past.settings->fields) {
      const auto diary = past.diaries.find(plan.field.name);
      if (diary != past.diaries.end()) lookout_.set_diary(plan.field.name, diary->second);
    }
  }

  /// @param look  (time, turn, the lookout)
  template <class Look>
  void run(Look look) {
    HourStart from = until_;
    for (const auto& plan : past_.settings->fields) {
      from = std::min(from, lookout_.plan(plan.field.name).first_hour());
    }
    std::set<Instant> moments = silences_begin();
    for (HourStart h = from + std::chrono::hours{1}; h <= until_; h += std::chrono::hours{1}) {
      moments.insert(h);
    }
    for (const Instant moment : moments) {
      if (moment <= Instant(from) || moment > Instant(until_)) continue;
      service::Closed closed;
      for (const auto& station : past_.settings->stations) {
        closed[station.station.name] = hour_of(moment);
        feed(station.station.name, moment);
      }
      look(moment, lookout_.turn(moment, closed), lookout_);
    }
  }

 private:
  /// A silence shorter than an hour must be noticed in time too.
  std::set<Instant> silences_begin() const {
    std::set<Instant> moments;
    for (const auto& station : past_.settings->stations) {
      const weather::Station& s = station.station;
      const alerts::StationWatch watch{s.name, s.interval, s.silent_after, s.arrives_every,
                                       &past_.settings->calendar};
      const auto times = past_.times.find(s.name);
      if (times == past_.times.end()) continue;
      const Seconds patience = alerts::patience_of(watch);
      for (const auto& gap : alerts::silences_from(times->second, patience)) {
        moments.insert(gap.last + patience);
      }
    }
    return moments;
  }

  using Times = std::map<std::string, std::vector<Instant>>;
  using Places = std::map<std::string, std::size_t>;

  void feed(const std::string& station, Instant until) {
    lookout_.add_sample_times(station, fresh_of(past_.times, fed_, station, until));
    lookout_.add_bare_times(station, fresh_of(past_.bare_times, fed_bare_, station, until));
  }
  static std::vector<Instant> fresh_of(const Times& all, Places& places, const std::string& station,
                                       Instant until) {
    std::vector<Instant> fresh;
    const auto times = all.find(station);
    if (times == all.end()) return fresh;
    auto& fed = places[station];
    for (; fed < times->second.size() && times->second[fed] <= until; ++fed) {
      fresh.push_back(times->second[fed]);
    }
    return fresh;
  }

  const Past& past_;
  HourStart until_;
  service::Lookout lookout_;
  Places fed_, fed_bare_;
};

void print_lines(const Past& past, HourStart until) {
  const service::Lookout lookout = lookout_over(past);
  Events events;
  std::vector<ordered_json> sums;
  for (const auto& plan : past.settings->fields) {
    ordered_json sum;
    Events more = events_of(lookout, plan.field.name, until, sum);
    std::move(more.begin(), more.end(), std::back_inserter(events));
    sums.push_back(sum);
  }
  std::set<std::string> seen;  // station episodes are told as they come, each change once
  Turner(past, until).run([&](Instant, const service::Turn&, const service::Lookout& at) {
    for (const alerts::Episode& episode : at.episodes()) {
      const bool of_station =
          episode.kind == alerts::Kind::no_data || episode.kind == alerts::Kind::doubtful_sensor;
      if (!of_station) continue;
      for (const alerts::Change& change : episode.changes) {
        ordered_json line = alert_line(episode, change);
        if (seen.insert(line.dump()).second) events.push_back({change.at, 5, std::move(line)});
      }
    }
  });
  std::stable_sort(events.begin(), events.end(), [](const Event& a, const Event& b) {
    return a.at != b.at ? a.at < b.at : a.order < b.order;
  });
  for (const Event& event : events) std::cout << event.line.dump() << "\n";
  for (const ordered_json& sum : sums) std::cout << sum.dump() << "\n";
}

void print_letters(const Past& past, HourStart until, bool full) {
  const Calendar& calendar = past.settings->calendar;
  const std::string reader = past.settings->recipients.front().address;
  int count = 0;
  std::cout << "What would have been said, and when (" << past.settings->farm << ", farm time, to "
            << reader << "):\n\n";
  Turner(past, until).run([&](Instant now, const service::Turn& turn, const service::Lookout&) {
    for (const letters::Letter& letter : turn.letters) {
      if (letter.recipient != reader) continue;
      ++count;
      std::cout << farm_text(calendar, now) << "  " << letter.subject << "\n";
      if (full) std::cout << "\n" << letter.body << "\n" << std::string(78, '-') << "\n";
    }
  });
  std::cout << "\n" << count << (count == 1 ? " letter" : " letters") << ". Nothing was sent.\n";
  const service::Lookout lookout = lookout_over(past);
  for (const auto& plan : past.settings->fields) {
    ordered_json sum;
    events_of(lookout, plan.field.name, until, sum);
    std::cout << plan.field.name << ": " << sum["hours_seen"] << " hours seen, "
              << sum["hours_unseen"] << " not seen; " << sum["hot_days"]
              << " days in the flowering window with an hour at or above the severe threshold.\n";
  }
}

/// The end of the last hour that counts: a reading that only begins an hour is no hour, and behind
/// the last reading nothing is known, not even a silence.
HourStart end_of(const Past& past) {
  HourStart end = HourStart::min();
  for (const auto& station : past.settings->stations) {
    const auto last = past.last(station.station.name);
    if (!last) continue;
    // 20 min: with three quarters of its readings an hour counts.
    const Seconds reach = std::max<Seconds>(station.station.interval, std::chrono::minutes{20});
    end = std::max(end, hour_of(*last + reach));
  }
  return end;
}

}  // namespace

Exit replay(const Invocation& call) {
  const SettingsPointer settings = read_settings(call);
  if (!settings) return Exit::usage;
  auto past = read_past(settings, call);
  if (!past) return say(past.failure());
  const auto last = past->last();
  if (!last || past->settings->fields.empty()) {
    return say(Failure{"replay", settings->path, "no station gave a reading", "nothing was run"});
  }
  if (past->settings->recipients.empty()) {
    settings::Settings with_reader = *past->settings;
    with_reader.recipients.push_back({.address = "log",
                                      .fields = {},
                                      .brief = false,
                                      .language = letters::Language::english,
                                      .quiet = {}});
    past->settings = std::make_shared<const settings::Settings>(std::move(with_reader));
  }
  const HourStart until = end_of(*past);
  if (call.lines) {
    print_lines(*past, until);
  } else {
    print_letters(*past, until, call.full);
  }
  return Exit::done;
}

}  // namespace antherd::commands
