// What is judged at a season's end; see judge.hpp.
#include <algorithm>
#include <cmath>

#include "judge.hpp"
#include "run/service/farm.hpp"
#include "service/ground.hpp"

namespace simulation {

namespace {

struct Stored {
  std::optional<double> temperature;
};

std::map<Instant, Stored> samples_of(Witness& witness, const std::string& station) {
  std::map<Instant, Stored> found;
  witness.ask(
      "SELECT time, temperature FROM sample WHERE station = (SELECT id FROM station WHERE name = "
      "'" +
          station + "')",
      [&](sqlite3_stmt* row) {
        Stored stored;
        if (sqlite3_column_type(row, 1) != SQLITE_NULL) {
          stored.temperature = sqlite3_column_double(row, 1);
        }
        found[instant_at(row, 0)] = stored;
      });
  return found;
}

std::string at_text(const Judge&, Instant at) { return clock_text(Calendar(), at) + " UTC"; }

}  // namespace

void Judge::finish(service::DeskWork& desk, Witness& witness,
                   const std::vector<StationLife>& stations, const std::vector<Delivery>& taken,
                   Instant now) {
  judge_mail(witness, taken, now);
  for (const StationLife& station : stations) {
    const std::string name = station_name(station.number());
    judge_samples(witness, station, now);
    judge_hours(desk, witness, name, now);
    judge_gaps(desk, witness, name, now);
  }
  judge_replay(desk, now);
  judge_lowering(desk);
}

/// Every letter ended; what was taken twice was in doubt and said so.
void Judge::judge_mail(Witness& witness, const std::vector<Delivery>& taken, Instant now) {
  std::map<std::int64_t, std::vector<const Delivery*>> by_item;
  for (const Delivery& delivery : taken) by_item[delivery.item].push_back(&delivery);
  for (const auto& row : witness.letters_after(0)) {
    const std::string what = "\"" + row.subject + "\" to " + row.recipient;
    const auto& copies = by_item[row.id];
    if (row.state == "sent") {
      ++sent;
      if (settings_->mail->server && copies.empty()) {
        complaints_.add("nothing is lost", what + " is marked sent and no server took it");
      }
    } else if (row.state == "parked") {
      ++parked;
      if (row.answer.empty())
        complaints_.add("nothing is lost", what + " is parked without a word");
    } else if (row.state == "merged") {
      ++merged;
      if (identities_.count(row.digest) == 0) {
        complaints_.add("nothing is lost", what + " is named in a digest that is not there");
      }
    } else if (row.state != "waiting" || row.next_try <= now ||
               row.answer.find("quiet hours") == std::string::npos) {
      // A season may end within somebody's quiet hours.
      complaints_.add("nothing is lost", what + " is still " + row.state + ": " + row.answer);
    }
    for (std::size_t i = 1; i < copies.size(); ++i) {
      ++repeats;
      const Delivery& copy = *copies[i];
      if (copy.id != copies[0]->id) {
        complaints_.add("a repeat has its Message-ID", what + ": " + copy.id);
      }
      if (copy.body.find("You may already have this letter") == std::string::npos) {
        complaints_.add("a repeat says so", what + " was taken twice, the second unmarked");
      }
    }
  }
}

void Judge::judge_samples(Witness& witness, const StationLife& station, Instant now) {
  const std::string name = station_name(station.number());
  const auto stored = samples_of(witness, name);
  std::map<Instant, std::vector<const Sent*>> rows_by_time;
  for (const Sent& one : station.sent()) rows_by_time[one.time].push_back(&one);
  for (const auto& [time, rows] : rows_by_time) {
    const bool sure = std::any_of(rows.begin(), rows.end(), [](const Sent* s) { return s->sure; });
    const auto there = stored.find(time);
    if (there == stored.end()) {
      if (sure && time <= now && !station.ambiguous(time)) {
        complaints_.add("nothing is lost",
                        name + ": the reading of " + at_text(*this, time) + " is not in the store");
      }
      continue;
    }
    if (!there->second.temperature) continue;
    const bool known = std::any_of(rows.begin(), rows.end(), [&](const Sent* s) {
      return !s->temperature || std::abs(*s->temperature - *there->second.temperature) < 0.005;
    });
    if (!known && !station.ambiguous(time)) {
      complaints_.add("readings are kept as they came", name + " at " + at_text(*this, time));
    }
  }
  for (const auto& [time, values] : stored) {
    if (rows_by_time.count(time) == 0 && !station.ambiguous(time)) {
      complaints_.add("no reading is invented", name + " at " + at_text(*this, time));
    }
  }
}

/// Every sample stands in exactly one hour, and an hour without one has no record.
void Judge::judge_hours(service::DeskWork& desk, Witness& witness, const std::string& station,
                        Instant now) {
  std::map<HourStart, int> with_temperature;
  std::set<HourStart> any;
  for (const auto& [time, values] : samples_of(witness, station)) {
    any.insert(hour_of(time));
    if (values.temperature) ++with_temperature[hour_of(time)];
  }
  const auto stored = desk.store().hours(station, HourStart::min(), HourStart::max());
  if (!stored) {
    complaints_.add("the hours can be read", stored.failure().sentence());
    return;
  }
  const auto closed =
      service::closed_before(settings_->station(station)->station, std::nullopt, now);
  std::set<HourStart> recorded;
  for (const weather::Hour& hour : *stored) {
    recorded.insert(hour.start);
    int left_out = 0;
    for (const weather::Flag& flag : hour.flags) {
      const bool out =
          flag.verdict == weather::Verdict::wrong || flag.reason == weather::Reason::unconfirmed;
      if (flag.element == weather::Element::temperature && out) left_out += flag.count;
    }
    const int expected = with_temperature.count(hour.start) ? with_temperature.at(hour.start) : 0;
    if (hour.n + left_out != expected) {
      complaints_.add("every sample is in one hour",
                      station + ", " + at_text(*this, Instant(hour.start)) + ": " +
                          std::to_string(expected) + " samples, " + std::to_string(hour.n) +
                          " counted, " + std::to_string(left_out) + " left out");
    }
    if (any.count(hour.start) == 0) {
      complaints_.add("no hour is invented", station + ", " + at_text(*this, Instant(hour.start)));
    }
  }
  for (const HourStart hour : any) {
    if (hour < closed && recorded.count(hour) == 0) {
      complaints_.add("every hour has a record or is a named gap",
                      station + ", " + at_text(*this, Instant(hour)) + ": samples, no record");
    }
  }
}

/// A silence of the last days is an episode, and was told.
void Judge::judge_gaps(service::DeskWork& desk, Witness& witness, const std::string& station,
                       Instant now) {
  (void)desk;
  const auto samples = samples_of(witness, station);
  if (samples.empty()) return;
  const Seconds named = settings_->station(station)->station.silent_after + hours{10};
  Instant last = samples.begin()->first;
  std::vector<std::pair<Instant, Instant>> gaps;
  for (const auto& [time, values] : samples) {
    if (time - last > named) gaps.emplace_back(last, time);
    last = time;
  }
  for (const auto& [from, to] : gaps) {
    // Told while it lasted, or afterwards where nobody was there to see it.
    const bool said = std::any_of(said_.begin(), said_.end(), [&](const Said& one) {
      return one.row.kind == "no_data" && one.row.subject == station && one.row.start <= to &&
             one.row.until.value_or(one.row.at) >= from;
    });
    if (!said) {
      complaints_.add("every hour has a record or is a named gap",
                      station + " was silent from " + at_text(*this, from) + " to " +
                          at_text(*this, to) + " and nobody was told");
    }
  }
  (void)now;
}

/// The same facts folded at once give the same hours and episodes.
void Judge::judge_replay(service::DeskWork& desk, Instant now) {
  service::Lookout replay(settings_);
  service::Closed closed;
  for (const auto& setting : settings_->stations) {
    const weather::Station& station = setting.station;
    const auto samples = desk.store().samples(station.name, Instant{}, now + days{1});
    if (!samples || samples->empty()) continue;
    replay.replace_hours(station.name, HourStart::min(), HourStart::max(),
                         weather::gather(*samples, station, hour_of(samples->front().time),
                                         hour_of(samples->back().time) + hours{1}));
    replay.add_samples(station.name, *samples);
  }
  for (const auto& setting : settings_->stations) {
    closed[setting.station.name] =
        service::closed_before(setting.station, replay.last_sample(setting.station.name), now);
  }
  for (const auto& plan : settings_->fields) {
    auto diary = desk.store().diary(plan.field.name);
    if (diary) replay.set_diary(plan.field.name, std::move(*diary));
  }
  const auto first = desk.store().note("first_start");
  if (first && *first) replay.set_first_start(Instant(Seconds(std::stoll(**first))));
  replay.turn(now, closed);
  const auto& live = desk.keeper().lookout();
  for (const auto& setting : settings_->stations) {
    const std::string& name = setting.station.name;
    if (live.station_hours(name) != replay.station_hours(name)) {
      complaints_.add("live is replay", "the hours of " + name + " differ");
    }
    auto stored = desk.store().hours(name, HourStart::min(), HourStart::max());
    auto made = replay.station_hours(name);
    std::erase_if(made, [&](const auto& hour) { return hour.start >= closed[name]; });
    if (!stored || *stored != made) {
      complaints_.add("live is replay", "the stored hours of " + name + " differ");
    }
  }
  // Mail trouble is of the outbox, which a replay has not.
  auto lived = live.episodes();
  std::erase_if(lived, [](const auto& e) { return e.kind == alerts::Kind::mail_trouble; });
  if (lived != replay.episodes()) {
    complaints_.add("live is replay",
                    "live\n" + ground::told(lived) + "replay\n" + ground::told(replay.episodes()));
  }
}

/// No level falls at the end of a day of which less than 20 hours were seen.
void Judge::judge_lowering(service::DeskWork& desk) {
  for (const auto& plan : settings_->fields) {
    const std::string& field = plan.field.name;
    std::set<HourStart> seen;
    for (const std::string& station : plan.field.stations) {
      for (const auto& hour : desk.keeper().lookout().station_hours(station)) {
        if (hour.has_temperature()) seen.insert(hour.start);
      }
    }
    const auto& state = desk.keeper().lookout().state(field);
    for (const auto& episode : state.episodes) {
      for (const auto& change : episode.changes) {
        const bool fell =
            change.phase == alerts::Phase::lowered || change.phase == alerts::Phase::closed;
        if (!fell || state.crop.part == season::Part::after) continue;
        int count = 0;
        // A day of heat is the farm's, with 23 to 25 hours; a humid day has 24 of the sun's.
        const Instant from =
            episode.kind == alerts::Kind::heat
                ? settings_->calendar.start_of(settings_->calendar.day_of(change.at - Seconds{1}))
                : change.at - hours{24};
        for (HourStart hour = hour_of(from); end_of(hour) <= change.at; hour += hours{1}) {
          count += static_cast<int>(seen.count(hour));
        }
        if (count < 20) {
          complaints_.add("no level falls for want of data",
                          std::string(alerts::name_of(episode.kind)) + " of " + field + " at " +
                              at_text(*this, change.at) + " with " + std::to_string(count) +
                              " hours seen");
        }
      }
    }
  }
}

}  // namespace simulation
