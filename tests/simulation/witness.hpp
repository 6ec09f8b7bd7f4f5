// A second connection to the store's file, for reading alone, that sees only what is committed. It
// knows the schema and nothing of the service.
#pragma once

#include <sqlite3.h>

#include <cstdint>
#include <functional>
#include <optional>
#include <string>
#include <vector>

#include "core/units/time.hpp"

namespace simulation {

using namespace antherd;

struct SaidRow {
  std::int64_t id = 0;
  std::string episode, kind, subject, saying, level;
  Instant start, at, about;
  std::optional<Instant> until;
};

struct LetterRow {
  std::int64_t id = 0;
  std::string identity, recipient, subject, body, kind, severity, still, state, answer, digest;
  Instant decided, next_try;
  std::optional<Instant> valid_until, first_try, ended;
  bool raise = false;
  int attempts = 0, doubts = 0;
};

class Witness {
 public:
  explicit Witness(const std::string& database);
  Witness(const Witness&) = delete;
  Witness& operator=(const Witness&) = delete;
  ~Witness();

  std::vector<SaidRow> said_after(std::int64_t id);
  std::vector<LetterRow> letters_after(std::int64_t id);
  std::optional<LetterRow> letter(std::int64_t id);
  /// Any other question: `row` is called for each row.
  void ask(const std::string& sql, const std::function<void(sqlite3_stmt*)>& row);
  std::string why() const { return why_; }

 private:
  sqlite3* database_ = nullptr;
  std::string why_;  // what the last question failed with, empty for nothing
};

std::string text_at(sqlite3_stmt* row, int column);
Instant instant_at(sqlite3_stmt* row, int column);
std::optional<Instant> maybe_at(sqlite3_stmt* row, int column);

}  // namespace simulation
