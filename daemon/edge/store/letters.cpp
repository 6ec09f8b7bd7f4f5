// The outbox in the store: letters with their states, and the server's line.
#include "edge/store/inside.hpp"
#include "edge/store/words.hpp"

namespace antherd::store {
namespace {

using outbox::Item;

#define ANTHERD_LETTER_COLUMNS                                                                  \
  "id, identity, recipient, subject, body, kind, severity, decided, valid_until, still, rise, " \
  "state, attempts, doubts, next_try, first_try, ended, answer, digest"

Item read_item(Statement& row) {
  Item item;
  item.id = row.integer();
  letters::Letter& letter = item.letter;
  letter.id = row.text();
  letter.recipient = row.text();
  letter.subject = row.text();
  letter.body = row.text();
  letter.kind = row.text();
  const auto severity = value_of(severity_words, row.text());
  letter.decided = row.instant();
  letter.valid_until = row.maybe<Instant>();
  letter.still = row.text();
  letter.raise = row.integer() != 0;
  const auto state = value_of(state_words, row.text());
  if (!severity || !state) throw Trouble{SQLITE_CORRUPT, "a letter has an unknown state", {}};
  letter.severity = *severity;
  item.state = *state;
  item.attempts = row.small();
  item.doubts = row.small();
  item.next_try = row.instant();
  item.first_try = row.maybe<Instant>();
  item.ended = row.maybe<Instant>();
  item.answer = row.text();
  item.digest = row.text();
  return item;
}

std::vector<Item> read_items(Statement& row) {
  std::vector<Item> items;
  while (row.step()) items.push_back(read_item(row));
  return items;
}

}  // namespace

void Store::Inside::put(const std::vector<outbox::Item>& items) {
  Statement statement = database->use(
      "INSERT INTO letter(identity, recipient, subject, body, kind, severity, decided, "
      "valid_until, still, rise, state, attempts, doubts, next_try, first_try, ended, answer, "
      "digest) VALUES(?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?) "
      "ON CONFLICT(identity, recipient) DO NOTHING");
  for (const Item& item : items) {
    const letters::Letter& letter = item.letter;
    statement
        .bind(letter.id, letter.recipient, letter.subject, letter.body, letter.kind,
              word_of(severity_words, letter.severity), letter.decided, letter.valid_until,
              letter.still, letter.raise, word_of(state_words, item.state), item.attempts,
              item.doubts, item.next_try, item.first_try, item.ended, item.answer, item.digest)
        .run();
  }
}

void Store::Inside::merge(const std::vector<Merger>& mergers) {
  Statement statement = database->use(
      "UPDATE letter SET state = 'merged', digest = ?, ended = ? "
      "WHERE identity = ? AND recipient = ? AND state = 'held'");
  for (const Merger& merger : mergers) {
    statement.bind(merger.digest, merger.at, merger.letter, merger.recipient).run();
  }
}

Result<std::vector<outbox::Item>> Store::letters_open() const {
  return inside_->read("read the open letters", [&] {
    Statement row = inside_->database->use(
        "SELECT " ANTHERD_LETTER_COLUMNS
        " FROM letter WHERE state IN ('waiting', 'sending', 'in_doubt') ORDER BY id");
    return read_items(row);
  });
}

Result<std::vector<outbox::Item>> Store::letters_held() const {
  return inside_->read("read the letters that wait for a digest", [&] {
    Statement row = inside_->database->use("SELECT " ANTHERD_LETTER_COLUMNS
                                           " FROM letter WHERE state = 'held' ORDER BY id");
    return read_items(row);
  });
}

Result<std::vector<outbox::Item>> Store::letters_since(Instant since) const {
  return inside_->read("read the letters", [&] {
    Statement row = inside_->database->use("SELECT " ANTHERD_LETTER_COLUMNS
                                           " FROM letter WHERE decided >= ? ORDER BY decided, id");
    row.bind(since);
    return read_items(row);
  });
}

Result<std::vector<outbox::Delivery>> Store::deliveries(Instant since) const {
  return inside_->read("read what became of the letters", [&] {
    std::vector<outbox::Delivery> found;
    Statement row =
        inside_->database->use("SELECT decided, state, ended FROM letter WHERE decided >= ?");
    row.bind(since);
    while (row.step()) {
      outbox::Delivery delivery;
      delivery.decided = row.instant();
      const auto state = value_of(state_words, row.text());
      if (!state) throw Trouble{SQLITE_CORRUPT, "a letter has an unknown state", {}};
      delivery.state = *state;
      delivery.ended = row.maybe<Instant>();
      found.push_back(delivery);
    }
    return found;
  });
}

Result<std::optional<outbox::Item>> Store::letter(std::int64_t id) const {
  return inside_->read("read a letter", [&]() -> std::optional<Item> {
    Statement row =
        inside_->database->use("SELECT " ANTHERD_LETTER_COLUMNS " FROM letter WHERE id = ?");
    if (!row.bind(id).step()) return std::nullopt;
    return read_item(row);
  });
}

void Store::Inside::put(const outbox::Item& item, const outbox::Line& line) {
  database
      ->use(
          "UPDATE letter SET state = ?, attempts = ?, doubts = ?, next_try = ?, first_try = ?, "
          "ended = ?, answer = ?, valid_until = ? WHERE id = ?")
      .bind(word_of(state_words, item.state), item.attempts, item.doubts, item.next_try,
            item.first_try, item.ended, item.answer, item.letter.valid_until, item.id)
      .run();
  if (database->changes() != 1) {
    throw Trouble{SQLITE_NOTFOUND, "there is no letter " + std::to_string(item.id),
                  "nothing was changed"};
  }
  database
      ->use(
          "INSERT INTO line(id, failures, next_try, last_success, trouble) "
          "VALUES(1, ?, ?, ?, ?) ON CONFLICT(id) DO UPDATE SET failures = excluded.failures, "
          "next_try = excluded.next_try, last_success = excluded.last_success, "
          "trouble = excluded.trouble")
      .bind(line.failures, line.next_try, line.last_success, line.trouble)
      .run();
}

Outcome Store::update(const outbox::Item& item, const outbox::Line& line) {
  return inside_->write_from_reserve("keep what became of a letter", [&] {
    inside_->put(item, line);
    return Done{};
  });
}

Result<bool> Store::update_if(const outbox::Item& was, const outbox::Item& item,
                              const outbox::Line& line) {
  return inside_->write("keep what is wanted of a letter", [&] {
    Statement same = inside_->database->use(
        "SELECT 1 FROM letter WHERE id = ? AND state = ? AND attempts = ? AND doubts = ?");
    if (!same.bind(was.id, word_of(state_words, was.state), was.attempts, was.doubts).step()) {
      return false;
    }
    inside_->put(item, line);
    return true;
  });
}

Result<outbox::Line> Store::line() const {
  return inside_->read("read the state of the mail line", [&] {
    outbox::Line line;
    Statement row =
        inside_->database->use("SELECT failures, next_try, last_success, trouble FROM line");
    if (!row.step()) return line;
    line.failures = row.small();
    line.next_try = row.maybe<Instant>();
    line.last_success = row.maybe<Instant>();
    line.trouble = row.text();
    return line;
  });
}

}  // namespace antherd::store
