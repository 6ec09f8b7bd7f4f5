// See inside.hpp.
#include "edge/store/inside.hpp"

#include <unistd.h>

#include <algorithm>

#include "edge/store/schema.hpp"

namespace antherd::store {
namespace {

using Mode = Database::Mode;

/// How a reader must open these files without making any.
Mode reading_mode(const std::string& path) {
  const auto log = file_state(path + "-wal");
  const bool index = file_state(path + "-shm").has_value();
  if (!log || (log->size == 0 && !index)) return Mode::still;
  if (index) return Mode::beside;
  throw Trouble{SQLITE_CANTOPEN, "it was not closed and antherd.db-shm is missing",
                "start the service, or any command that writes, once: it puts that right"};
}

const char* next_after(int code) {
  switch (code) {
    case SQLITE_FULL:
      return "nothing was changed; make room on the disk and it goes on by itself";
    case SQLITE_BUSY:
    case SQLITE_LOCKED:
      return "nothing was changed; another command holds the store: try again";
    case SQLITE_READONLY:
    case SQLITE_PERM:
    case SQLITE_AUTH:
      return "nothing was changed; writing must be allowed on the folder and its file system";
    case SQLITE_CORRUPT:
    case SQLITE_NOTADB:
      return "it was left as it is; restart the service: it sets a damaged file aside and begins "
             "a new one";
    case SQLITE_CANTOPEN:
      return "see that the folder exists and that its files may be read and written";
    default:
      return "nothing was changed; it is tried again, look after the disk if this stays";
  }
}

/// Whether a call that failed so may succeed another time.
bool passes(int code) {
  switch (code) {
    case SQLITE_FULL:
    case SQLITE_IOERR:
    case SQLITE_READONLY:
    case SQLITE_CANTOPEN:
    case SQLITE_BUSY:
    case SQLITE_LOCKED:
    case SQLITE_PROTOCOL:
    case SQLITE_NOMEM:
      return true;
    default:
      return false;
  }
}

}  // namespace

Store::Inside::~Inside() {
  database.reset();
  if (lock >= 0) ::close(lock);
}

Failure Store::Inside::failure_of(const char* what, const Trouble& trouble) {
  full = trouble.primary() == SQLITE_FULL;
  damaged = damaged || trouble.damaged();
  const bool explained = !trouble.what_next.empty();  // we found something that stays so
  return Failure{what, path, trouble.why,
                 explained ? trouble.what_next : next_after(trouble.primary()),
                 !explained && passes(trouble.primary())};
}

bool Store::Inside::give_reserve() {
  if (!options.service) return false;
  const auto released = remove_ballast(options.folder);
  if (!released || !*released) return false;
  reserve_given = true;
  return true;
}

Outcome Store::Inside::room_for_samples() {
  samples_wait = false;
  if (!options.service || has_ballast(options.folder)) return Done{};
  return attempt("keep new samples", [&] {
    auto free = free_bytes(options.folder);
    if (options.page_limit > 0) {
      const auto left = 4096 * (options.page_limit - database->number("PRAGMA page_count"));
      free = std::min(free.value_or(left), left);
    }
    samples_wait = free && *free < samples_margin;
    if (samples_wait) {
      throw Trouble{SQLITE_FULL,
                    "the disk is full: the 8 MiB in reserve are given up and less than 16 MiB are "
                    "free",
                    "readings wait in memory so that alerts find room; make room on the disk"};
    }
    return Done{};
  });
}

bool Store::Inside::settled() const {
  if (mode != Mode::still) return true;
  const auto log = file_state(path + "-wal");
  return (!log || log->size == 0) && file_state(path) == seen;
}

void Store::Inside::connect() {
  database.reset();
  mode = options.read_only ? reading_mode(path) : Mode::write;
  seen = file_state(path);
  database = std::make_unique<Database>(path, mode, options.patience, options.haste);
}

void Store::Inside::settle_schema() {
  switch (standing_of(*database, migrations())) {
    case Standing::current:
      break;
    case Standing::newer:
      throw Trouble{SQLITE_ERROR,
                    "it has schema " + std::to_string(database->number("PRAGMA user_version")) +
                        ", made by a newer antherd; this one knows " +
                        std::to_string(schema_number),
                    "it was left as it is; install the newer antherd again"};
    case Standing::foreign:
      throw Trouble{SQLITE_ERROR, "it is a database of another program",
                    "it was left as it is; move it away or name another [store] folder"};
    case Standing::damaged:
      throw Trouble{SQLITE_CORRUPT, "its header is damaged", {}};
    case Standing::empty:
    case Standing::older:
      if (options.read_only) {
        throw Trouble{SQLITE_ERROR, "it was not brought to schema " + std::to_string(schema_number),
                      "start the service once: it does that"};
      }
      break;
  }
  if (options.read_only) return;
  if (database->text("PRAGMA journal_mode = WAL") != "wal") {
    throw Trouble{SQLITE_CANTOPEN, "this file system does not carry a write-ahead log",
                  "name a folder on a local disk with [store] folder"};
  }
  migrate(*database, migrations());
  if (options.page_limit > 0) {
    // A PRAGMA takes no parameters; this is a number of ours.
    database->script(("PRAGMA max_page_count = " + std::to_string(options.page_limit)).c_str());
  }
}

void Store::Inside::check_all() {
  const std::string answer = database->text("PRAGMA quick_check(1)");
  if (answer != "ok") throw Trouble{SQLITE_CORRUPT, answer, {}};
}

std::optional<std::int64_t> Store::Inside::known_station(const std::string& name) {
  if (const auto found = stations.find(name); found != stations.end()) return found->second;
  Statement ask = database->use("SELECT id FROM station WHERE name = ?");
  if (!ask.bind(name).step()) return std::nullopt;
  return stations[name] = ask.integer();
}

std::int64_t Store::Inside::station_id(const std::string& name) {
  if (const auto known = known_station(name)) return *known;
  database->use("INSERT INTO station(name) VALUES(?)").bind(name).run();
  return stations[name] = database->last_id();
}

}  // namespace antherd::store
