// The store: one SQLite file of facts (WAL, synchronous FULL, STRICT tables, numbered schema) and
// the transaction that keeps an hour, what was said of it and its letters together. No derived
// crop state is kept. One owner, one thread.
#pragma once

#include <cstdint>
#include <map>
#include <memory>
#include <optional>
#include <span>
#include <string>
#include <vector>

#include "core/alerts/decide.hpp"
#include "core/failures/result.hpp"
#include "core/field/diary.hpp"
#include "core/outbox/outbox.hpp"
#include "core/weather/hour.hpp"
#include "core/weather/sample.hpp"

namespace antherd::store {

/// What taking samples in changed. Hours between `earliest` and `latest` are to be made anew.
struct Intake {
  int added = 0;        // times that were not known
  int replaced = 0;     // a different sample of a known time now stands
  int conflicts = 0;    // different samples kept aside
  int repeated = 0;     // identical: ignored
  std::optional<Instant> earliest, latest;  // of added and replaced ones
};

/// A remembered place of an intake: file bookmarks and HTTP validators, as opaque text by key.
using Notes = std::map<std::string, std::string>;

/// One tick's decisions: kept in one transaction or not at all.
struct Decision {
  std::map<std::string, std::vector<weather::Hour>> hours;  // by station: written or replaced
  std::map<std::string, std::vector<HourStart>> hours_gone; // by station: no longer any sample
  std::vector<alerts::Said> said;
  std::vector<outbox::Item> letters;                        // state waiting
  Notes notes;                                              // e.g. "last_weekly"
};

class Store {
 public:
  struct Options {
    std::string folder;
    bool read_only = false;   // reading commands beside a running service
  };

  /// Opens or makes `antherd.db`. Refuses a second writing instance, a newer schema and a damaged
  /// file, each by name (a damaged one is left as it is). read_only fails when there is none.
  static Result<Store> open(const Options& options);
  Store(Store&&) noexcept;
  Store& operator=(Store&&) noexcept;
  ~Store();

  // Samples. One transaction each call.
  Result<Intake> add_samples(const std::string& station, std::span<const weather::Sample> samples,
                             const Notes& notes = {});
  Result<std::vector<weather::Sample>> samples(const std::string& station, Instant from,
                                               Instant to) const;  // [from, to), in time order
  Result<std::optional<Instant>> last_sample(const std::string& station) const;
  Result<std::vector<weather::Sample>> conflicts(const std::string& station) const;
  Outcome drop_samples_before(Instant before);

  // Hours, in time order, [from, to).
  Result<std::vector<weather::Hour>> hours(const std::string& station, HourStart from,
                                           HourStart to) const;

  // Diary. Adding what is already there (same_as) changes nothing and returns its id.
  Result<std::int64_t> add(const field::Irrigation& irrigation);
  Result<std::int64_t> add(const field::Scouting& note);
  Outcome remove_irrigation(std::int64_t id);   // fails when there is none
  Outcome remove_scouting(std::int64_t id);
  Result<field::Diary> diary(const std::string& field) const;  // sorted
  /// Grows by one with every change of the diary, also by another process: a cheap look for news.
  Result<std::int64_t> diary_version() const;

  // Decisions, the ledger and the outbox.
  Outcome save(const Decision& decision);
  Result<std::vector<alerts::Said>> said(Instant since) const;
  Outcome mark_seen(const std::string& episode, alerts::Level level);
  Result<std::vector<outbox::Item>> letters_open() const;   // waiting, sending, in doubt
  Result<std::vector<outbox::Item>> letters_since(Instant since) const;  // decided since, any state
  Result<std::optional<outbox::Item>> letter(std::int64_t id) const;
  Outcome update(const outbox::Item& item, const outbox::Line& line);
  Result<outbox::Line> line() const;

  // Small facts by name.
  Result<std::optional<std::string>> note(const std::string& key) const;
  Result<Notes> notes_with_prefix(const std::string& prefix) const;
  Outcome put_notes(const Notes& notes);

  /// A hash over the tables of facts (samples, conflicts, hours, diary), independent of the order
  /// in which they came.
  Result<std::string> fingerprint() const;

 private:
  struct Inside;
  explicit Store(std::unique_ptr<Inside> inside);
  std::unique_ptr<Inside> inside_;
};

constexpr int schema_number = 1;

}  // namespace antherd::store
