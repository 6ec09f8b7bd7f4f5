// Letters that somebody else touches while the service carries them: a person's command beside it,
// a fetcher of the folder's files.
#include <sqlite3.h>

#include "ground.hpp"
#include "some_letter.hpp"
#include "support/catch.hpp"

using namespace ground;

namespace {

const Instant noon = farm_time("2026-07-14 12:05");

store::Decision decided() {
  store::Decision decision;
  decision.letters = {some_letter("one", noon)};
  return decision;
}

void change(const Folder& folder, const char* script) {
  sqlite3* database = nullptr;
  REQUIRE(sqlite3_open((folder / "store/antherd.db").c_str(), &database) == SQLITE_OK);
  REQUIRE(sqlite3_exec(database, script, nullptr, nullptr, nullptr) == SQLITE_OK);
  sqlite3_close(database);
}

}  // namespace

TEST_CASE("a person's retry does not undo the mark before the last dot") {
  Farm farm;
  farm.mail = "server = \"smtp://localhost:2525\"\nplain = true\n";
  Bench bench(farm);
  bench.open(noon);
  bench.turn(noon);
  std::int64_t carried = 0;
  bench.desk->on_send([&](mail::Server, std::int64_t id, letters::Letter) { carried = id; });
  REQUIRE(bench.desk->store().save(decided()));
  bench.turn(noon + minutes{1});
  REQUIRE(carried != 0);
  store::Store::Options options;
  options.folder = bench.folder / "store";
  auto beside = store::Store::open(options);
  REQUIRE(beside);
  const auto read = beside->letter(carried);  // "sending"
  REQUIRE((read && *read));
  const auto line = beside->line();
  REQUIRE(line);
  REQUIRE(bench.desk->before_dot(carried, noon + minutes{1}));
  const auto kept = beside->update_if(**read, outbox::retry(**read, noon), outbox::reopen(*line));
  REQUIRE(kept);
  CHECK(!*kept);
  CHECK(bench.letters().back().state == outbox::State::in_doubt);
  // What nobody touched meanwhile is kept.
  const auto now = beside->letter(carried);
  const auto again = beside->update_if(**now, outbox::retry(**now, noon), outbox::reopen(*line));
  REQUIRE(again);
  CHECK(*again);
  CHECK(bench.letters().back().state == outbox::State::waiting);
}

TEST_CASE("a file that may have been fetched before the end says so when it is written again") {
  Bench bench;
  bench.open(noon);
  bench.turn(noon);
  REQUIRE(bench.desk->store().save(decided()));
  change(bench.folder,
         "CREATE TRIGGER ends BEFORE UPDATE ON letter WHEN NEW.state = 'sent' "
         "BEGIN SELECT RAISE(ABORT, 'the power fails now'); END");
  bench.turn(noon + minutes{1});
  const std::string first = bench.folder.read("outgoing/one.eml");
  REQUIRE(first.find("A body.") != std::string::npos);
  CHECK(first.find("may already have") == std::string::npos);
  bench.desk.reset();  // killed: nothing more is written down
  change(bench.folder, "DROP TRIGGER ends");
  std::filesystem::remove(bench.folder / "outgoing/one.eml");  // fetched
  bench.open(noon + minutes{2});
  bench.turn(noon + minutes{2});
  bench.turn(noon + minutes{14});
  CHECK(bench.folder.read("outgoing/one.eml").find("may already have") != std::string::npos);
  CHECK(bench.letters().back().state == outbox::State::sent);
}
