// The desk's sources: drop folders and diary files that are looked into, stations that are polled,
// and what becomes of their readings. See desk_work.hpp.
#include <algorithm>
#include <set>
#include <sstream>
#include <utility>

#include "core/letters/words.hpp"
#include "run/service/desk_work.hpp"
#include "run/service/log.hpp"

namespace antherd::service {
namespace {

constexpr auto bookmark_outlives_file = std::chrono::days{7};

/// How a drop folder's files are read, as one text: another form reads the files anew.
std::string form_text(const station::DropForm& drop) {
  const station::RecordForm& record = drop.record;
  std::string text = drop.folder + '|' + drop.files + '|' + record.time.form + '|' +
                     record.time.zone.name() + '|' +
                     std::to_string(record.wetness_interval.count());
  for (const std::string& column : record.time.at) text += '|' + column;
  if (record.where) text += '|' + record.where->first + '=' + record.where->second;
  for (const auto* value : {&record.temperature, &record.humidity, &record.dew_point, &record.rain,
                            &record.wind, &record.solar, &record.wetness}) {
    text += '|' + (*value ? (*value)->at + ' ' + (*value)->unit : std::string("-"));
  }
  if (record.wet_when) {
    text += '|' + record.wet_when->comparison + std::to_string(record.wet_when->threshold);
  }
  for (const std::string& word : record.missing) text += '|' + word;
  return text;
}

/// What each value of the files means, one a line, sorted. A value that is only added is no change
/// of the others'.
std::set<std::string> meanings_of(const station::DropForm& drop) {
  const station::RecordForm& record = drop.record;
  std::string time = "time " + record.time.form + ' ' + record.time.zone.name();
  for (const std::string& column : record.time.at) time += ' ' + column;
  std::set<std::string> meanings{time};
  if (record.where) meanings.insert("where " + record.where->first + '=' + record.where->second);
  const std::pair<const char*, const std::optional<station::ValueForm>*> values[]{
      {"temperature", &record.temperature},
      {"humidity", &record.humidity},
      {"dew point", &record.dew_point},
      {"rain", &record.rain},
      {"wind", &record.wind},
      {"solar", &record.solar},
      {"wetness", &record.wetness}};
  for (const auto& [name, value] : values) {
    if (*value) meanings.insert(std::string(name) + ' ' + (*value)->at + ' ' + (*value)->unit);
  }
  return meanings;
}

/// What a share whose server is gone looks like.
Failure hung(const std::string& folder) {
  return {"look into the drop folder", folder,
          "it does not answer: is it a network share whose server is off?",
          "everything else goes on, and it is read on when it answers"};
}

}  // namespace

/// Whether the station's files were read in another form until now. A form that the store does not
/// know is added to `forms`.
bool DeskWork::has_another_form(const settings::Station& station, store::Notes& forms) const {
  const std::string key = "form/" + station.station.name;
  const std::string form = form_text(*station.drop);
  const auto known = store_.note(key);
  if (known && *known && **known == form) return false;
  forms[key] = form;
  return known && *known;
}

/// Whether what was stored of the station's files meant something else: a wrong unit or zone that
/// was mended. Where the warmer of two samples stands, a cool night read as °C from °F would stay.
bool DeskWork::was_misread(const settings::Station& station, store::Notes& forms) const {
  const std::string key = "meanings/" + station.station.name;
  const std::set<std::string> fresh = meanings_of(*station.drop);
  std::string text;
  for (const std::string& meaning : fresh) text += meaning + '\n';
  const auto known = store_.note(key);
  if (known && *known && **known == text) return false;
  forms[key] = text;
  if (!known || !*known) return false;
  std::istringstream lines(**known);
  for (std::string line; std::getline(lines, line);) {
    if (!fresh.contains(line)) return true;
  }
  return false;
}

void DeskWork::look(Instant now) {
  for (const auto& station : settings_->stations) {
    if (!station.drop) continue;
    if (look_into_drop(station, sources_.at(station.station.name), now)) look_due_ = true;
  }
  look_into_diary(now);
}

bool DeskWork::look_into_drop(const settings::Station& station, Source& source, Instant now) {
  const std::string& name = station.station.name;
  if (!keeper_->make_room(name)) {
    source.waits = true;
    log_once("room for " + name, name +
                                     ": the store takes nothing and memory is full; the files "
                                     "are read on when it does, nothing in them is lost");
    return false;
  }
  if (source.waits) {  // what stood unread is read before anything is decided
    source.waits = false;
    settling_since_ = now;
    logged_.erase("room for " + name);
    log_info(name + ": the store takes readings again, the files are read on");
  }
  // A clock that is not set calls no reading too early.
  const Instant clock = clock_set_ ? now : Instant{};
  const auto found =
      source.look.look(looker_, *station.drop, source.bookmarks, clock, look_patience_, stopping_);
  if (!found) {
    if (stopping_ == nullptr || !*stopping_)
      note_trouble(name, hung(station.drop->folder).sentence());
    return false;
  }
  const station::Look& look = *found;
  source.looked = now;
  store::Notes notes;
  for (const station::Bookmark& bookmark : look.bookmarks) {
    const auto known =
        std::find_if(source.bookmarks.begin(), source.bookmarks.end(),
                     [&](const station::Bookmark& b) { return b.path == bookmark.path; });
    if (known == source.bookmarks.end()) {
      source.bookmarks.push_back(bookmark);
    } else {
      *known = bookmark;
    }
    notes.insert(note_of(name, bookmark));
  }
  if (look.troubles.empty()) source.last_trouble.clear();
  for (const Failure& trouble : look.troubles) note_trouble(name, trouble.sentence());
  take_readings(name, look.readings, notes, now);
  if (look.names) forget_gone_files(name, source, *look.names, now);
  return look.more;
}

/// A station that writes a file every five minutes would leave 100,000 bookmarks a year: once a day
/// those go whose file has not been there for a week. A file that comes back later is read again
/// from its beginning; its samples are known and change nothing.
void DeskWork::forget_gone_files(const std::string& name, Source& source,
                                 const std::vector<std::string>& names, Instant now) {
  for (const station::Bookmark& mark : source.bookmarks) {
    // What has no time yet was there at the start, or before the clock was put back.
    Instant& seen = source.seen.try_emplace(mark.path, now).first->second;
    if (seen > now || std::binary_search(names.begin(), names.end(), mark.path)) seen = now;
  }
  const CivilDay today = settings_->calendar.day_of(now);
  if (source.swept == today) return;
  source.swept = today;
  const auto is_gone = [&](const std::string& path) {
    return now - source.seen.at(path) >= bookmark_outlives_file;
  };
  std::vector<std::string> gone;
  for (const station::Bookmark& mark : source.bookmarks) {
    if (is_gone(mark.path)) gone.push_back(bookmark_prefix(name) + mark.path);
  }
  const Outcome done = gone.empty() ? Outcome(Done{}) : store_.drop_notes(gone);
  if (!done) {
    log_once("bookmarks of " + name, name + ": " + done.failure().sentence());
    return;
  }
  std::erase_if(source.bookmarks, [&](const auto& mark) { return is_gone(mark.path); });
  std::erase_if(source.seen,
                [&](const auto& seen) { return now - seen.second >= bookmark_outlives_file; });
}

void DeskWork::look_into_diary(Instant now) {
  if (settings_->diary_folder.empty()) return;
  const std::string version = diary_files_version(*settings_);
  if (version == diary_version_) return;
  const DiaryFiles files = read_diary_files(*settings_);
  for (const Failure& trouble : files.troubles) log_once("diary", trouble.sentence());
  if (auto done = write_refused(settings_->store_folder, "diary", now, files.refused); !done) {
    log_once("refused", done.failure().sentence());
  }
  for (const auto& row : files.refused) {
    log_warning("diary: " + row.file + ":" + std::to_string(row.line) + ": " + row.reason +
                "; the line was not used");
  }
  if (auto done = keeper_->take_diary(files.diary); !done) {
    log_once("diary", done.failure().sentence());
    return;
  }
  diary_version_ = version;
}

/// Also when the next time lies further ahead than any is set: the clock was put back meanwhile.
bool DeskWork::poll_due(const settings::Station& station, const Source& source, Instant now) {
  return now >= source.next_poll ||
         source.next_poll - now > station::longest_poll_delay(*station.http);
}

void DeskWork::ask_stations(Instant now) {
  for (const auto& station : settings_->stations) {
    Source& source = sources_.at(station.station.name);
    if (!station.http || source.asked || !poll_due(station, source, now) || !ask_) continue;
    source.asked = true;
    ask_(station.station.name, *station.http, source.memory);
  }
}

void DeskWork::poll_answered(const std::string& name, const station::Answer& answer, Instant at) {
  const Instant now = working(at);
  const auto found = sources_.find(name);
  const settings::Station* station = settings_->station(name);
  if (found == sources_.end() || station == nullptr || !station->http) return;  // settings changed
  Source& source = found->second;
  // Read as older settings said: it is not what this source asked for, and that answer comes.
  if (answer.memory.mark != source.memory.mark) return;
  source.asked = false;
  source.answered = true;
  source.looked = now;
  source.memory = answer.memory;
  // Every station has its own place in the spread: they do not all ask in the same second.
  const double place = static_cast<double>(std::hash<std::string>{}(name) % 1000) / 1000.0;
  source.next_poll = now + station::poll_delay(*station->http, answer.memory, place);
  if (answer.trouble) {
    note_trouble(name, answer.trouble->sentence());
  } else {
    source.last_trouble.clear();
    logged_.erase("source " + name);
  }
  take_readings(name, answer.readings, {}, now);
}

void DeskWork::take_readings(const std::string& station, const station::Readings& readings,
                             const store::Notes& notes, Instant now) {
  store::Notes all = note_arrivals(station, readings, now);
  all.insert(notes.begin(), notes.end());
  keeper_->take(station, readings.samples, all, now);
  if (!readings.refused.empty()) {
    Source& source = sources_.at(station);
    source.refused[settings_->calendar.day_of(now)] += static_cast<int>(readings.refused.size());
    while (source.refused.size() > 2) source.refused.erase(source.refused.begin());
    auto done = write_refused(settings_->store_folder, station, now, readings.refused);
    if (!done) log_once("refused", done.failure().sentence());
    const auto& first = readings.refused.front();
    log_warning(station + ": " + letters::plain_count(readings.refused.size(), "row") +
                " refused, the first: " + first.file + ":" + std::to_string(first.line) + ": " +
                first.reason + "; all stand in refused.csv, the rest is used");
  }
  tell_news(station, now);
}

void DeskWork::note_trouble(const std::string& station, const std::string& sentence) {
  sources_.at(station).last_trouble = sentence;
  log_once("source " + station, station + ": " + sentence);
}

void DeskWork::tell_news(const std::string& station, Instant now) {
  const Source& source = sources_.at(station);
  SourceNews news;
  news.last_trouble = source.last_trouble;
  const CivilDay yesterday = settings_->calendar.day_of(now) - std::chrono::days{1};
  for (const auto& [day, count] : source.refused) {
    if (day >= yesterday) news.refused_rows_24 += count;
  }
  keeper_->lookout().set_source_news(station, std::move(news));
}

}  // namespace antherd::service
