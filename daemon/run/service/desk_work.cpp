// See desk_work.hpp.
#include "run/service/desk_work.hpp"

#include <algorithm>
#include <utility>

#include "run/service/former.hpp"
#include "run/service/log.hpp"

namespace antherd::service {
namespace {

constexpr Seconds scan_every{60};
constexpr Seconds longest_poll_pause{15 * 60};  // back-off after failures
constexpr Seconds settles_within{90};           // after a start; a poll takes 20 s at most

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

}  // namespace

DeskWork::DeskWork(std::shared_ptr<const settings::Settings> settings, store::Store store)
    : settings_(std::move(settings)), store_(std::move(store)) {}

Result<std::unique_ptr<DeskWork>> DeskWork::open(std::shared_ptr<const settings::Settings> settings,
                                                 Instant now, bool clock_set,
                                                 const std::atomic<bool>* stopping) {
  store::Store::Options options;
  options.folder = settings->store_folder;
  options.service = true;
  options.now = now;
  options.haste = stopping;
  auto store = store::Store::open(options);
  if (!store) return store.failure();
  std::unique_ptr<DeskWork> work(new DeskWork(std::move(settings), std::move(*store)));
  work->log_beginning();
  work->mind_clock(now, clock_set, work->known_time());
  if (auto done = work->begin(work->working(now)); !done) return done.failure();
  return work;
}

Outcome DeskWork::begin(Instant now) {
  keeper_ = std::make_unique<Keeper>(settings_, store_);
  carrier_ = std::make_unique<Carrier>(
      settings_, store_, [this](mail::Server server, std::int64_t item, letters::Letter letter) {
        if (send_) send_(std::move(server), item, std::move(letter));
      });
  const auto parked = park_letters_of_former(*settings_, store_, now);
  if (!parked) return parked.failure();
  for (const std::string& sentence : *parked) log_warning(sentence);
  if (auto done = keeper_->load(now); !done) return done;
  if (auto done = carrier_->load(now); !done) return done;
  log_strange_fields(now);
  sources_.clear();
  store::Notes forms;
  std::vector<std::string> gone;
  for (const auto& station : settings_->stations) {
    Source& source = sources_[station.station.name];
    source.next_poll = now;
    source.memory.mark = settings_number_;
    const std::string bookmarks = bookmark_prefix(station.station.name);
    if (station.drop && has_another_form(station, forms)) {
      gone.push_back(bookmarks);
      continue;
    }
    auto notes = store_.notes_with_prefix(bookmarks);
    if (!notes) return notes.failure();
    for (const auto& [key, text] : *notes) {
      auto bookmark = bookmark_of(text);
      if (bookmark) source.bookmarks.push_back(std::move(*bookmark));
    }
    remember_arrivals(station.station.name, source);
  }
  // Both at once: bookmarks that outlived the new form would never let its files be read.
  if (!forms.empty()) {
    if (auto done = store_.put_notes(forms, gone); !done) return done;
  }
  settling_since_ = now;
  // A page that cannot be shown must not keep the watch from starting.
  if (auto done = front_page_.open(*settings_); !done) log_error(done.failure().sentence());
  diary_version_ = "unread";
  next_look_ = now;
  return Done{};
}

Instant DeskWork::turn(Instant now, bool clock_set) {
  mind_clock(now, clock_set, keeper_->lookout().time_of_stations());
  mind_step(now, clock_set);
  return turn_at(working(now)) - Seconds{ahead_.load()};
}

Instant DeskWork::turn_at(Instant now) {
  const bool scan = look_due_ || now >= next_look_ || next_look_ - now > scan_every;
  look_due_ = false;
  if (scan) {
    next_look_ = now + scan_every;
    look(now);
  }
  ask_stations(now);
  Kept kept;
  if (settled(now)) {
    kept = keeper_->step(now, clock_set_);
    for (Failure& trouble : keeper_->tidy(now)) kept.troubles.push_back(std::move(trouble));
  } else if (auto done = keeper_->flush(now); !done) {
    kept.troubles.push_back(done.failure());
  }
  log_kept(kept);
  distress_.note(kept.troubles.empty() ? std::nullopt : std::optional(kept.troubles.front()), now);
  // With each scan too: a command may have put a letter back to waiting, or a review in.
  if (kept.letters > 0 || scan) {
    if (auto done = carrier_->refresh(); !done) log_once("outbox", done.failure().sentence());
  }
  carry(now);
  if (!settling_since_) give_sign_of_life(kept.troubles.empty(), now);
  if (!settling_since_) front_page_.refresh(keeper_->lookout(), store_, now);

  Instant wake = std::min(now + scan_every, std::max(now, next_look_));
  if (look_due_) wake = now;
  wake = std::min(wake, keeper_->next_wake(now));
  for (const auto& station : settings_->stations) {
    const Source& source = sources_.at(station.station.name);
    if (station.http && !source.asked) wake = std::min(wake, std::max(now, source.next_poll));
  }
  if (const auto again = carrier_->look_again(now)) wake = std::min(wake, std::max(now, *again));
  return wake;
}

/// The outbox first; where the store takes nothing, its letters rest and one goes past them.
void DeskWork::carry(Instant now) {
  if (!distress_.busy()) {
    for (const std::string& sentence : carrier_->carry(now)) log_info(sentence);
  }
  if (carrier_->busy() || !clock_set_) return;
  const auto send = [this](mail::Server server, std::int64_t item, letters::Letter letter) {
    if (send_) send_(std::move(server), item, std::move(letter));
  };
  const auto desk = [&] { return keeper_->lookout().desk(now); };
  for (const std::string& sentence : distress_.carry(*settings_, desk, send, now)) {
    log_warning(sentence);
  }
}

/// Nothing is decided before every source was looked at: after a pause of the service a station
/// would seem silent, and a season's files would be told of piece by piece.
bool DeskWork::settled(Instant now) {
  if (!settling_since_) return true;
  const bool unheard = std::any_of(sources_.begin(), sources_.end(), [&](const auto& source) {
    const settings::Station* station = settings_->station(source.first);
    return station != nullptr && station->http && !source.second.answered;
  });
  const bool late = now - *settling_since_ > settles_within || now < *settling_since_;
  if (look_due_ || (unheard && ask_ && !late)) return false;
  settling_since_.reset();
  return true;
}

/// Only a turn that could keep what it found, of a loop that lately looked at each of its stations,
/// is a sign of life.
void DeskWork::give_sign_of_life(bool kept_well, Instant now) {
  if (!beat_) return;
  const bool looked = std::all_of(
      settings_->stations.begin(), settings_->stations.end(),
      [&](const settings::Station& station) {
        const auto& at = sources_.at(station.station.name).looked;
        const Seconds patience =
            2 * (station.http ? std::max(station.http->every, longest_poll_pause) : scan_every);
        return at && now >= *at && now - *at <= patience;
      });
  if (const auto url = heartbeat_.beat(settings_->watch, kept_well && looked, now)) beat_(*url);
}

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
  const station::Look look = station::look_into(*station.drop, source.bookmarks, clock);
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
  return look.more;
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

void DeskWork::ask_stations(Instant now) {
  for (const auto& station : settings_->stations) {
    Source& source = sources_.at(station.station.name);
    if (!station.http || source.asked || now < source.next_poll || !ask_) continue;
    source.asked = true;
    ask_(station.station.name, *station.http, source.memory);
  }
}

void DeskWork::poll_answered(const std::string& name, const station::Answer& answer, Instant at) {
  const Instant now = working(at);
  const auto found = sources_.find(name);
  const settings::Station* station = settings_->station(name);
  if (found == sources_.end() || station == nullptr || !station->http) return;  // settings changed
  if (answer.memory.mark != settings_number_) return;  // read as older settings said; asked again
  Source& source = found->second;
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
    log_warning(station + ": " + std::to_string(readings.refused.size()) +
                " rows refused, the first: " + first.file + ":" + std::to_string(first.line) +
                ": " + first.reason + "; all stand in refused.csv, the rest is used");
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

void DeskWork::mail_spoken(std::int64_t item, const mail::Spoken& spoken, Instant at) {
  const Instant now = working(at);
  const std::string sentence = Distress::mine(item) ? distress_.received(spoken, now)
                                                    : carrier_->received(item, spoken, now);
  if (spoken.how == mail::How::accepted) {
    log_info(sentence);
  } else {
    log_warning(sentence);
  }
  if (reload_wanted_) reload(at);
}

void DeskWork::reload(Instant at) {
  const Instant now = working(at);
  const bool said = std::exchange(reload_wanted_, line_busy());
  if (reload_wanted_) {
    if (!said) log_info("the new settings are put off until the letter under way has ended");
    return;
  }
  settings::Reading reading = settings::read_file(settings_->path);
  for (const auto& complaint : reading.complaints) log_error(complaint.sentence());
  if (!reading.settings) {
    log_error("the settings were read again and have faults: the old ones stay in force");
    return;
  }
  if (reading.settings->store_folder != settings_->store_folder) {
    log_error(
        "[store] folder cannot change while the service runs: the old settings stay in "
        "force; restart the service to move the store");
    return;
  }
  if (auto done = keeper_->flush(now); !done) {
    log_error(done.failure().sentence() + "; the old settings stay in force");
    return;
  }
  const auto old = settings_;
  settings_ = std::make_shared<const settings::Settings>(std::move(*reading.settings));
  ++settings_number_;
  auto done = begin(now);
  if (done) done = open_log(settings_->log);
  if (!done) {
    log_error(done.failure().sentence() + "; the old settings stay in force");
    settings_ = old;
    if (auto back = begin(now); !back) log_error(back.failure().sentence());
    return;
  }
  look_due_ = true;
  log_info("the settings were read again and are in force");
}

void DeskWork::finish(Instant now) {
  // Another process may hold the store for a moment, and no call waits for long any more.
  auto done = keeper_->flush(working(now));
  for (int tries = 1; !done && tries < 10; ++tries) done = keeper_->flush(working(now));
  if (!done) log_error(done.failure().sentence());
}

std::vector<std::string> DeskWork::folders() const {
  std::vector<std::string> folders;
  for (const auto& station : settings_->stations) {
    if (station.drop) folders.push_back(station.drop->folder);
  }
  if (!settings_->diary_folder.empty()) folders.push_back(settings_->diary_folder);
  return folders;
}

}  // namespace antherd::service
