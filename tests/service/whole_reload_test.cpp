// New settings are taken up as a whole or not at all, also where it is the store that fails; and
// what stands in memory alone is kept first.
#include <sqlite3.h>

#include <algorithm>

#include "ground.hpp"
#include "some_letter.hpp"
#include "stopper.hpp"
#include "support/catch.hpp"

using namespace ground;

namespace {

const Instant sown = farm_time("2026-06-25 00:00");
const Instant noon = farm_time("2026-07-12 12:05");
const mail::Spoken accepted{mail::How::accepted, mail::About::server, 250, "ok", ""};

void rename_farm(const Bench& bench) {
  std::string text = bench.folder.read("antherd.toml");
  const std::string old = "Larkspur Bench";
  text.replace(text.find(old), old.size(), "Larkspur Hill");
  bench.folder.write("antherd.toml", text);
}

std::string name_in_force(const Bench& bench) {
  return bench.desk->keeper().lookout().settings().farm;
}

bool log_has(const Bench& bench, const std::string& words) {
  return bench.folder.read("antherd.log").find(words) != std::string::npos;
}

/// A desk whose mail server takes what the test says.
struct AtServer {
  Bench bench;
  std::vector<std::int64_t> handed;

  AtServer() : bench(farm()) {
    bench.open(noon);
    bench.desk->on_send(
        [this](mail::Server, std::int64_t item, letters::Letter) { handed.push_back(item); });
    store::Decision decision;
    decision.letters = {some_letter("one", noon)};
    REQUIRE(bench.desk->store().save(decision));
    bench.turn(noon);
    REQUIRE(handed.size() == 1);
    REQUIRE(bench.desk->before_dot(handed[0], noon));
  }
  static Farm farm() {
    Farm farm;
    farm.mail = "server = \"smtp://localhost:2525\"\nplain = true\n";
    return farm;
  }
  outbox::State state() const {
    const auto item = bench.desk->store().letter(handed[0]);
    REQUIRE(item);
    REQUIRE(*item);
    return (*item)->state;
  }
};

}  // namespace

TEST_CASE("settings that the store does not take leave every station asked") {
  Farm farm;
  farm.more = river;
  Bench bench(farm);
  bench.open(noon);
  std::vector<station::PollMemory> asked;
  bench.desk->on_poll([&](const std::string&, const station::HttpForm&,
                          const station::PollMemory& memory) { asked.push_back(memory); });
  store::Decision decision;
  decision.letters = {some_letter("later", noon + minutes{50})};
  REQUIRE(bench.desk->store().save(decision));
  bench.turn(noon);
  REQUIRE(asked.size() == 1);

  Stopper stopper(bench.folder);
  stopper.stop("line");  // the outbox cannot be taken over, by the new settings nor by the old
  rename_farm(bench);
  bench.desk->reload(noon + minutes{1});
  CHECK(name_in_force(bench) == "Larkspur Bench");
  CHECK(log_has(bench, "the old settings stay in force"));
  stopper.release("line");
  station::Answer answer;
  answer.memory = asked[0];
  answer.readings.samples = {reading_at(Weather{}, noon)};
  bench.desk->poll_answered("river", answer, noon + minutes{1});
  bench.turn(noon + minutes{2});
  bench.turn(noon + minutes{7});
  CHECK(asked.size() == 2);
  bench.turn(noon + minutes{8});
  CHECK(bench.desk->store().samples("river", noon, noon + minutes{1})->size() == 1);

  bench.desk->reload(noon + minutes{9});
  CHECK(name_in_force(bench) == "Larkspur Hill");
  bench.turn(noon + minutes{9});
  REQUIRE(asked.size() == 3);
  bench.desk->poll_answered("river", answer, noon + minutes{9});  // of the old settings: not read
  answer.memory = asked[2];
  bench.desk->poll_answered("river", answer, noon + minutes{10});
  bench.turn(noon + minutes{17});
  CHECK(asked.size() == 4);
}

TEST_CASE("settings under which the store cannot be read leave the watch as it was") {
  Bench bench;
  bench.open(sown);
  bench.live(Weather{}, sown, farm_time("2026-07-11 12:00"), minutes{30});
  const auto hours_known = bench.desk->keeper().lookout().station_hours("bench").size();
  const std::string table = GENERATE("said", "hour", "letter");
  CAPTURE(table);
  rename_farm(bench);
  {
    sqlite3* other = nullptr;
    REQUIRE(sqlite3_open((bench.folder / "store/antherd.db").c_str(), &other) == SQLITE_OK);
    const auto rename = [&](const std::string& from, const std::string& to) {
      const std::string sql = "ALTER TABLE " + from + " RENAME TO " + to;
      REQUIRE(sqlite3_exec(other, sql.c_str(), nullptr, nullptr, nullptr) == SQLITE_OK);
    };
    rename(table, "elsewhere");
    bench.desk->reload(farm_time("2026-07-11 12:01"));
    rename("elsewhere", table);
    sqlite3_close(other);
  }
  CHECK(name_in_force(bench) == "Larkspur Bench");
  CHECK(log_has(bench, "the old settings stay in force"));
  CHECK(bench.desk->keeper().lookout().station_hours("bench").size() == hours_known);
  bench.live(Weather{}, farm_time("2026-07-11 12:30"), farm_time("2026-07-12 20:00"), minutes{30});
  CHECK(!bench.letters_of("daily").empty());
  CHECK(!bench.letters_of("heat").empty());
}

TEST_CASE("new settings wait until it is kept that a letter was accepted") {
  AtServer at;
  {
    Stopper stopper(at.bench.folder);
    stopper.stop("letter");
    at.bench.desk->mail_spoken(at.handed[0], accepted, noon);
    rename_farm(at.bench);
    at.bench.desk->reload(noon + minutes{1});
    CHECK(name_in_force(at.bench) == "Larkspur Bench");
    CHECK(log_has(at.bench, "could not keep what became of a letter"));
    CHECK(log_has(at.bench, "the old settings stay in force"));
    stopper.release("letter");
  }
  SECTION("the watch goes on") { at.bench.turn(noon + minutes{2}); }
  SECTION("the settings are read once more") {
    at.bench.desk->reload(noon + minutes{2});
    CHECK(name_in_force(at.bench) == "Larkspur Hill");
  }
  at.bench.turn(noon + minutes{15});
  CHECK(at.state() == outbox::State::sent);
  CHECK(std::count(at.handed.begin(), at.handed.end(), at.handed[0]) == 1);
}

TEST_CASE("that a letter was accepted is kept when the service stops") {
  AtServer at;
  Stopper stopper(at.bench.folder);
  stopper.stop("letter");
  at.bench.desk->mail_spoken(at.handed[0], accepted, noon);
  CHECK(at.state() == outbox::State::in_doubt);
  stopper.release("letter");
  at.bench.desk->finish(noon + minutes{1});
  CHECK(at.state() == outbox::State::sent);
}
