// What a Store holds, and the doorway through which every one of its calls goes: trouble becomes a
// Failure there, a broken transaction is undone, and a reader notices that a writer came.
#pragma once

#include <map>
#include <memory>
#include <optional>
#include <string>
#include <type_traits>
#include <utility>

#include "edge/store/database.hpp"
#include "edge/store/folder.hpp"
#include "edge/store/store.hpp"

namespace antherd::store {

struct Store::Inside {
  Options options;
  std::string path;  // of antherd.db
  int lock = -1;
  Database::Mode mode = Database::Mode::write;
  std::optional<FileState> seen;  // the file as a `still` reader opened it
  std::unique_ptr<Database> database;
  std::map<std::string, std::int64_t> stations;  // ids that are committed
  std::optional<std::string> aside;
  bool anew = false;  // begun by this opening where a store had been
  bool full = false;
  bool reserve_given = false;  // the ballast, and it was not put back yet
  bool samples_wait = false;   // the last samples were not taken, so that decisions find room
  bool damaged = false;        // a call met damage since the whole file was checked

  Inside() = default;
  Inside(const Inside&) = delete;
  Inside& operator=(const Inside&) = delete;
  ~Inside();

  /// Runs a call. `what` completes "could not …".
  template <class Work>
  auto attempt(const char* what, Work&& work) -> Result<std::invoke_result_t<Work>> {
    try {
      full = false;
      return std::forward<Work>(work)();
    } catch (const Trouble& trouble) {
      if (database) database->rollback();
      stations.clear();  // ids given in the transaction that was undone must not be used
      return failure_of(what, trouble);
    }
  }

  /// Runs a call that writes, in one transaction.
  template <class Work>
  auto write(const char* what, Work&& work) -> Result<std::invoke_result_t<Work>> {
    return attempt(what, [&] {
      if (options.read_only) throw Trouble{SQLITE_READONLY, "it was opened for reading only", {}};
      Transaction transaction(*database);
      auto value = work();
      transaction.commit();
      return value;
    });
  }

  /// The same for what must find room on a full disk: the ballast is let go for it.
  template <class Work>
  auto write_from_reserve(const char* what, Work&& work) -> Result<std::invoke_result_t<Work&>> {
    auto done = write(what, work);
    if (done) return done;
    const bool no_room = full || (done.failure().passes && has_no_room(options.folder));
    if (!no_room || !give_reserve()) return done;
    return write(what, work);
  }

  /// Runs a call that reads. A `still` reader holds no lock, so it looks before and after whether
  /// a writer came meanwhile, and reads again if so.
  template <class Work>
  auto read(const char* what, Work&& work) -> Result<std::invoke_result_t<Work>> {
    return attempt(what, [&] {
      for (int tries = 1;; ++tries) {
        if (!settled()) connect();
        try {
          auto value = work();
          if (settled()) return value;
        } catch (const Trouble& trouble) {
          const bool vanished =
              mode == Database::Mode::beside && trouble.primary() == SQLITE_READONLY;
          if ((settled() && !vanished) || tries >= 10) throw;
          if (vanished) connect();
        }
        if (tries >= 10) throw Trouble{SQLITE_BUSY, "it changes too often just now", {}};
      }
    });
  }

  /// Service: lets the ballast go. @return whether there was one
  bool give_reserve();
  /// Service: samples stop before decisions do. Fails while the ballast is missing and little is
  /// free beside it.
  Outcome room_for_samples();

  /// Whether what a reader opened is still what is there.
  bool settled() const;
  /// Opens the connection anew in the mode that suits the files. Throws Trouble.
  void connect();
  /// Checks the number of the schema and, when writing, brings it up to date. Throws Trouble.
  void settle_schema();
  /// Service: checks the whole file. Throws Trouble when it is damaged.
  void check_all();
  /// Service, in a store that was just begun where one had been: takes the diary back from the
  /// newest copy that can be read, and notes how it began, in one transaction.
  Outcome begin_anew();

  /// The id of a station, made when missing (inside a transaction that writes).
  std::int64_t station_id(const std::string& name);
  /// The id of a station, if it has one.
  std::optional<std::int64_t> known_station(const std::string& name);

  /// Parts of a transaction that writes.
  void put(const Notes& notes);
  void put(const std::string& station, const std::vector<weather::Hour>& hours);
  void remove(const std::string& station, const std::vector<HourStart>& hours);
  void put(const std::vector<outbox::Item>& letters);
  void put(const outbox::Item& item, const outbox::Line& line);
  void merge(const std::vector<Merger>& mergers);

  Failure failure_of(const char* what, const Trouble& trouble);
};

}  // namespace antherd::store
