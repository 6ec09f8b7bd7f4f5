// Reads a table of expected numbers from tests/tables and checks one formula against it. Every row
// brings a wrong answer that its tolerance must reject.
#pragma once

#include <cmath>
#include <fstream>
#include <map>
#include <optional>
#include <sstream>
#include <string>
#include <vector>

#include "support/catch.hpp"

namespace tables {

/// One row, by column name; cells hold no commas.
class Row {
 public:
  explicit Row(std::map<std::string, std::string> cells) : cells_(std::move(cells)) {}

  const std::string& text(const std::string& column) const { return cells_.at(column); }
  bool has(const std::string& column) const { return !text(column).empty(); }
  double number(const std::string& column) const {
    INFO(text("name") << ": " << column);
    REQUIRE(has(column));
    return std::stod(text(column));
  }

 private:
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

inline std::vector<Row> read(const std::string& file) {
  std::ifstream in(std::string(ANTHERD_SOURCE) + "/tests/tables/" + file);
  std::string line;
  REQUIRE(std::getline(in, line));
  const auto header = cells_of(line);
  std::vector<Row> rows;
  while (std::getline(in, line)) {
    const auto cells = cells_of(line);
    INFO(file << ": " << line);
    REQUIRE(cells.size() == header.size());
    std::map<std::string, std::string> by_name;
    for (std::size_t i = 0; i < cells.size(); ++i) by_name[header[i]] = cells[i];
    rows.emplace_back(by_name);
  }
  REQUIRE(!rows.empty());
  return rows;
}

/// Holds what the program says against the row, and the row's wrong answer against its tolerance.
inline void check(const Row& row, double got) {
  const double expected = row.number("expected");
  const double tolerance = row.number("tolerance");
  INFO(row.text("name") << ": expected " << expected << " " << row.text("unit") << ", got " << got);
  CHECK(std::abs(got - expected) <= tolerance);
  CHECK(std::abs(row.number("rejects") - expected) > tolerance);
  CHECK(row.has("origin"));
  CHECK(row.has("tolerance_reason"));
}

}  // namespace tables
