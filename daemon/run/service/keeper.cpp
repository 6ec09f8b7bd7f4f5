// See keeper.hpp.
#include "run/service/keeper.hpp"

#include <algorithm>
#include <charconv>
#include <utility>

#include "edge/station/limits.hpp"
#include "run/service/farm.hpp"
#include "run/service/review.hpp"

namespace antherd::service {
namespace {

constexpr auto reach_before_sowing = std::chrono::days{3};
constexpr auto limits_look_back = std::chrono::days{2};
constexpr auto remade_at_once = std::chrono::days{20};

std::string text_of(Instant at) { return std::to_string(at.time_since_epoch().count()); }

std::optional<Instant> instant_of(const std::optional<std::string>& text) {
  if (!text) return std::nullopt;
  long long seconds = 0;
  const auto [end, error] = std::from_chars(text->data(), text->data() + text->size(), seconds);
  if (error != std::errc{}) return std::nullopt;
  return Instant{Seconds{seconds}};
}

}  // namespace

Keeper::Keeper(std::shared_ptr<const settings::Settings> settings, store::Store& store)
    : settings_(settings), store_(store), lookout_(std::move(settings)) {}

Outcome Keeper::load(Instant now) {
  auto first = store_.note("first_start");
  if (!first) return first.failure();
  auto first_start = instant_of(*first);
  if (!first_start) {
    first_start = now;
    if (auto done = store_.put_notes({{"first_start", text_of(now)}}); !done) return done;
  }
  first_start_ = first_start;
  lookout_.set_first_start(first_start);
  for (auto [key, slot] : {std::pair{"last_daily", &last_daily_}, {"last_weekly", &last_weekly_}}) {
    auto note = store_.note(key);
    if (!note) return note.failure();
    *slot = instant_of(*note);
  }
  // What fell due before the first start was never promised. Counted from this start instead, a
  // computer that is off each Monday at six would never make its first review.
  if (!last_daily_) last_daily_ = first_start;
  if (!last_weekly_) last_weekly_ = first_start;
  const auto beginning = store_.beginning();
  if (!beginning) return beginning.failure();
  if (const auto& b = *beginning) {
    anew_ = letters::Anew{b->aside, b->copied, b->irrigations, b->notes};
  }
  auto recent = store_.letters_since(now - limits_look_back);
  if (!recent) return recent.failure();
  auto held = store_.letters_held();
  if (!held) return held.failure();
  recent->insert(recent->end(), held->begin(), held->end());
  rations_ = rations_of(*recent);

  auto said = store_.said(now - ledger_reach);
  if (!said) return said.failure();
  lookout_.set_ledger(std::move(*said));
  if (auto done = refresh_diary(); !done) return done;

  CivilDay sown = settings_->calendar.day_of(now);
  for (const auto& field : settings_->fields) sown = std::min(sown, field.field.sown);
  const Instant from = settings_->calendar.start_of(sown) - reach_before_sowing;
  for (const auto& station : settings_->stations) {
    const std::string& name = station.station.name;
    auto stored = store_.hours(name, hour_of(from), HourStart::max());
    if (!stored) return stored.failure();
    lookout_.replace_hours(name, HourStart::min(), HourStart::max(), std::move(*stored));
    // In stretches, so that a season of one-minute samples never stands in memory at once.
    for (Instant at = from; at < now + one_hour; at += remade_at_once) {
      const Instant to = std::min(at + remade_at_once, now + one_hour);
      if (auto done = remake_hours(name, at, to); !done) return done;
    }
  }
  return Done{};
}

void Keeper::take(const std::string& station, const std::vector<weather::Sample>& samples,
                  const store::Notes& notes, Instant now) {
  if (samples.empty() && notes.empty()) return;
  Batch& batch = batches_[station];
  if (batch.samples.empty() && batch.notes.empty()) batch.since = now;
  batch.samples.insert(batch.samples.end(), samples.begin(), samples.end());
  for (const auto& [key, value] : notes) batch.notes[key] = value;
  // What stands in a file stays, with the bookmark that goes past it. An answer cannot be had
  // again, and memory must not grow without end.
  const settings::Station* polled = settings_->station(station);
  if (polled == nullptr || !polled->http || std::ssize(batch.samples) <= most_in_memory_) return;
  batch.samples.erase(batch.samples.begin(), batch.samples.end() - most_in_memory_ / 2);
  batch.given_up = true;
}

bool Keeper::make_room(const std::string& station) {
  Batch& batch = batches_[station];
  return std::ssize(batch.samples) < most_in_memory_ || store_batch(station, batch);
}

Outcome Keeper::refresh_diary() {
  auto version = store_.diary_version();
  if (!version) return version.failure();
  if (*version == diary_version_) return Done{};
  for (const auto& field : settings_->fields) {
    auto diary = store_.diary(field.field.name);
    if (!diary) return diary.failure();
    lookout_.set_diary(field.field.name, std::move(*diary));
  }
  diary_version_ = *version;
  return Done{};
}

Outcome Keeper::take_diary(const field::Diary& diary) {
  for (const auto& irrigation : diary.irrigations) {
    if (auto id = store_.add(irrigation); !id) return id.failure();
  }
  for (const auto& note : diary.notes) {
    if (auto id = store_.add(note); !id) return id.failure();
  }
  return refresh_diary();
}

Outcome Keeper::store_batch(const std::string& station, Batch& batch) {
  auto intake = store_.add_samples(station, batch.samples, batch.notes);
  if (!intake) {
    remake_hours_of_memory(station, batch);
    return intake.failure();
  }
  batch = Batch{};
  if (!intake->earliest) return Done{};
  return remake_hours(station, *intake->earliest, *intake->latest);
}

/// Decisions do not wait for a store that takes no samples: hours are made from memory too.
void Keeper::remake_hours_of_memory(const std::string& station, const Batch& batch) {
  if (batch.samples.empty()) return;
  const auto [first, last] =
      std::minmax_element(batch.samples.begin(), batch.samples.end(),
                          [](const auto& a, const auto& b) { return a.time < b.time; });
  // When nothing can be read either, the failure of the batch has said so.
  if (auto done = remake_hours(station, first->time, last->time); !done) return;
}

Outcome Keeper::remake_hours(const std::string& station, Instant earliest, Instant latest) {
  const weather::Station& description = settings_->station(station)->station;
  const HourStart from = hour_of(earliest - weather::hours_touched_before);
  const HourStart to = hour_of(latest + weather::hours_touched_after) + std::chrono::hours{1};
  auto samples =
      store_.samples(station, from - weather::context_before, Instant(to) + weather::context_after);
  if (!samples) return samples.failure();
  const Batch& waiting = batches_[station];
  if (!waiting.samples.empty()) {
    samples->insert(samples->end(), waiting.samples.begin(), waiting.samples.end());
    *samples = weather::standing(std::move(*samples));
  }
  lookout_.add_samples(station, *samples);
  auto fresh = weather::gather(*samples, description, from, to);
  const auto& known = lookout_.station_hours(station);
  auto old_hour = std::lower_bound(known.begin(), known.end(), from,
                                   [](const auto& h, HourStart s) { return h.start < s; });
  auto& unsaved = unsaved_hours_[station];
  for (const auto& hour : fresh) {
    for (; old_hour != known.end() && old_hour->start < hour.start; ++old_hour) {
      unsaved.insert(old_hour->start);
    }
    const bool same = old_hour != known.end() && *old_hour == hour;
    if (!same) unsaved.insert(hour.start);
    if (old_hour != known.end() && old_hour->start == hour.start) ++old_hour;
  }
  // Hours older than the samples that are kept must not vanish with them.
  const HourStart first_sampled =
      samples->empty() ? to : hour_of(samples->front().time + weather::context_before);
  const HourStart replace_from =
      std::max(from, std::min(to, fresh.empty() ? first_sampled : fresh.front().start));
  lookout_.replace_hours(station, replace_from, to, std::move(fresh));
  return Done{};
}

Closed Keeper::closed_at(Instant now) const {
  Closed closed;
  for (const auto& station : settings_->stations) {
    const std::string& name = station.station.name;
    const auto last = lookout_.last_sample(name, now + station::limits::ahead);
    closed[name] = closed_before(station.station, last, now);
  }
  return closed;
}

void Keeper::collect_hours(store::Decision& decision, const Closed& closed) {
  for (auto& [station, starts] : unsaved_hours_) {
    const auto& hours = lookout_.station_hours(station);
    for (auto start = starts.begin(); start != starts.end() && *start < closed.at(station);) {
      const auto hour = std::lower_bound(hours.begin(), hours.end(), *start,
                                         [](const auto& h, HourStart s) { return h.start < s; });
      if (hour != hours.end() && hour->start == *start) {
        decision.hours[station].push_back(*hour);
      } else {
        decision.hours_gone[station].push_back(*start);
      }
      start = starts.erase(start);
    }
  }
}

bool Keeper::batch_due(const std::string& station, const Batch& batch, Instant now) const {
  if (batch.samples.empty() && batch.notes.empty()) return false;
  if (now - batch.since >= batch_for || now < batch.since) return true;
  if (batch.samples.empty()) return false;
  // A sample at or after the end of the running hour closes it: decisions do not wait for a batch.
  const auto last = lookout_.last_of_any(station, now + station::limits::ahead);
  const auto newest =
      std::max_element(batch.samples.begin(), batch.samples.end(),
                       [](const auto& a, const auto& b) { return a.time < b.time; });
  return !last || hour_of(newest->time) > hour_of(*last);
}

Outcome Keeper::flush(Instant now) {
  for (auto& [station, batch] : batches_) {
    if (batch.samples.empty() && batch.notes.empty()) continue;
    if (auto done = store_batch(station, batch); !done) return done;
  }
  (void)now;
  return Done{};
}

/// A clock that once stood years ahead must not keep anything unsaid until then.
void Keeper::heed_clock(Instant now) {
  if (first_start_ > now) {
    first_start_ = now;
    lookout_.set_first_start(now);
    pending_.notes["first_start"] = text_of(now);
  }
  if (last_daily_ > now) last_daily_ = now;
  if (last_weekly_ > now) last_weekly_ = now;
}

Kept Keeper::step(Instant now, bool clock_set) {
  Kept kept;
  // Where the clock is not set the stations' time is gone by, once they have told it.
  if (clock_set || lookout_.time_of_stations()) heed_clock(now);
  for (auto& [station, batch] : batches_) {
    if (!batch_due(station, batch, now)) continue;
    if (auto done = store_batch(station, batch); !done) kept.troubles.push_back(done.failure());
    if (!batch.given_up) continue;
    kept.troubles.push_back(Failure{"keep all readings of " + station, settings_->store_folder,
                                    "the store has taken none for long and memory is full",
                                    "the oldest that were polled are given up"});
  }
  if (auto done = refresh_diary(); !done) kept.troubles.push_back(done.failure());
  if (auto done = refresh_seen(now); !done) kept.troubles.push_back(done.failure());

  if (settings_->mail) {
    const auto deliveries = store_.deliveries(now - mail_looks_back);
    if (deliveries) lookout_.set_mail_troubles(outbox::mail_troubles(*deliveries, now));
  }
  const Closed closed = closed_at(now);
  Turn turn = lookout_.turn(now, closed, clock_set);
  collect_hours(pending_, closed);
  pending_.said.insert(pending_.said.end(), turn.said.begin(), turn.said.end());
  add_timed_letters(now, pending_, turn.letters);
  if (anew_) tell_of_beginning(now, turn.letters);
  forget_old(rations_, now);
  auto items = to_items(turn.letters, *settings_, rations_, now);
  pending_.letters.insert(pending_.letters.end(), items.begin(), items.end());
  add_digests(now);
  kept.tellings = std::move(turn.tellings);

  const bool nothing = pending_.hours.empty() && pending_.hours_gone.empty() &&
                       pending_.said.empty() && pending_.letters.empty() && pending_.notes.empty();
  if (nothing) return kept;
  if (auto done = store_.save(pending_); !done) {
    kept.decisions_wait = true;
    kept.troubles.push_back(done.failure());
    return kept;
  }
  kept.letters = pending_.letters.size();
  pending_ = store::Decision{};
  return kept;
}

void Keeper::add_timed_letters(Instant now, store::Decision& decision,
                               std::vector<letters::Letter>& letters) {
  if (!settings_->mail) return;
  constexpr auto still_of_use = std::chrono::hours{3};  // a daily line later than that says little
  const Instant daily = next_daily(*settings_, *last_daily_);
  if (now >= daily) {
    // Not "24 h ago": the day of a clock change has 23 or 25 of them.
    const CivilDay today = settings_->calendar.day_of(now);
    const std::chrono::minutes clock{settings_->mail->daily_minute};
    Instant latest_due = settings_->calendar.at(CivilTime(today) + clock);
    if (latest_due > now) {
      latest_due = settings_->calendar.at(CivilTime(today - std::chrono::days{1}) + clock);
    }
    if (now - latest_due < still_of_use) {
      auto lines = letters::compose_daily(settings_->recipients, lookout_.desk(now));
      std::move(lines.begin(), lines.end(), std::back_inserter(letters));
    }
    last_daily_ = now;
    decision.notes["last_daily"] = text_of(now);
  }
  if (now >= next_weekly(*settings_, *last_weekly_)) {
    auto weekly = weekly_letters(now);
    std::move(weekly.begin(), weekly.end(), std::back_inserter(letters));
    last_weekly_ = now;
    decision.notes["last_weekly"] = text_of(now);
  }
}

/// What was held past the limits becomes one letter an address, and is marked as named there, in
/// the transaction of this step.
void Keeper::add_digests(Instant now) {
  const auto due = digests_due(*settings_, rations_, now);
  if (due.empty()) return;
  const auto stored = store_.letters_held();
  if (!stored) return;  // the next turn asks again
  std::vector<outbox::Item> held = *stored;
  held.insert(held.end(), pending_.letters.begin(), pending_.letters.end());
  for (const std::string& address : due) {
    std::map<std::string, letters::Letter> waited;  // by identity: what is pending may be stored
    for (const outbox::Item& item : held) {
      const bool named = std::any_of(
          pending_.merged.begin(), pending_.merged.end(), [&](const store::Merger& merger) {
            return merger.letter == item.letter.id && merger.recipient == address;
          });
      if (item.state != outbox::State::held || item.letter.recipient != address || named) continue;
      waited.emplace(item.letter.id, item.letter);
    }
    if (waited.empty()) {  // a person had them sent one by one
      rations_[address].held_since.reset();
      continue;
    }
    const letters::Letter digest = digest_of(address, waited, now);
    for (const auto& [id, letter] : waited) {
      pending_.merged.push_back({id, address, digest.id, now});
    }
    pending_.letters.push_back(digest_item(digest, rations_, now));
  }
}

letters::Letter Keeper::digest_of(const std::string& address,
                                  const std::map<std::string, letters::Letter>& waited,
                                  Instant now) const {
  letters::Recipient recipient;  // one who is no longer in the settings is owed it all the same
  recipient.address = address;
  for (const auto& known : settings_->recipients) {
    if (known.address == address) recipient = known;
  }
  std::vector<letters::Letter> letters;
  for (const auto& [id, letter] : waited) letters.push_back(letter);
  return letters::compose_digest(letters, recipient, lookout_.desk(now));
}

std::vector<letters::Letter> Keeper::weekly_letters(Instant now) {
  const auto week = week_before(settings_->calendar, now);
  const letters::Review review = make_review(lookout_, store_, week, now);
  return letters::compose_weekly(review, settings_->recipients, lookout_.desk(now));
}

Instant Keeper::next_wake(Instant now) const {
  Instant wake = now + Seconds{60};
  for (const auto& [station, batch] : batches_) {
    if (batch.samples.empty() && batch.notes.empty()) continue;
    // What is overdue after a step was not taken by the store: it is not asked without a pause.
    if (batch.since + batch_for > now) wake = std::min(wake, batch.since + batch_for);
  }
  return wake;
}

}  // namespace antherd::service
