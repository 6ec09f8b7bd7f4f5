// A small SQLite in memory for counts that are made beside ours, in plain SQL. It must not know
// what is counted.
#pragma once

#include <sqlite3.h>

#include <string>
#include <variant>
#include <vector>

namespace registry {

using Cell = std::variant<std::nullptr_t, long long, double, std::string>;
using Row = std::vector<Cell>;

/// Every mistake throws std::runtime_error with SQLite's own words: a test then fails.
class Sql {
 public:
  Sql();
  Sql(const Sql&) = delete;
  Sql& operator=(const Sql&) = delete;
  ~Sql();

  /// Runs statements that answer nothing.
  void run(const std::string& statements);
  /// Runs the statements of a file below tests/registry.
  void run_file(const std::string& name);
  /// Puts rows into a table, all in one transaction.
  void fill(const std::string& table, const std::vector<Row>& rows);
  /// The rows that a query answers; numbers stay numbers.
  std::vector<Row> rows(const std::string& query);
  /// The one whole number that a query answers.
  long count(const std::string& query);
  /// The first rows that a query answers, one a line, to be read by a person.
  std::string text(const std::string& query);

 private:
  sqlite3* database_ = nullptr;
};

}  // namespace registry
