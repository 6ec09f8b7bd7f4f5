// The store: one SQLite file of facts (WAL, synchronous FULL, STRICT tables, numbered schema) and
// the transaction that keeps an hour, what was said of it and its letters together. No derived
// crop state is kept. A Store belongs to one thread; several processes may hold one on one folder:
// the service, one command that writes into the diary, and any number of readers.
#pragma once

#include <atomic>
#include <chrono>
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
  int added = 0;                            // times that were not known
  int replaced = 0;                         // a different sample of a known time now stands
  int conflicts = 0;                        // different samples kept aside
  int repeated = 0;                         // identical: ignored
  std::optional<Instant> earliest, latest;  // of added and replaced ones
};

/// A remembered place of an intake: file bookmarks and HTTP validators, as opaque text by key.
using Notes = std::map<std::string, std::string>;

/// A held letter that a digest to the same recipient names.
struct Merger {
  std::string letter, recipient, digest;  // identities, and the address of both
  Instant at;
};

/// What a service found that began with a new store where one had been.
struct Beginning {
  std::string aside;               // name of the file that the damaged one was put aside as; empty:
                                   // there was none
  std::optional<Instant> copied;   // when the copy was made that the diary was taken back from
  int irrigations = 0, notes = 0;  // so many were taken back
};

/// One tick's decisions: kept in one transaction or not at all.
struct Decision {
  std::map<std::string, std::vector<weather::Hour>> hours;   // by station: written or replaced
  std::map<std::string, std::vector<HourStart>> hours_gone;  // by station: no longer any sample
  std::vector<alerts::Said> said;
  std::vector<outbox::Item> letters;  // state waiting or held
  Notes notes;                        // e.g. "last_weekly"
  std::vector<Merger> merged = {};    // after the letters were put
};

class Store {
 public:
  struct Options {
    std::string folder;      // made when it is missing (one level) unless read_only
    bool read_only = false;  // reading commands beside a running service; makes no file
    bool service = false;    // the one service of this folder: lock, check, ballast
    Instant now;             // service: the date that a damaged file is set aside with
    std::chrono::milliseconds patience{5000};  // how long to wait for another process's lock
    std::int64_t page_limit = 0;  // upper bound of the file in pages of 4096 bytes; 0: the disk's
    const std::atomic<bool>* haste =
        nullptr;  // while true no call waits more than 50 ms for a lock
  };

  /// Opens `antherd.db` in a folder, making it when there is none.
  ///
  /// service: refuses a second service, naming its process, and a network file system, naming it;
  /// checks the whole file, and a damaged one is renamed (see set_aside) and a new one begun;
  /// makes the ballast when there is room. Where a new one is begun in a folder that had one (a
  /// damaged file, or a ballast or a weekly copy without a store), the diary is taken back from the
  /// newest copy that can be read, see beginning(). Writing commands (neither flag) work beside the
  /// service. read_only fails when there is no file. Every mode refuses a newer schema, naming both
  /// numbers, and a file of another program; all but the service refuse a damaged file and leave it
  /// as it is. A Failure that `passes` is the disk's: the service may open it another time.
  static Result<Store> open(const Options& options);
  Store(Store&&) noexcept;
  Store& operator=(Store&&) noexcept;
  ~Store();

  /// Where a damaged file was put when the service opened, if it was: the whole path.
  std::optional<std::string> set_aside() const;
  /// Whether the ballast had to be given up, for the opening, a decision, a letter's state or a
  /// note, and is not put back yet: the disk is full. Service only.
  bool reserve_given() const;
  /// Whether the last samples were refused because samples stop before decisions do.
  bool samples_wait() const;
  /// How this store began, where another had been and nobody was told yet; kept until told.
  Result<std::optional<Beginning>> beginning() const;
  /// The note that a decision keeps with the letters that tell of it.
  static Notes beginning_told();
  /// Whether the last call that failed did so because the disk (or page_limit) is full.
  bool out_of_space() const;
  /// Whether a call met damage since check() was asked last.
  bool met_damage() const;
  /// Reads the whole file, as an opening by the service would. @return what is damaged in it,
  /// nothing where it is sound
  Result<std::optional<std::string>> check();

  // A call that fails has changed nothing, and the store remains usable.

  /// Takes samples in and puts `notes` (file bookmarks), in one transaction. Of different samples
  /// of one time the one that weather::stands_before all others stands, the others are kept aside,
  /// whatever came first. Values must be finite. Of the service it takes none while the ballast is
  /// missing and less than 16 MiB are free.
  Result<Intake> add_samples(const std::string& station, std::span<const weather::Sample> samples,
                             const Notes& notes = {});
  Result<std::vector<weather::Sample>> samples(const std::string& station, Instant from,
                                               Instant to) const;  // [from, to), in time order
  /// The newest before a moment.
  Result<std::optional<Instant>> last_sample(const std::string& station,
                                             Instant before = Instant::max()) const;
  /// The newest sample with a temperature.
  Result<std::optional<Instant>> last_temperature(const std::string& station) const;
  Result<std::vector<weather::Sample>> conflicts(const std::string& station) const;
  Outcome drop_samples_before(Instant before);  // conflicts too

  // Hours, in time order, [from, to).
  Result<std::vector<weather::Hour>> hours(const std::string& station, HourStart from,
                                           HourStart to) const;

  // Diary. Adding what is already there (same_as) changes nothing and returns its id.
  Result<std::int64_t> add(const field::Irrigation& irrigation);
  Result<std::int64_t> add(const field::Scouting& note);
  Outcome remove_irrigation(std::int64_t id);  // fails when there is none
  Outcome remove_scouting(std::int64_t id);
  Result<field::Diary> diary(const std::string& field) const;  // sorted
  /// Names of the fields with an irrigation or a note since then, sorted.
  Result<std::vector<std::string>> diary_fields(Instant since) const;
  /// Grows by one with every change of the diary, also by another process: a cheap look for news.
  Result<std::int64_t> diary_version() const;

  // Decisions, the ledger and the outbox.
  /// Keeps all of a decision in one transaction. A letter whose id and recipient are there already,
  /// and an entry of the ledger that is there already, are not kept a second time.
  Outcome save(const Decision& decision);
  Result<std::vector<alerts::Said>> said(Instant since) const;  // said at or after, in time order
  Outcome mark_seen(const std::string& episode, alerts::Level level);  // fails when never said
  /// Grows by one with every mark_seen, also by another process.
  Result<std::int64_t> seen_version() const;
  Result<std::vector<outbox::Item>> letters_open() const;  // waiting, sending, in doubt
  Result<std::vector<outbox::Item>> letters_held() const;
  Result<std::vector<outbox::Item>> letters_since(Instant since) const;  // decided since, any state
  Result<std::vector<outbox::Delivery>> deliveries(Instant since) const;  // decided since
  Result<std::optional<outbox::Item>> letter(std::int64_t id) const;
  /// Keeps an item's new state and the line's, in one transaction. The words of a stored letter
  /// never change. Fails when there is no such letter.
  Outcome update(const outbox::Item& item, const outbox::Line& line);
  /// The same beside a service that may carry the letter just now.
  /// @return false, and nothing is kept, where its state, attempts or doubts are no longer as in
  /// `was`
  Result<bool> update_if(const outbox::Item& was, const outbox::Item& item,
                         const outbox::Line& line);
  Result<outbox::Line> line() const;

  // Small facts by name.
  Result<std::optional<std::string>> note(const std::string& key) const;
  Result<Notes> notes_with_prefix(const std::string& prefix) const;
  /// @param gone  first the notes whose names begin with one of these are removed; one transaction
  /// @param misread  the samples of these stations are dropped, in the same transaction; their
  ///                 hours stay until others are made
  Outcome put_notes(const Notes& notes, std::span<const std::string> gone = {},
                    std::span<const std::string> misread = {});
  /// Removes the notes of exactly these names, in one transaction.
  Outcome drop_notes(std::span<const std::string> keys);

  /// A hash (32 hexadecimal digits) over the facts (samples, conflicts, hours, diary): equal facts
  /// have equal fingerprints, whatever the order they came in, how often, and under which ids.
  Result<std::string> fingerprint() const;

  // Room on the disk.
  /// Gives 8 MiB back to a full disk. @return whether there was a ballast to give
  Result<bool> release_ballast();
  /// Makes the ballast anew; fails while less than 24 MiB are free. Done when it is there.
  Outcome keep_ballast();
  /// Writes `antherd-copy-YYYY-Www.db` (ISO week of `now`, UTC): everything but samples, checked,
  /// forced to disk, then given its name; it and the newest before it are kept. Also from a
  /// read_only store, so that a worker can do it. A copy of this week that is there already is
  /// replaced.
  Outcome copy_without_samples(Instant now);
  bool has_copy_of_week(Instant now) const;

 private:
  struct Inside;
  explicit Store(std::unique_ptr<Inside> inside);
  std::unique_ptr<Inside> inside_;
};

constexpr int schema_number = 2;

}  // namespace antherd::store
