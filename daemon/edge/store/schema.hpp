// The numbered schema and the steps that lead to it. It must not know where the file lies.
#pragma once

#include <cstdint>
#include <span>

#include "edge/store/database.hpp"

namespace antherd::store {

/// "Anth" in ASCII: tells this program's files from those of others (SQLite's application_id).
constexpr std::int64_t application_id = 0x416e7468;

/// One step of the schema. `sql` sets user_version to `number` as its last statement.
struct Migration {
  int number = 0;
  const char* name = "";
  const char* sql = "";
};

/// All steps, numbered 1, 2, 3 …
std::span<const Migration> migrations();

enum class Standing {
  empty,    // no table yet
  current,  // the newest schema
  older,    // steps are missing
  newer,    // made by a newer antherd
  foreign,  // a file of another program
  damaged,  // the file's own numbers contradict each other
};

/// Where a file stands towards the last of `steps`. Throws Trouble.
Standing standing_of(Database& database, std::span<const Migration> steps);

/// Takes the steps that are missing, each in a transaction of its own. Two processes may try at
/// once. Throws Trouble.
void migrate(Database& database, std::span<const Migration> steps);

}  // namespace antherd::store
