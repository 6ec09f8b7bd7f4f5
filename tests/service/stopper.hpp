// Makes a store refuse what it is given, table by table.
#pragma once

#include <sqlite3.h>

#include <string>
#include <vector>

#include "ground.hpp"
#include "support/catch.hpp"

namespace ground {

/// Makes changes of the store fail from outside, by triggers that a second connection puts in.
class Stopper {
 public:
  explicit Stopper(const Folder& folder) {
    REQUIRE(sqlite3_open((folder / "store/antherd.db").c_str(), &database_) == SQLITE_OK);
    sqlite3_busy_timeout(database_, 2000);
  }
  ~Stopper() { sqlite3_close(database_); }
  Stopper(const Stopper&) = delete;
  Stopper& operator=(const Stopper&) = delete;

  void stop(const std::string& table) { each("CREATE TRIGGER ", table, true); }
  void release(const std::string& table) { each("DROP TRIGGER ", table, false); }
  void stop_all() {
    for (const auto& table : tables()) stop(table);
  }
  void release_all() {
    for (const auto& table : tables()) release(table);
  }

 private:
  std::vector<std::string> tables() {
    std::vector<std::string> names;
    const auto add = [](void* list, int, char** cells, char**) {
      static_cast<std::vector<std::string>*>(list)->push_back(cells[0]);
      return 0;
    };
    REQUIRE(sqlite3_exec(database_,
                         "SELECT name FROM sqlite_schema WHERE type = 'table' AND name NOT LIKE "
                         "'sqlite%'",
                         add, &names, nullptr) == SQLITE_OK);
    return names;
  }
  void each(const std::string& act, const std::string& table, bool body) {
    for (const char* verb : {"INSERT", "UPDATE", "DELETE"}) {
      std::string script = act + "stop_" + table + "_" + verb;
      if (body) {
        script += std::string(" BEFORE ") + verb + " ON \"" + table +
                  "\" BEGIN SELECT RAISE(ABORT, 'the disk is full'); END";
      }
      INFO(script);
      REQUIRE(sqlite3_exec(database_, script.c_str(), nullptr, nullptr, nullptr) == SQLITE_OK);
    }
  }
  sqlite3* database_ = nullptr;
};

}  // namespace ground
