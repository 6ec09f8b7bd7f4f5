// A store whose file is damaged while the service runs: the desk ends, so that a start sets it
// aside; and a false alarm does not.
#include <sqlite3.h>

#include <fstream>

#include "ground.hpp"
#include "support/catch.hpp"

using namespace ground;

namespace {

const Instant sown = farm_time("2026-06-25 00:00");
const Instant noon = farm_time("2026-07-11 12:00");

/// SQLite itself beside the desk. @return the first column of the first row
std::string raw(const Bench& bench, const std::string& sql) {
  sqlite3* other = nullptr;
  REQUIRE(sqlite3_open((bench.folder / "store/antherd.db").c_str(), &other) == SQLITE_OK);
  sqlite3_busy_timeout(other, 2000);
  std::string first;
  const auto take = [](void* into, int, char** cells, char**) {
    auto& text = *static_cast<std::string*>(into);
    if (text.empty() && cells[0] != nullptr) text = cells[0];
    return 0;
  };
  INFO(sql);
  CHECK(sqlite3_exec(other, sql.c_str(), take, &first, nullptr) == SQLITE_OK);
  sqlite3_close(other);
  return first;
}

/// Writes over the first page of a table, past the open connection.
void damage(const Bench& bench, const std::string& table) {
  const auto page =
      std::stoll(raw(bench, "SELECT rootpage FROM sqlite_schema WHERE name = '" + table + "'"));
  raw(bench, "PRAGMA wal_checkpoint(TRUNCATE)");
  {
    std::fstream file(bench.folder / "store/antherd.db",
                      std::ios::in | std::ios::out | std::ios::binary);
    file.seekp((page - 1) * 4096);
    file << std::string(4096, 'Z');
  }
  // Another's change makes the desk's connection read anew what it had in memory.
  raw(bench, "INSERT INTO note VALUES('aside', '1')");
}

std::ptrdiff_t times_in_log(const Bench& bench, const std::string& words) {
  const std::string log = bench.folder.read("antherd.log");
  std::ptrdiff_t times = 0;
  for (auto at = log.find(words); at != std::string::npos; at = log.find(words, at + 1)) ++times;
  return times;
}

}  // namespace

TEST_CASE("a store that is damaged while the service runs ends it, and a start begins anew") {
  Bench bench;
  bench.open(sown);
  bench.live(Weather{}, sown, noon, minutes{30});
  REQUIRE(bench.stored_hours().size() > 300);
  CHECK(!bench.desk->broken());
  damage(bench, GENERATE("letter", "sample"));
  Instant now = noon;
  for (int i = 0; i < 30 && !bench.desk->broken(); ++i) {
    now += minutes{1};
    bench.folder.append("drop/bench.csv", row_of(reading_at(Weather{}, now)));
    bench.turn(now);
  }
  REQUIRE(bench.desk->broken());
  const std::string sentence = bench.desk->broken()->sentence();
  CHECK(sentence.find("it is damaged: ") != std::string::npos);
  CHECK(sentence.find("sets the damaged file aside") != std::string::npos);

  bench.close(now);
  bench.open(now + minutes{1});
  CHECK(bench.desk->store().set_aside());
  bench.turn(now + minutes{1});
  bench.turn(now + minutes{7});
  CHECK(!bench.desk->broken());
  CHECK(bench.stored_hours().size() > 300);  // read again from the drop folder
  CHECK(!bench.letters_of("anew").empty());
}

TEST_CASE("a letter at the line is waited for before a damaged store ends the service") {
  Farm farm;
  farm.mail = "server = \"smtp://localhost:2525\"\nplain = true\n";
  Bench bench(farm);
  bench.open(sown);
  std::vector<std::int64_t> handed;
  bench.desk->on_send(
      [&](mail::Server, std::int64_t item, letters::Letter) { handed.push_back(item); });
  const Instant monday = farm_time("2026-06-29 06:00");  // the review
  bench.drop("bench.csv", readings(Weather{}, sown, monday));
  bench.turn(monday);
  REQUIRE(handed.size() == 1);
  damage(bench, "letter");
  for (int i = 1; i < 10; ++i) bench.turn(monday + minutes{i});
  CHECK(!bench.desk->broken());
  bench.desk->mail_spoken(handed[0], {mail::How::accepted, mail::About::server, 250, "ok", ""},
                          monday + minutes{10});
  bench.turn(monday + minutes{11});
  CHECK(bench.desk->broken());
}

TEST_CASE("where the whole file is sound the service goes on, and reads it once an hour at most") {
  Bench bench;
  bench.open(sown);
  bench.live(Weather{}, sown, noon, minutes{30});
  const auto letters = bench.letters().size();
  REQUIRE(letters > 0);
  // A number that cannot be meant: the call that meets it says "damaged".
  raw(bench,
      "INSERT INTO letter(identity, recipient, subject, body, kind, severity, decided, still, "
      "rise, "
      "state, attempts, doubts, next_try, answer) SELECT 'odd', recipient, subject, body, kind, "
      "severity, decided, still, rise, 'waiting', 99999999999, doubts, next_try, answer "
      "FROM letter LIMIT 1");
  const std::string sound = "the whole file was read and is sound";
  for (int i = 0; i < 55; ++i) bench.turn(noon + minutes{i});
  CHECK(!bench.desk->broken());
  CHECK(times_in_log(bench, sound) == 1);
  for (int i = 55; i < 130; ++i) bench.turn(noon + minutes{i});
  CHECK(!bench.desk->broken());
  CHECK(times_in_log(bench, sound) == 3);
  raw(bench, "DELETE FROM letter WHERE identity = 'odd'");
  for (int i = 130; i < 280; ++i) bench.turn(noon + minutes{i});
  CHECK(times_in_log(bench, sound) <= 4);
}
