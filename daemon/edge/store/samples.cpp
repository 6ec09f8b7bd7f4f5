// Samples: which one stands, which are kept aside. The outcome is a function of the set of samples
// alone: the standing one is the maximum under stands_before, every other one is kept once.
#include <algorithm>

#include "edge/store/inside.hpp"
#include "edge/store/rows.hpp"

namespace antherd::store {
namespace {

using weather::Sample;

constexpr const char* insert_sample = "INSERT INTO sample(station, " ANTHERD_SAMPLE_COLUMNS
                                      ") VALUES(?, ?, ?, ?, ?, ?, ?, ?, ?) ON CONFLICT DO NOTHING";
constexpr const char* replace_sample =
    "REPLACE INTO sample(station, " ANTHERD_SAMPLE_COLUMNS ") VALUES(?, ?, ?, ?, ?, ?, ?, ?, ?)";
constexpr const char* insert_conflict =
    "INSERT INTO sample_conflict(station, " ANTHERD_SAMPLE_COLUMNS
    ") VALUES(?, ?, ?, ?, ?, ?, ?, ?, ?)";
constexpr const char* one_sample =
    "SELECT " ANTHERD_SAMPLE_COLUMNS " FROM sample WHERE station = ? AND time = ?";
constexpr const char* conflicts_at =
    "SELECT " ANTHERD_SAMPLE_COLUMNS " FROM sample_conflict WHERE station = ? AND time = ?";

void touch(Intake& intake, Instant time) {
  intake.earliest = intake.earliest ? std::min(*intake.earliest, time) : time;
  intake.latest = intake.latest ? std::max(*intake.latest, time) : time;
}

bool kept_aside(Database& database, std::int64_t station, const Sample& sample) {
  Statement row = database.use(conflicts_at);
  row.bind(station, sample.time);
  while (row.step()) {
    if (read_sample(row) == sample) return true;
  }
  return false;
}

void keep(Database& database, const char* sql, std::int64_t station, const Sample& sample) {
  Statement statement = database.use(sql);
  bind_sample(statement, station, sample);
  statement.run();
}

/// A sample of a time that is known already.
void settle(Database& database, std::int64_t station, const Sample& sample, Intake& intake) {
  Sample standing;
  {
    Statement row = database.use(one_sample);
    if (!row.bind(station, sample.time).step()) {
      throw Trouble{SQLITE_CORRUPT, "a sample that is there cannot be found", {}};
    }
    standing = read_sample(row);
  }
  if (standing == sample || kept_aside(database, station, sample)) {
    ++intake.repeated;
    return;
  }
  ++intake.conflicts;
  if (weather::stands_before(sample, standing)) {
    keep(database, insert_conflict, station, standing);
    keep(database, replace_sample, station, sample);
    ++intake.replaced;
    touch(intake, sample.time);
  } else {
    keep(database, insert_conflict, station, sample);
  }
}

}  // namespace

Result<Intake> Store::add_samples(const std::string& station,
                                  std::span<const weather::Sample> samples, const Notes& notes) {
  if (const Outcome room = inside_->room_for_samples(); !room) return room.failure();
  return inside_->write("keep new samples", [&] {
    Database& database = *inside_->database;
    Intake intake;
    if (!samples.empty()) {
      const std::int64_t id = inside_->station_id(station);
      Statement insert = database.use(insert_sample);
      for (const Sample& sample : samples) {
        bind_sample(insert, id, sample);
        insert.run();
        if (database.changes() == 1) {
          ++intake.added;
          touch(intake, sample.time);
        } else {
          settle(database, id, sample, intake);
        }
      }
    }
    inside_->put(notes);
    return intake;
  });
}

Result<std::vector<weather::Sample>> Store::samples(const std::string& station, Instant from,
                                                    Instant to) const {
  return inside_->read("read samples", [&] {
    std::vector<Sample> found;
    const auto id = inside_->known_station(station);
    if (!id) return found;
    Statement row = inside_->database->use("SELECT " ANTHERD_SAMPLE_COLUMNS
                                           " FROM sample WHERE station = ? AND time >= ? AND "
                                           "time < ? ORDER BY time");
    row.bind(*id, from, to);
    while (row.step()) found.push_back(read_sample(row));
    return found;
  });
}

Result<std::optional<Instant>> Store::last_sample(const std::string& station,
                                                  Instant before) const {
  return inside_->read("read the newest sample", [&] {
    const auto id = inside_->known_station(station);
    if (!id) return std::optional<Instant>();
    Statement row =
        inside_->database->use("SELECT max(time) FROM sample WHERE station = ? AND time < ?");
    row.bind(*id, before).step();
    return row.maybe<Instant>();
  });
}

Result<std::optional<Instant>> Store::last_temperature(const std::string& station) const {
  return inside_->read("read the newest temperature", [&] {
    const auto id = inside_->known_station(station);
    if (!id) return std::optional<Instant>();
    Statement row = inside_->database->use(
        "SELECT max(time) FROM sample WHERE station = ? AND temperature IS NOT NULL");
    row.bind(*id).step();
    return row.maybe<Instant>();
  });
}

Result<std::vector<weather::Sample>> Store::conflicts(const std::string& station) const {
  return inside_->read("read conflicting samples", [&] {
    std::vector<Sample> found;
    const auto id = inside_->known_station(station);
    if (!id) return found;
    Statement row = inside_->database->use(
        "SELECT " ANTHERD_SAMPLE_COLUMNS
        " FROM sample_conflict WHERE station = ? ORDER BY " ANTHERD_SAMPLE_COLUMNS);
    row.bind(*id);
    while (row.step()) found.push_back(read_sample(row));
    return found;
  });
}

Outcome Store::drop_samples_before(Instant before) {
  return inside_->write("drop old samples", [&] {
    Database& database = *inside_->database;
    // By station, so that the primary key finds them.
    database.use("DELETE FROM sample WHERE station IN (SELECT id FROM station) AND time < ?")
        .bind(before)
        .run();
    database
        .use("DELETE FROM sample_conflict WHERE station IN (SELECT id FROM station) AND time < ?")
        .bind(before)
        .run();
    return Done{};
  });
}

}  // namespace antherd::store
