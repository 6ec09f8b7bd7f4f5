// See desk_work.hpp.
#include "run/service/desk_work.hpp"

#include <algorithm>
#include <utility>

#include "run/service/former.hpp"
#include "run/service/log.hpp"

namespace antherd::service {
namespace {

constexpr Seconds scan_every{60};
constexpr Seconds settles_within{90};  // after a start; a poll takes 20 s at most

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
  work->stopping_ = stopping;
  work->never_set_ = !clock_set;
  work->log_beginning();
  work->mind_clock(now, clock_set, work->known_time());
  auto works = work->prepare(work->settings_, work->settings_number_, work->working(now));
  if (!works) return works.failure();
  work->take_up(std::move(*works), work->working(now));
  return work;
}

/// Everything that may fail, in an order that leaves the old settings in force where it does: first
/// what is only read, last the bookmarks that another form drops.
Result<DeskWork::Works> DeskWork::prepare(const std::shared_ptr<const settings::Settings>& settings,
                                          std::int64_t number, Instant now) {
  Works works;
  works.keeper = std::make_unique<Keeper>(settings, store_);
  works.carrier = std::make_unique<Carrier>(
      settings, store_, [this](mail::Server server, std::int64_t item, letters::Letter letter) {
        if (send_) send_(std::move(server), item, std::move(letter));
      });
  if (auto done = works.keeper->load(now); !done) return done.failure();
  store::Notes forms;
  std::vector<std::string> gone, misread;
  for (const auto& station : settings->stations) {
    Source& source = works.sources[station.station.name];
    source.next_poll = now;
    source.heard = now - Seconds{ahead_.load()};
    source.memory.mark = number;
    const std::string bookmarks = bookmark_prefix(station.station.name);
    if (station.drop && was_misread(station, forms)) misread.push_back(station.station.name);
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
    remember_arrivals(station.station.name, source, *works.keeper, now);
  }
  const auto parked = park_letters_of_former(*settings, store_, now);
  if (!parked) return parked.failure();
  for (const std::string& sentence : *parked) log_warning(sentence);
  if (auto done = works.carrier->load(now); !done) return done.failure();
  // Both at once: bookmarks that outlived the new form would never let its files be read.
  if (!forms.empty()) {
    if (auto done = store_.put_notes(forms, gone, misread); !done) return done.failure();
  }
  if (misread.empty()) return works;
  for (const std::string& name : misread) {
    log_warning(name + ": its values mean something else now: what was stored of them is dropped " +
                "and the files are read again; hours of which no file is left stay as they were");
  }
  if (auto done = works.keeper->load(now); !done) return done.failure();
  return works;
}

void DeskWork::take_up(Works works, Instant now) {
  keeper_ = std::move(works.keeper);
  carrier_ = std::move(works.carrier);
  sources_ = std::move(works.sources);
  log_strange_fields(now);
  settling_since_ = now;
  // A page that cannot be shown must not keep the watch from starting.
  if (auto done = front_page_.open(*settings_); !done) log_error(done.failure().sentence());
  diary_version_ = "unread";
  next_look_ = now;
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
    mind_waiting();
    kept = keeper_->step(now, clock_set_);
    auto troubles = keeper_->tidy(now, clock_set_);
    std::move(troubles.begin(), troubles.end(), std::back_inserter(kept.troubles));
  } else if (auto done = keeper_->flush(now); !done) {
    kept.troubles.push_back(done.failure());
  }
  log_kept(kept);
  mind_reserve(now);
  if (mind_damage(now)) return now + scan_every;
  note_distress(kept, now);
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
    if (!station.http || source.asked) continue;
    wake = std::min(wake, poll_due(station, source, now) ? now : source.next_poll);
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
            2 * (station.http ? station::longest_poll_delay(*station.http) : scan_every);
        return at && now >= *at && now - *at <= patience;
      });
  if (const auto url = heartbeat_.beat(settings_->watch, kept_well && looked, now)) beat_(*url);
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
  auto done = keep_all(now);
  if (done) done = open_log(reading.settings->log);
  if (!done) {
    log_error(done.failure().sentence() + "; the old settings stay in force");
    return;
  }
  const auto fresh = std::make_shared<const settings::Settings>(std::move(*reading.settings));
  auto works = prepare(fresh, settings_number_ + 1, now);
  if (!works) {
    if (auto back = open_log(settings_->log); !back) log_error(back.failure().sentence());
    log_error(works.failure().sentence() + "; the old settings stay in force");
    return;
  }
  settings_ = fresh;
  ++settings_number_;
  take_up(std::move(*works), now);
  look_due_ = true;
  log_info("the settings were read again and are in force");
}

/// What stands in memory alone. Both are tried: a letter whose acceptance is not known goes again.
Outcome DeskWork::keep_all(Instant now) {
  Outcome receipts = carrier_->keep_unkept();
  Outcome readings = keeper_->flush(now);
  return receipts ? readings : receipts;
}

void DeskWork::finish(Instant now) {
  if (broken_) return;  // what is kept in a damaged file is set aside with it
  // Another process may hold the store for a moment, and no call waits for long any more.
  auto done = keep_all(working(now));
  for (int tries = 1; !done && tries < 10; ++tries) done = keep_all(working(now));
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
