// See sql.hpp.
#include "registry/sql.hpp"

#include <fstream>
#include <memory>
#include <sstream>
#include <stdexcept>

#include "support/paths.hpp"

namespace registry {
namespace {

using Statement = std::unique_ptr<sqlite3_stmt, int (*)(sqlite3_stmt*)>;

[[noreturn]] void fail(sqlite3* database, const std::string& about) {
  throw std::runtime_error(std::string(sqlite3_errmsg(database)) + " in: " + about.substr(0, 200));
}

Statement prepare(sqlite3* database, const std::string& text) {
  sqlite3_stmt* raw = nullptr;
  if (sqlite3_prepare_v2(database, text.c_str(), -1, &raw, nullptr) != SQLITE_OK) {
    fail(database, text);
  }
  return Statement(raw, sqlite3_finalize);
}

void bind(sqlite3_stmt* statement, int place, const Cell& cell) {
  if (const auto* whole = std::get_if<long long>(&cell)) {
    sqlite3_bind_int64(statement, place, *whole);
  } else if (const auto* number = std::get_if<double>(&cell)) {
    sqlite3_bind_double(statement, place, *number);
  } else if (const auto* text = std::get_if<std::string>(&cell)) {
    const int size = static_cast<int>(text->size());
    sqlite3_bind_text(statement, place, text->data(), size, SQLITE_TRANSIENT);
  } else {
    sqlite3_bind_null(statement, place);
  }
}

Cell cell_of(sqlite3_stmt* statement, int column) {
  switch (sqlite3_column_type(statement, column)) {
    case SQLITE_INTEGER:
      return static_cast<long long>(sqlite3_column_int64(statement, column));
    case SQLITE_FLOAT:
      return sqlite3_column_double(statement, column);
    case SQLITE_NULL:
      return nullptr;
    default:
      return std::string(reinterpret_cast<const char*>(sqlite3_column_text(statement, column)));
  }
}

std::string word(const Cell& cell) {
  std::ostringstream text;
  if (const auto* whole = std::get_if<long long>(&cell)) text << *whole;
  if (const auto* number = std::get_if<double>(&cell)) text << *number;
  if (const auto* words = std::get_if<std::string>(&cell)) text << *words;
  if (std::holds_alternative<std::nullptr_t>(cell)) text << "-";
  return text.str();
}

}  // namespace

Sql::Sql() {
  if (sqlite3_open(":memory:", &database_) != SQLITE_OK) fail(database_, "open");
}

Sql::~Sql() { sqlite3_close(database_); }

void Sql::run(const std::string& statements) {
  if (sqlite3_exec(database_, statements.c_str(), nullptr, nullptr, nullptr) != SQLITE_OK) {
    fail(database_, statements);
  }
}

void Sql::run_file(const std::string& name) {
  std::ifstream file(paths::source() + "/tests/registry/" + name);
  if (!file) throw std::runtime_error("no file " + name);
  std::ostringstream text;
  text << file.rdbuf();
  run(text.str());
}

void Sql::fill(const std::string& table, const std::vector<Row>& rows) {
  if (rows.empty()) return;
  std::string marks = "?";
  for (std::size_t i = 1; i < rows.front().size(); ++i) marks += ", ?";
  run("begin");
  const Statement insert = prepare(database_, "insert into " + table + " values (" + marks + ")");
  for (const Row& row : rows) {
    for (std::size_t i = 0; i < row.size(); ++i) {
      bind(insert.get(), static_cast<int>(i) + 1, row[i]);
    }
    if (sqlite3_step(insert.get()) != SQLITE_DONE) fail(database_, table);
    sqlite3_reset(insert.get());
  }
  run("commit");
}

std::vector<Row> Sql::rows(const std::string& query) {
  const Statement statement = prepare(database_, query);
  std::vector<Row> rows;
  int status = SQLITE_ROW;
  while ((status = sqlite3_step(statement.get())) == SQLITE_ROW) {
    Row& row = rows.emplace_back();
    for (int i = 0; i < sqlite3_column_count(statement.get()); ++i) {
      row.push_back(cell_of(statement.get(), i));
    }
  }
  if (status != SQLITE_DONE) fail(database_, query);
  return rows;
}

long Sql::count(const std::string& query) {
  const std::vector<Row> answer = rows(query);
  if (answer.size() != 1 || !std::holds_alternative<long long>(answer.front().front())) {
    throw std::runtime_error("not one whole number: " + query);
  }
  return static_cast<long>(std::get<long long>(answer.front().front()));
}

std::string Sql::text(const std::string& query) {
  std::string text;
  for (const Row& row : rows(query + " limit 20")) {
    for (const Cell& cell : row) text += word(cell) + " | ";
    text += "\n";
  }
  return text;
}

}  // namespace registry
