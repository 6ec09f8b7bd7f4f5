// Reads a table of expected numbers from tests/tables and checks formulas against it. Every row
// brings a wrong answer that its tolerance must reject. What the rows of a formula came to goes to
// the outside checks that tests/run prints.
#pragma once

#include <algorithm>
#include <cmath>
#include <fstream>
#include <map>
#include <optional>
#include <sstream>
#include <string>
#include <utility>
#include <vector>

#include "support/catch.hpp"
#include "support/outside.hpp"
#include "support/paths.hpp"

namespace tables {

/// One row, by column name; cells hold no commas.
class Row {
 public:
  Row(std::string table, std::map<std::string, std::string> cells)
      : table_(std::move(table)), cells_(std::move(cells)) {}

  const std::string& table() const { return table_; }
  const std::string& text(const std::string& column) const { return cells_.at(column); }
  bool has(const std::string& column) const { return !text(column).empty(); }
  double number(const std::string& column) const {
    if (!has(column)) FAIL(table_ << ": no " << column << " in " << line());
    return std::stod(text(column));
  }

 private:
  std::string line() const {
    std::string all;
    for (const auto& [column, cell] : cells_) all += column + " " + cell + "; ";
    return all;
  }

  std::string table_;
  std::map<std::string, std::string> cells_;
};

inline std::vector<std::string> cells_of(const std::string& line) {
  std::vector<std::string> cells(1);
  for (const char letter : line) {
    if (letter == ',') {
      cells.emplace_back();
    } else {
      cells.back() += letter;
    }
  }
  return cells;
}

/// The rows of a file anywhere; the part after its last "/" names the table.
inline std::vector<Row> read_file(const std::string& path) {
  std::ifstream in(path);
  const std::string file = path.substr(path.rfind('/') + 1);
  std::string line;
  INFO(path);
  REQUIRE(std::getline(in, line));
  const auto header = cells_of(line);
  std::vector<Row> rows;
  while (std::getline(in, line)) {
    const auto cells = cells_of(line);
    if (cells.size() != header.size()) FAIL(file << ": not a cell a column: " << line);
    std::map<std::string, std::string> by_name;
    for (std::size_t i = 0; i < cells.size(); ++i) by_name[header[i]] = cells[i];
    rows.emplace_back(file, by_name);
  }
  REQUIRE(!rows.empty());
  return rows;
}

/// The rows of a table of tests/tables.
inline std::vector<Row> read(const std::string& file) {
  return read_file(paths::source() + "/tests/tables/" + file);
}

/// What the rows of one formula of one table came to; told when the test program ends.
class Outcomes {
 public:
  static Outcomes& all() {
    static Outcomes outcomes;
    return outcomes;
  }
  void see(const Row& row, double got) {
    Outcome& outcome = by_formula_[{row.table(), row.text("formula")}];
    outcome.largest.see(got, row.number("expected"));
    outcome.bound = std::max(outcome.bound, row.number("tolerance"));
    outcome.unit = row.text("unit");
  }
  ~Outcomes() {
    for (const auto& [key, outcome] : by_formula_) {
      outside::report(key.second, "tests/tables/" + key.first, outcome.largest, outcome.bound,
                      outcome.unit);
    }
  }

 private:
  struct Outcome {
    outside::Largest largest;
    double bound = 0;
    std::string unit;
  };
  std::map<std::pair<std::string, std::string>, Outcome> by_formula_;
};

/// Holds what the program says against the row, and the row's wrong answer against its tolerance.
inline void check(const Row& row, double got) {
  const double expected = row.number("expected");
  const double tolerance = row.number("tolerance");
  INFO(row.table() << ": " << row.text("name") << ": expected " << expected << " "
                   << row.text("unit") << ", got " << got);
  CHECK(std::abs(got - expected) <= tolerance);
  CHECK(std::abs(row.number("rejects") - expected) > tolerance);
  CHECK(row.has("origin"));
  CHECK(row.has("tolerance_reason"));
  Outcomes::all().see(row, got);
}

}  // namespace tables
