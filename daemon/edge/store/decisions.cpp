// The transaction of a tick: hours, what was said of them, the letters that say it, in one piece.
#include "edge/store/inside.hpp"
#include "edge/store/words.hpp"

namespace antherd::store {
namespace {

using alerts::Said;

void put_said(Database& database, const std::vector<Said>& entries) {
  Statement statement = database.use(
      "INSERT INTO said(episode, kind, subject, start, until, saying, level, at, about, seen) "
      "VALUES(?, ?, ?, ?, ?, ?, ?, ?, ?, ?) "
      "ON CONFLICT(episode, saying, level, about, at) DO NOTHING");
  for (const Said& said : entries) {
    statement
        .bind(said.episode, word_of(kind_words, said.kind), said.subject, said.start, said.until,
              word_of(saying_words, said.saying), word_of(level_words, said.level), said.at,
              said.about, said.seen)
        .run();
  }
}

Said read_said(Statement& row) {
  Said said;
  said.episode = row.text();
  const auto kind = value_of(kind_words, row.text());
  said.subject = row.text();
  said.start = row.instant();
  said.until = row.maybe<Instant>();
  const auto saying = value_of(saying_words, row.text());
  const auto level = value_of(level_words, row.text());
  if (!kind || !saying || !level) {
    throw Trouble{SQLITE_CORRUPT, "an entry of what was said holds an unknown word", {}};
  }
  said.kind = *kind;
  said.saying = *saying;
  said.level = *level;
  said.at = row.instant();
  said.about = row.instant();
  said.seen = row.integer() != 0;
  said.place = row.integer();
  return said;
}

}  // namespace

Outcome Store::save(const Decision& decision) {
  return inside_->write_from_reserve("keep the decisions", [&] {
    for (const auto& [station, hours] : decision.hours) inside_->put(station, hours);
    for (const auto& [station, gone] : decision.hours_gone) inside_->remove(station, gone);
    put_said(*inside_->database, decision.said);
    inside_->put(decision.letters);
    inside_->merge(decision.merged);
    inside_->put(decision.notes);
    return Done{};
  });
}

Result<std::vector<alerts::Said>> Store::said(Instant since) const {
  return inside_->read("read what was said", [&] {
    std::vector<Said> found;
    Statement row = inside_->database->use(
        "SELECT episode, kind, subject, start, until, saying, level, at, about, seen, id "
        "FROM said "
        "WHERE at >= ? ORDER BY at, id");
    row.bind(since);
    while (row.step()) found.push_back(read_said(row));
    return found;
  });
}

Outcome Store::mark_seen(const std::string& episode, alerts::Level level) {
  return inside_->write("mark an alert as seen", [&] {
    Database& database = *inside_->database;
    database.use("UPDATE said SET seen = 1 WHERE episode = ? AND level = ?")
        .bind(episode, word_of(level_words, level))
        .run();
    if (database.changes() == 0) {
      throw Trouble{SQLITE_NOTFOUND, "nothing was said of " + episode + " at this level",
                    "nothing was changed"};
    }
    // The running service looks at this alone, and reads the ledger again when it has grown.
    database
        .use(
            "INSERT INTO note(key, value) VALUES('seen_version', '1') ON CONFLICT(key) DO UPDATE "
            "SET value = CAST(CAST(value AS INTEGER) + 1 AS TEXT)")
        .run();
    return Done{};
  });
}

Result<std::int64_t> Store::seen_version() const {
  return inside_->read("look whether an alert was marked as seen", [&] {
    return inside_->database->number(
        "SELECT coalesce(max(CAST(value AS INTEGER)), 0) FROM note WHERE key = 'seen_version'");
  });
}

}  // namespace antherd::store
