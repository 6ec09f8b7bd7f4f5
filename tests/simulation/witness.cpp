// See witness.hpp.
#include "witness.hpp"

#include <stdexcept>

namespace simulation {
namespace {

constexpr const char* letter_columns =
    "SELECT id, identity, recipient, subject, body, kind, severity, decided, valid_until, still, "
    "rise, state, attempts, doubts, next_try, first_try, ended, answer, digest FROM letter "
    "WHERE id ";

LetterRow letter_of(sqlite3_stmt* row) {
  LetterRow letter;
  letter.id = sqlite3_column_int64(row, 0);
  letter.identity = text_at(row, 1);
  letter.recipient = text_at(row, 2);
  letter.subject = text_at(row, 3);
  letter.body = text_at(row, 4);
  letter.kind = text_at(row, 5);
  letter.severity = text_at(row, 6);
  letter.decided = instant_at(row, 7);
  letter.valid_until = maybe_at(row, 8);
  letter.still = text_at(row, 9);
  letter.raise = sqlite3_column_int(row, 10) != 0;
  letter.state = text_at(row, 11);
  letter.attempts = sqlite3_column_int(row, 12);
  letter.doubts = sqlite3_column_int(row, 13);
  letter.next_try = instant_at(row, 14);
  letter.first_try = maybe_at(row, 15);
  letter.ended = maybe_at(row, 16);
  letter.answer = text_at(row, 17);
  letter.digest = text_at(row, 18);
  return letter;
}

}  // namespace

std::string text_at(sqlite3_stmt* row, int column) {
  const auto* bytes = sqlite3_column_text(row, column);
  return bytes == nullptr ? std::string() : reinterpret_cast<const char*>(bytes);
}
Instant instant_at(sqlite3_stmt* row, int column) {
  return Instant(Seconds(sqlite3_column_int64(row, column)));
}
std::optional<Instant> maybe_at(sqlite3_stmt* row, int column) {
  if (sqlite3_column_type(row, column) == SQLITE_NULL) return std::nullopt;
  return instant_at(row, column);
}

Witness::Witness(const std::string& database) {
  if (sqlite3_open_v2(database.c_str(), &database_, SQLITE_OPEN_READONLY, nullptr) != SQLITE_OK) {
    throw std::runtime_error("the witness cannot open " + database);
  }
  // Its closing must not write the log back, as that of a last connection would.
  sqlite3_db_config(database_, SQLITE_DBCONFIG_NO_CKPT_ON_CLOSE, 1, nullptr);
}

Witness::~Witness() { sqlite3_close(database_); }

void Witness::ask(const std::string& sql, const std::function<void(sqlite3_stmt*)>& row) {
  why_.clear();
  sqlite3_stmt* statement = nullptr;
  int code = sqlite3_prepare_v2(database_, sql.c_str(), -1, &statement, nullptr);
  if (code == SQLITE_OK) {
    while ((code = sqlite3_step(statement)) == SQLITE_ROW) row(statement);
  }
  if (code != SQLITE_DONE) why_ = sqlite3_errmsg(database_);
  sqlite3_finalize(statement);
}

std::vector<SaidRow> Witness::said_after(std::int64_t id) {
  std::vector<SaidRow> found;
  ask("SELECT id, episode, kind, subject, start, until, saying, level, at, about FROM said "
      "WHERE id > " +
          std::to_string(id) + " ORDER BY id",
      [&](sqlite3_stmt* row) {
        SaidRow said;
        said.id = sqlite3_column_int64(row, 0);
        said.episode = text_at(row, 1);
        said.kind = text_at(row, 2);
        said.subject = text_at(row, 3);
        said.start = instant_at(row, 4);
        said.until = maybe_at(row, 5);
        said.saying = text_at(row, 6);
        said.level = text_at(row, 7);
        said.at = instant_at(row, 8);
        said.about = instant_at(row, 9);
        found.push_back(said);
      });
  return found;
}

std::vector<LetterRow> Witness::letters_after(std::int64_t id) {
  std::vector<LetterRow> found;
  ask(letter_columns + std::string("> ") + std::to_string(id) + " ORDER BY id",
      [&](sqlite3_stmt* row) { found.push_back(letter_of(row)); });
  return found;
}

std::optional<LetterRow> Witness::letter(std::int64_t id) {
  std::optional<LetterRow> found;
  ask(letter_columns + std::string("= ") + std::to_string(id),
      [&](sqlite3_stmt* row) { found = letter_of(row); });
  return found;
}

}  // namespace simulation
