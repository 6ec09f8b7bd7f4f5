// The diary. Another process (the command that writes an irrigation down) adds beside the service.
#include "edge/store/inside.hpp"
#include "edge/store/words.hpp"

namespace antherd::store {
namespace {

using field::Irrigation;
using field::Scouting;

std::int64_t days_of(CivilDay day) { return day.time_since_epoch().count(); }

Irrigation read_irrigation(Statement& row) {
  Irrigation irrigation;
  irrigation.id = row.integer();
  irrigation.field = row.text();
  irrigation.start = row.instant();
  irrigation.end = row.instant();
  const auto method = value_of(method_words, row.text());
  if (!method) throw Trouble{SQLITE_CORRUPT, "an irrigation has an unknown method", {}};
  irrigation.method = *method;
  irrigation.depth = row.maybe<Millimetre>();
  irrigation.set = row.small();
  return irrigation;
}

Scouting read_scouting(Statement& row) {
  Scouting note;
  note.id = row.integer();
  note.field = row.text();
  note.date = CivilDay(std::chrono::days(row.integer()));
  note.stage = row.maybe<int>();
  note.began = row.integer() != 0;
  note.disease = row.maybe<bool>();
  note.seed_set = row.maybe<int>();
  note.seed_looked = row.maybe<int>();
  note.note = row.text();
  return note;
}

/// The id of the same fact among the rows of a statement, if one is there.
template <class Fact, class Read>
std::optional<std::int64_t> same_among(Statement& row, const Fact& wanted, Read read) {
  while (row.step()) {
    const Fact found = read(row);
    if (found.same_as(wanted)) return found.id;
  }
  return std::nullopt;
}

Outcome remove_by_id(Database& database, const char* sql, std::int64_t id, const char* kind) {
  database.use(sql).bind(id).run();
  if (database.changes() == 1) return Done{};
  return Failure{std::string("remove ") + kind, "number " + std::to_string(id),
                 "the diary holds none with this number", "nothing was changed; see --list"};
}

/// An outcome within an outcome, flat.
Outcome flat(Result<Outcome> nested) {
  if (!nested) return nested.failure();
  return *nested;
}

}  // namespace

Result<std::int64_t> Store::add(const field::Irrigation& irrigation) {
  return inside_->write("write the irrigation down", [&]() -> std::int64_t {
    Database& database = *inside_->database;
    {
      Statement row = database.use(
          "SELECT id, field, start, \"end\", method, depth, \"set\" FROM irrigation "
          "WHERE field = ? AND start = ? ORDER BY id");
      row.bind(irrigation.field, irrigation.start);
      if (const auto same = same_among(row, irrigation, read_irrigation)) return *same;
    }
    database
        .use(
            "INSERT INTO irrigation(field, start, \"end\", method, depth, \"set\") "
            "VALUES(?, ?, ?, ?, ?, ?)")
        .bind(irrigation.field, irrigation.start, irrigation.end,
              word_of(method_words, irrigation.method), irrigation.depth, irrigation.set)
        .run();
    return database.last_id();
  });
}

Result<std::int64_t> Store::add(const field::Scouting& note) {
  return inside_->write("write the scouting note down", [&]() -> std::int64_t {
    Database& database = *inside_->database;
    {
      Statement row = database.use(
          "SELECT id, field, date, stage, began, disease, seed_set, seed_looked, note "
          "FROM scouting WHERE field = ? AND date = ? ORDER BY id");
      row.bind(note.field, days_of(note.date));
      if (const auto same = same_among(row, note, read_scouting)) return *same;
    }
    database
        .use(
            "INSERT INTO scouting(field, date, stage, began, disease, seed_set, seed_looked, "
            "note) VALUES(?, ?, ?, ?, ?, ?, ?, ?)")
        .bind(note.field, days_of(note.date), note.stage, note.began, note.disease, note.seed_set,
              note.seed_looked, note.note)
        .run();
    return database.last_id();
  });
}

Outcome Store::remove_irrigation(std::int64_t id) {
  return flat(inside_->write("remove an irrigation", [&] {
    return remove_by_id(*inside_->database, "DELETE FROM irrigation WHERE id = ?", id,
                        "an irrigation");
  }));
}

Outcome Store::remove_scouting(std::int64_t id) {
  return flat(inside_->write("remove a scouting note", [&] {
    return remove_by_id(*inside_->database, "DELETE FROM scouting WHERE id = ?", id,
                        "a scouting note");
  }));
}

Result<field::Diary> Store::diary(const std::string& field) const {
  return inside_->read("read the diary", [&] {
    field::Diary diary;
    Statement irrigations = inside_->database->use(
        "SELECT id, field, start, \"end\", method, depth, \"set\" FROM irrigation "
        "WHERE field = ? ORDER BY start, \"end\", \"set\", id");
    irrigations.bind(field);
    while (irrigations.step()) diary.irrigations.push_back(read_irrigation(irrigations));
    Statement notes = inside_->database->use(
        "SELECT id, field, date, stage, began, disease, seed_set, seed_looked, note "
        "FROM scouting WHERE field = ? ORDER BY date, id");
    notes.bind(field);
    while (notes.step()) diary.notes.push_back(read_scouting(notes));
    return diary;
  });
}

Result<std::vector<std::string>> Store::diary_fields(Instant since) const {
  return inside_->read("read the diary", [&] {
    std::vector<std::string> names;
    Statement fields = inside_->database->use(
        "SELECT field FROM irrigation WHERE start >= ?1 UNION "
        "SELECT field FROM scouting WHERE date >= ?2 ORDER BY 1");
    fields.bind(since, std::chrono::floor<std::chrono::days>(since).time_since_epoch().count());
    while (fields.step()) names.push_back(fields.text());
    return names;
  });
}

Result<std::int64_t> Store::diary_version() const {
  return inside_->read("look for news in the diary", [&] {
    return inside_->database->number("SELECT number FROM diary_version");
  });
}

}  // namespace antherd::store
