// The keeper: takes facts in, has the hours made anew, lets the lookout turn, and saves what was
// decided in one transaction. It stands between the store and the lookout and must not know
// sockets, threads or what time it is.
#pragma once

#include <map>
#include <memory>
#include <set>
#include <string>
#include <vector>

#include "core/letters/anew.hpp"
#include "edge/station/readings.hpp"
#include "edge/store/store.hpp"
#include "run/service/lookout.hpp"
#include "run/service/post.hpp"
#include "run/settings/settings.hpp"

namespace antherd::service {

/// What one step did, for the log and the carrier.
struct Kept {
  std::vector<alerts::Telling> tellings;
  std::size_t letters = 0;        // new items in the outbox
  std::vector<Failure> troubles;  // of the store; what was decided is tried again
  bool decisions_wait = false;    // not stored yet, so their letters cannot go
};

class Keeper {
 public:
  Keeper(std::shared_ptr<const settings::Settings> settings, store::Store& store);

  /// Reads everything back: hours are made anew from the samples since the earliest sowing.
  /// @param now  becomes the first start when there was none
  Outcome load(Instant now);

  /// Takes readings of one station. They are kept in memory for at most `batch_for`, then stored
  /// together with their notes (file bookmarks, HTTP memory). While the store takes nothing, those
  /// of files all stay here, so files are read on only where make_room() is true; of a polled
  /// station the oldest are given up past the bound, and step() says so.
  void take(const std::string& station, const std::vector<weather::Sample>& samples,
            const store::Notes& notes, Instant now);
  /// Whether memory has room for another look into the station's files; stores a full batch first.
  bool make_room(const std::string& station);
  /// @param samples  of one station, kept in memory while the store takes none
  void keep_in_memory_at_most(std::ptrdiff_t samples) { most_in_memory_ = samples; }
  /// The diary may have been changed by another process: looks, cheaply.
  Outcome refresh_diary();
  /// An alert may have been marked as seen by another process: looks, cheaply.
  Outcome refresh_seen(Instant now);
  /// Takes diary entries that came as files; what is there already changes nothing.
  Outcome take_diary(const field::Diary& diary);

  /// Housekeeping of a day: samples past their time go, the ballast is put back; a copy of
  /// the store without samples where this week has none yet: while the clock is not set, the week
  /// of the newest reading. @return what did not work
  std::vector<Failure> tidy(Instant now, bool clock_set);

  /// Stores what is due, turns the lookout, adds daily and weekly letters, saves.
  Kept step(Instant now, bool clock_set);
  /// Stores what is still in memory, whatever its age.
  Outcome flush(Instant now);

  Lookout& lookout() { return lookout_; }
  const Lookout& lookout() const { return lookout_; }
  /// When the next hour closes or the batch is due, whatever comes first.
  Instant next_wake(Instant now) const;

 private:
  struct Batch {
    std::vector<weather::Sample> samples;
    store::Notes notes;
    Instant since;
    bool given_up = false;  // some that were polled
  };

  Outcome store_batch(const std::string& station, Batch& batch);
  void remake_hours_of_memory(const std::string& station, const Batch& batch);
  Outcome remake_hours(const std::string& station, Instant earliest, Instant latest);
  void collect_hours(store::Decision& decision, const Closed& closed);
  Closed closed_at(Instant now) const;
  void heed_clock(Instant now);
  bool batch_due(const std::string& station, const Batch& batch, Instant now) const;
  void tell_of_beginning(Instant now, std::vector<letters::Letter>& letters);
  void add_timed_letters(Instant now, store::Decision& decision,
                         std::vector<letters::Letter>& letters);
  std::vector<letters::Letter> weekly_letters(Instant now);
  void add_digests(Instant now);
  letters::Letter digest_of(const std::string& address,
                            const std::map<std::string, letters::Letter>& waited,
                            Instant now) const;

  std::shared_ptr<const settings::Settings> settings_;
  store::Store& store_;
  Lookout lookout_;
  std::map<std::string, Batch> batches_;
  std::map<std::string, std::set<HourStart>> unsaved_hours_;  // made anew, not yet stored
  store::Decision pending_;                                   // decided, not yet stored
  std::int64_t diary_version_ = -1, seen_version_ = -1;
  std::optional<Instant> first_start_, last_daily_, last_weekly_;
  std::optional<CivilDay> tidied_;
  std::optional<letters::Anew> anew_;  // to be told
  Rations rations_;
  std::ptrdiff_t most_in_memory_ = 200'000;  // 4 months of minutes
};

constexpr std::chrono::days ledger_reach{400};  // so much of what was said is kept in memory
constexpr Seconds batch_for{300};  // ≤ 5 min of samples may be lost with the power (promise 1)

}  // namespace antherd::service
