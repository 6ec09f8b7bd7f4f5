// See common.hpp.
#include "run/commands/common.hpp"

#include <algorithm>
#include <cmath>
#include <cstdio>
#include <iostream>
#include <utility>

#include "core/weather/hour.hpp"
#include "edge/clock/clock.hpp"
#include "edge/station/readings.hpp"
#include "run/service/farm.hpp"
#include "run/service/intake.hpp"
#include "run/service/working_time.hpp"

namespace antherd::commands {
namespace {

/// Settings without the stations that gave no file, and without fields that then have none.
SettingsPointer only_with(const SettingsPointer& settings,
                          const std::map<std::string, std::vector<weather::Hour>>& hours) {
  settings::Settings kept = *settings;
  std::erase_if(kept.stations, [&](const auto& s) { return !hours.contains(s.station.name); });
  for (auto& plan : kept.fields) {
    std::erase_if(plan.field.stations, [&](const auto& name) { return !hours.contains(name); });
  }
  std::erase_if(kept.fields, [](const auto& plan) {
    if (!plan.field.stations.empty()) return false;
    std::cerr << "antherd: " << plan.field.name
              << " is left out: no file of its station was given\n";
    return true;
  });
  return std::make_shared<const settings::Settings>(std::move(kept));
}

/// In time order; a silence is broken by a temperature alone.
void add_times(Past& past, const std::string& station,
               const std::vector<weather::Sample>& samples) {
  auto& times = past.times[station];
  auto& bare = past.bare_times[station];
  for (const auto& sample : samples) (sample.temperature ? times : bare).push_back(sample.time);
}

void add_hours(Past& past, const settings::Station& station,
               const std::vector<weather::Sample>& samples) {
  const std::string& name = station.station.name;
  if (samples.empty()) {
    past.hours[name];
    return;
  }
  const HourStart from = hour_of(samples.front().time - one_hour);
  const HourStart to = hour_of(samples.back().time) + std::chrono::hours{1};
  past.hours[name] = weather::gather(samples, station.station, from, to);
  add_times(past, name, samples);
}

void take_diary_files(Past& past) {
  const service::DiaryFiles diary = service::read_diary_files(*past.settings);
  for (const auto& row : diary.refused) {
    std::cerr << "antherd: " << row.file << ":" << row.line << ": " << row.reason
              << "; the line was not used\n";
  }
  for (const auto& trouble : diary.troubles) std::cerr << "antherd: " << trouble.sentence() << "\n";
  for (const auto& entry : diary.diary.irrigations) {
    past.diaries[entry.field].irrigations.push_back(entry);
  }
  for (const auto& note : diary.diary.notes) past.diaries[note.field].notes.push_back(note);
}

}  // namespace

SettingsPointer read_settings(const Invocation& call) {
  const std::string file = settings::choose_file(call.settings);
  settings::Reading reading = settings::read_file(file);
  for (const auto& complaint : reading.complaints) std::cerr << complaint.sentence() << "\n";
  if (!reading.settings) {
    std::cerr << "antherd: the settings have " << reading.complaints.size()
              << (reading.complaints.size() == 1 ? " fault" : " faults")
              << "; nothing was done. \"antherd check --settings " << file
              << "\" reads them again.\n";
    return nullptr;
  }
  return std::make_shared<const settings::Settings>(std::move(*reading.settings));
}

Exit say(const Failure& failure) {
  std::cerr << "antherd: " << failure.sentence() << "\n";
  return Exit::failed;
}

const settings::FieldPlan* read_field(const settings::Settings& settings, const Invocation& call) {
  const auto field = settings.field_by_beginning(call.field);
  if (field) return *field;
  std::cerr << "antherd: " << field.failure().sentence() << "\n";
  return nullptr;
}

std::optional<Instant> Past::last() const {
  std::optional<Instant> newest;
  for (const auto* kind : {&times, &bare_times}) {
    for (const auto& [name, list] : *kind) {
      if (!list.empty() && (!newest || list.back() > *newest)) newest = list.back();
    }
  }
  return newest;
}

std::optional<Instant> Past::last(const std::string& station) const {
  std::optional<Instant> newest;
  for (const auto* kind : {&times, &bare_times}) {
    const auto list = kind->find(station);
    if (list == kind->end() || list->second.empty()) continue;
    if (!newest || list->second.back() > *newest) newest = list->second.back();
  }
  return newest;
}

void add_samples(Past& past, const settings::Station& station,
                 std::vector<weather::Sample> samples) {
  add_hours(past, station, weather::standing(std::move(samples)));
}

Result<Past> past_from_files(const SettingsPointer& settings,
                             const std::vector<std::string>& station_files) {
  std::map<std::string, std::vector<weather::Sample>> samples;
  for (const std::string& pair : station_files) {
    const auto equals = pair.find('=');
    const std::string name = pair.substr(0, equals);
    const settings::Station* station = settings->station(name);
    const bool fits = equals != std::string::npos && station != nullptr && station->drop;
    if (!fits) {
      return Failure{"read a station's file", pair,
                     "it is not STATION=FILE with a station of the settings that has a "
                     "[station.drop] table",
                     "nothing was run"};
    }
    const std::string file = pair.substr(equals + 1);
    auto readings = station::read_csv_file(file, station->drop->record, std::nullopt);
    if (!readings) return readings.failure();
    for (std::size_t i = 0; i < readings->refused.size() && i < 5; ++i) {
      const auto& row = readings->refused[i];
      std::cerr << "antherd: " << row.file << ":" << row.line << ": " << row.reason
                << "; the row was not used\n";
    }
    if (readings->refused.size() > 5) {
      std::cerr << "antherd: " << file << ": " << readings->refused.size() - 5
                << " more rows were not used\n";
    }
    auto& list = samples[name];
    list.insert(list.end(), readings->samples.begin(), readings->samples.end());
  }
  Past past;
  for (auto& [name, list] : samples) {
    add_hours(past, *settings->station(name), weather::standing(std::move(list)));
  }
  past.settings = only_with(settings, past.hours);
  take_diary_files(past);
  return past;
}

/// What the drop folders hold now, for a farm whose service has not run yet.
Past past_from_folders(const SettingsPointer& settings, Instant now) {
  Past past;
  past.settings = settings;
  constexpr int looks_at_most = 200;
  for (const auto& station : settings->stations) {
    if (!station.drop) continue;
    std::vector<weather::Sample> samples;
    std::vector<station::Bookmark> bookmarks;
    int refused = 0;
    for (int i = 0; i < looks_at_most; ++i) {
      const station::Look look = station::look_into(*station.drop, bookmarks, now);
      if (i == 0) {
        for (const auto& trouble : look.troubles) {
          std::cerr << "antherd: " << station.station.name << ": " << trouble.sentence() << "\n";
        }
      }
      for (const auto& row : look.readings.refused) {
        if (++refused <= 3) {
          std::cerr << "antherd: " << station.station.name << ": " << row.file << ":" << row.line
                    << ": " << row.reason << "\n";
        }
      }
      samples.insert(samples.end(), look.readings.samples.begin(), look.readings.samples.end());
      for (const auto& bookmark : look.bookmarks) {
        std::erase_if(bookmarks, [&](const auto& b) { return b.path == bookmark.path; });
        bookmarks.push_back(bookmark);
      }
      if (!look.more) break;
    }
    add_samples(past, station, std::move(samples));
  }
  take_diary_files(past);
  return past;
}

namespace {

/// When a station spoke since `from`, for a replay: from its samples, and before the oldest that
/// are kept from its hours, twice an hour so that no silence appears where there was none.
Outcome add_times_of_season(Past& past, const store::Store& store, Instant from) {
  for (auto& [name, hours] : past.hours) {
    const auto samples = store.samples(name, from, Instant::max());
    if (!samples) return samples.failure();
    auto& times = past.times[name];
    times.clear();
    past.bare_times[name].clear();
    const Instant kept_from = samples->empty() ? Instant::max() : samples->front().time;
    for (const weather::Hour& hour : hours) {
      if (hour.n == 0 || Instant(hour.start) + std::chrono::hours{1} > kept_from) continue;
      times.push_back(Instant(hour.start));
      times.push_back(Instant(hour.start) + std::chrono::minutes{30});
    }
    add_times(past, name, *samples);
  }
  return Done{};
}

}  // namespace

Result<Past> past_from_store(const SettingsPointer& settings, const store::Store& store,
                             Instant now) {
  Past past;
  past.settings = settings;
  auto said = store.said(now - std::chrono::days{400});
  if (!said) return said.failure();
  past.said = std::move(*said);
  CivilDay sown = settings->calendar.day_of(now);
  for (const auto& plan : settings->fields) {
    sown = std::min(sown, plan.field.sown);
    auto diary = store.diary(plan.field.name);
    if (!diary) return diary.failure();
    past.diaries[plan.field.name] = std::move(*diary);
  }
  const Instant from = settings->calendar.start_of(sown) - std::chrono::days{3};
  for (const auto& station : settings->stations) {
    const std::string& name = station.station.name;
    auto hours = store.hours(name, hour_of(from), HourStart::max());
    if (!hours) return hours.failure();
    // The newest hours are not stored before they are closed: they are made from the samples.
    const HourStart fresh_from = hour_of(now - std::chrono::days{3});
    auto samples = store.samples(name, fresh_from - weather::context_before, Instant::max());
    if (!samples) return samples.failure();
    std::erase_if(*hours, [&](const auto& hour) { return hour.start >= fresh_from; });
    const auto fresh = weather::gather(*samples, station.station, fresh_from,
                                       hour_of(now + std::chrono::hours{2}));
    hours->insert(hours->end(), fresh.begin(), fresh.end());
    past.hours[name] = std::move(*hours);
    auto recent = store.samples(name, now - std::chrono::days{12}, Instant::max());
    if (!recent) return recent.failure();
    add_times(past, name, *recent);
    if (past.times[name].empty()) {
      auto last = store.last_temperature(name);
      if (last && *last) past.times[name].push_back(**last);
    }
  }
  return past;
}

Result<Past> read_past(const SettingsPointer& settings, const Invocation& call) {
  if (!call.station_files.empty()) return past_from_files(settings, call.station_files);
  auto store = open_to_read(*settings);
  if (!store) {
    // A past season is read whatever the clock says: no row is too far ahead.
    Past past = past_from_folders(settings, Instant{});
    if (past.last()) return past;  // no service has run here: the files speak for themselves
    Failure failure = store.failure();
    failure.what_next +=
        "; the drop folders hold no reading either; name files with --station "
        "NAME=FILE.csv";
    return failure;
  }
  auto past = past_from_store(settings, *store, present(*settings, store).now);
  if (!past) return past;
  if (const Outcome read = add_times_of_season(*past, *store, Instant::min()); !read) {
    return read.failure();
  }
  return past;
}

Result<store::Store> open_to_read(const settings::Settings& settings) {
  store::Store::Options options;
  options.folder = settings.store_folder;
  options.read_only = true;
  return store::Store::open(options);
}

Result<store::Store> open_to_write(const settings::Settings& settings) {
  store::Store::Options options;
  options.folder = settings.store_folder;
  return store::Store::open(options);
}

Present present_by(Instant shown, bool set, const settings::Settings& settings,
                   const Result<store::Store>& store) {
  if (!store || (set && !settings.exercise)) return {shown};
  if (!settings.exercise) {
    const auto known = service::newest_reading_believed(settings, *store);
    if (!known || !service::cannot_be(shown, *known)) return {shown};
    return {*known, true};
  }
  std::optional<Instant> newest;
  for (const auto& station : settings.stations) {
    const auto last = store->last_sample(station.station.name);
    if (last && *last && (!newest || **last > *newest)) newest = **last;
  }
  return {newest.value_or(shown)};
}

Present present(const settings::Settings& settings, const Result<store::Store>& store) {
  const Instant shown = clock::wall_now();
  const Present present = present_by(shown, clock::wall_clock_set(), settings, store);
  static bool said = false;
  if (present.doubted && !std::exchange(said, true)) {
    std::cerr << "antherd: computer clock not set, it shows " << farm_text(settings.calendar, shown)
              << "; what follows goes by the newest reading, "
              << farm_text(settings.calendar, present.now) << "\n";
  }
  return present;
}

std::optional<CivilDay> last_day_of_notes(const settings::Settings& settings, Present present) {
  if (settings.exercise) return std::nullopt;
  constexpr auto station_dead_at_most = std::chrono::days{31};
  const CivilDay today = settings.calendar.day_of(present.now);
  return present.doubted ? today + station_dead_at_most : today;
}

service::Lookout lookout_over(const Past& past) {
  service::Lookout lookout(past.settings);
  for (const auto& [name, hours] : past.hours) {
    lookout.replace_hours(name, HourStart::min(), HourStart::max(), hours);
  }
  for (const auto& [name, times] : past.times) lookout.add_sample_times(name, times);
  for (const auto& [name, times] : past.bare_times) lookout.add_bare_times(name, times);
  for (const auto& plan : past.settings->fields) {
    const auto diary = past.diaries.find(plan.field.name);
    if (diary != past.diaries.end()) lookout.set_diary(plan.field.name, diary->second);
  }
  lookout.set_ledger(past.said);
  lookout.set_first_start(past.first_start);
  return lookout;
}

service::Closed closed_at(const Past& past, Instant now) {
  service::Closed closed;
  for (const auto& station : past.settings->stations) {
    const auto times = past.times.find(station.station.name);
    std::optional<Instant> last;
    if (times != past.times.end() && !times->second.empty()) last = times->second.back();
    closed[station.station.name] = service::closed_before(station.station, last, now);
  }
  return closed;
}

std::string day_text(CivilDay day) {
  const CivilDate date{day};
  char text[40];
  std::snprintf(text, sizeof text, "%04d-%02u-%02u", static_cast<int>(date.year()),
                static_cast<unsigned>(date.month()), static_cast<unsigned>(date.day()));
  return text;
}

std::string utc_text(Instant at) {
  const auto day = std::chrono::floor<std::chrono::days>(at);
  const std::chrono::hh_mm_ss time{at - day};
  char text[32];
  std::snprintf(text, sizeof text, "T%02d:%02d:%02dZ", static_cast<int>(time.hours().count()),
                static_cast<int>(time.minutes().count()), static_cast<int>(time.seconds().count()));
  return day_text(CivilDay{day.time_since_epoch()}) + text;
}

double rounded(double value, int decimals) {
  const double scale = std::pow(10.0, decimals);
  const double result = std::nearbyint(value * scale) / scale;  // the default mode: half to even
  return result == 0.0 ? 0.0 : result;                          // never −0
}

}  // namespace antherd::commands
