// See schema.hpp. All times are unix seconds (UTC), dates are days since 1970-01-01, values are in
// the core's units, NULL is missing. Tables of facts hold no time of arrival.
#include "edge/store/schema.hpp"

#include <array>

namespace antherd::store {
namespace {

constexpr const char* first_schema = R"sql(
CREATE TABLE migration(
  number INTEGER PRIMARY KEY,
  name TEXT NOT NULL
) STRICT;

-- Facts from stations.
CREATE TABLE station(
  id INTEGER PRIMARY KEY,
  name TEXT NOT NULL UNIQUE
) STRICT;

CREATE TABLE sample(              -- the one that stands, of each time
  station INTEGER NOT NULL REFERENCES station(id),
  time INTEGER NOT NULL,
  temperature REAL,               -- degC, raw
  humidity REAL,                  -- %, raw
  dew_point REAL,                 -- degC
  rain REAL,                      -- mm, raw
  wind REAL,                      -- m/s, at the station's height
  solar REAL,                     -- W/m2
  wet_minutes REAL,
  PRIMARY KEY(station, time)
) STRICT, WITHOUT ROWID;

CREATE TABLE sample_conflict(     -- other samples of the same time, each once
  station INTEGER NOT NULL REFERENCES station(id),
  time INTEGER NOT NULL,
  temperature REAL,
  humidity REAL,
  dew_point REAL,
  rain REAL,
  wind REAL,
  solar REAL,
  wet_minutes REAL
) STRICT;
CREATE INDEX sample_conflict_time ON sample_conflict(station, time);

CREATE TABLE hour(
  station INTEGER NOT NULL REFERENCES station(id),
  start INTEGER NOT NULL CHECK(start % 3600 = 0),
  n INTEGER NOT NULL,
  n_humidity INTEGER NOT NULL,
  coverage REAL NOT NULL,
  humidity_coverage REAL NOT NULL,
  temperature REAL,
  temperature_max REAL,
  temperature_min REAL,
  humidity REAL,
  humidity_max REAL,
  humidity_min REAL,
  rain REAL,
  rain_for_wetness REAL,
  wind REAL,
  solar REAL,
  wet_minutes REAL,
  whole_degrees INTEGER NOT NULL,
  flags TEXT,                     -- JSON [[element, verdict, reason, count, at, value], ...]
  PRIMARY KEY(station, start)
) STRICT, WITHOUT ROWID;

-- Facts from the grower. Ids are shown to people and never used again.
CREATE TABLE irrigation(
  id INTEGER PRIMARY KEY AUTOINCREMENT,
  field TEXT NOT NULL,
  start INTEGER NOT NULL,
  "end" INTEGER NOT NULL,
  method TEXT NOT NULL,
  depth REAL,                     -- mm
  "set" INTEGER NOT NULL
) STRICT;
CREATE INDEX irrigation_field ON irrigation(field, start);

CREATE TABLE scouting(
  id INTEGER PRIMARY KEY AUTOINCREMENT,
  field TEXT NOT NULL,
  date INTEGER NOT NULL,
  stage INTEGER,
  began INTEGER NOT NULL,
  disease INTEGER,
  seed_set INTEGER,
  seed_looked INTEGER,
  note TEXT NOT NULL
) STRICT;
CREATE INDEX scouting_field ON scouting(field, date);

CREATE TABLE diary_version(
  id INTEGER PRIMARY KEY CHECK(id = 1),
  number INTEGER NOT NULL
) STRICT;
INSERT INTO diary_version VALUES(1, 0);
CREATE TRIGGER irrigation_added AFTER INSERT ON irrigation
  BEGIN UPDATE diary_version SET number = number + 1; END;
CREATE TRIGGER irrigation_changed AFTER UPDATE ON irrigation
  BEGIN UPDATE diary_version SET number = number + 1; END;
CREATE TRIGGER irrigation_removed AFTER DELETE ON irrigation
  BEGIN UPDATE diary_version SET number = number + 1; END;
CREATE TRIGGER scouting_added AFTER INSERT ON scouting
  BEGIN UPDATE diary_version SET number = number + 1; END;
CREATE TRIGGER scouting_changed AFTER UPDATE ON scouting
  BEGIN UPDATE diary_version SET number = number + 1; END;
CREATE TRIGGER scouting_removed AFTER DELETE ON scouting
  BEGIN UPDATE diary_version SET number = number + 1; END;

-- What was said, and the letters that said it.
CREATE TABLE said(
  id INTEGER PRIMARY KEY,
  episode TEXT NOT NULL,
  kind TEXT NOT NULL,
  subject TEXT NOT NULL,
  start INTEGER NOT NULL,
  until INTEGER,
  saying TEXT NOT NULL,
  level TEXT NOT NULL,
  at INTEGER NOT NULL,
  about INTEGER NOT NULL,
  seen INTEGER NOT NULL,
  UNIQUE(episode, saying, level, about, at)
) STRICT;
CREATE INDEX said_at ON said(at);

CREATE TABLE letter(
  id INTEGER PRIMARY KEY AUTOINCREMENT,
  identity TEXT NOT NULL,
  recipient TEXT NOT NULL,
  subject TEXT NOT NULL,
  body TEXT NOT NULL,
  kind TEXT NOT NULL,
  severity TEXT NOT NULL,
  decided INTEGER NOT NULL,
  valid_until INTEGER,
  still TEXT NOT NULL,
  rise INTEGER NOT NULL,
  state TEXT NOT NULL,
  attempts INTEGER NOT NULL,
  doubts INTEGER NOT NULL,
  next_try INTEGER NOT NULL,
  first_try INTEGER,
  ended INTEGER,
  answer TEXT NOT NULL,
  UNIQUE(identity, recipient)
) STRICT;
CREATE INDEX letter_decided ON letter(decided);
CREATE INDEX letter_open ON letter(id) WHERE state IN ('waiting', 'sending', 'in_doubt');

CREATE TABLE line(
  id INTEGER PRIMARY KEY CHECK(id = 1),
  failures INTEGER NOT NULL,
  next_try INTEGER,
  last_success INTEGER,
  trouble TEXT NOT NULL
) STRICT;

-- Small facts by name: bookmarks of intakes, when the last review went.
CREATE TABLE note(
  key TEXT PRIMARY KEY,
  value TEXT NOT NULL
) STRICT, WITHOUT ROWID;

PRAGMA application_id = 0x416e7468;
PRAGMA user_version = 1;
)sql";

// Letters past the limits of an address wait as `held`, then are `merged`: named in a digest.
constexpr const char* digest_schema = R"sql(
ALTER TABLE letter ADD COLUMN digest TEXT NOT NULL DEFAULT '';  -- identity of the letter naming it
CREATE INDEX letter_held ON letter(id) WHERE state = 'held';
PRAGMA user_version = 2;
)sql";

constexpr std::array<Migration, 2> all_steps{
    {{1, "first tables", first_schema}, {2, "digests", digest_schema}}};

}  // namespace

std::span<const Migration> migrations() { return all_steps; }

Standing standing_of(Database& database, std::span<const Migration> steps) {
  const std::int64_t version = database.number("PRAGMA user_version");
  const std::int64_t application = database.number("PRAGMA application_id");
  const std::int64_t objects = database.number("SELECT count(*) FROM sqlite_schema");
  if (version == 0 && application == 0 && objects == 0) return Standing::empty;
  const bool has_list =
      database.number("SELECT count(*) FROM sqlite_schema WHERE name = 'migration'") == 1;
  if (!has_list) return application == application_id ? Standing::damaged : Standing::foreign;
  // The list of steps is the second witness: one flipped bit of the header is not a newer schema.
  const std::int64_t listed = database.number("SELECT max(number) FROM migration");
  if (application != application_id || listed != version) return Standing::damaged;
  const std::int64_t newest = steps.back().number;
  if (version > newest) return Standing::newer;
  return version < newest ? Standing::older : Standing::current;
}

void migrate(Database& database, std::span<const Migration> steps) {
  for (const Migration& step : steps) {
    Transaction transaction(database);
    // Asked inside the transaction: another process may have taken the step meanwhile.
    if (database.number("PRAGMA user_version") >= step.number) continue;
    database.script(step.sql);
    database.use("INSERT INTO migration(number, name) VALUES(?, ?)")
        .bind(step.number, step.name)
        .run();
    transaction.commit();
  }
}

}  // namespace antherd::store
