// A store that takes nothing more: the service stays up and says so, and what was decided goes out,
// once, when it works again.
#include <algorithm>

#include "ground.hpp"
#include "some_letter.hpp"
#include "stopper.hpp"
#include "support/catch.hpp"

using namespace ground;

namespace {

const Instant sown = farm_time("2026-06-25 00:00");

const Instant hot_morning = farm_time("2026-07-12 10:00");
const Instant hot_evening = farm_time("2026-07-12 18:00");

}  // namespace

TEST_CASE("what was decided while the store failed goes out once when it works again") {
  Bench bench, steady;
  for (Bench* each : {&bench, &steady}) {
    each->open(sown);
    each->live(Weather{}, sown, hot_morning, minutes{15});
  }
  const auto before = bench.letters().size();
  steady.live(Weather{}, hot_morning, hot_evening, minutes{15});

  Stopper stopper(bench.folder);
  stopper.stop_all();
  bench.live(Weather{}, hot_morning, hot_evening, minutes{15});
  CHECK(bench.letters().size() == before);
  const auto kept = bench.desk->keeper().step(hot_evening, true);
  CHECK(!kept.troubles.empty());  // it is said, not swallowed
  stopper.release_all();

  bench.turn(hot_evening + minutes{6});
  bench.turn(hot_evening + minutes{12});
  steady.turn(hot_evening + minutes{6});
  steady.turn(hot_evening + minutes{12});
  // What was decided in time goes out as it was decided, and nothing else: the station was heard.
  const auto heat_ids = [](const Bench& of) {
    std::vector<std::string> ids;
    for (const auto& item : of.letters_of("heat")) ids.push_back(item.letter.id);
    std::sort(ids.begin(), ids.end());
    return ids;
  };
  CHECK(heat_ids(bench).size() >= 1);
  CHECK(heat_ids(bench) == heat_ids(steady));
  CHECK(bench.letters_of("no_data").empty());
  CHECK(bench.said_of(alerts::Kind::no_data) == 0);
  CHECK(bench.fingerprint() == steady.fingerprint());
  const auto count = bench.letters().size();
  bench.turn(hot_evening + minutes{20});
  CHECK(bench.letters().size() == count);
}

TEST_CASE("only the outbox fails: the letter is not lost, nor decided a second time") {
  Bench bench;
  bench.open(sown);
  bench.live(Weather{}, sown, hot_morning, minutes{15});
  Stopper stopper(bench.folder);
  stopper.stop("letter");
  bench.live(Weather{}, hot_morning, hot_evening, minutes{15});
  CHECK(bench.letters_of("heat").empty());
  CHECK(bench.said_of(alerts::Kind::heat) == 0);  // both or none
  stopper.release("letter");
  bench.turn(hot_evening + minutes{1});
  const auto heat = bench.letters_of("heat");
  REQUIRE(!heat.empty());
  for (const auto& item : heat) CHECK(item.state == outbox::State::sent);
  auto files = bench.folder.names("outgoing");
  std::erase_if(files, [](const auto& name) { return name.starts_with("store-trouble-"); });
  CHECK(files.size() == bench.letters().size());
}

TEST_CASE("a restart while the store fails decides it again") {
  Bench bench;
  bench.open(sown);
  bench.live(Weather{}, sown, hot_morning, minutes{15});
  {
    Stopper stopper(bench.folder);
    stopper.stop("letter");
    bench.live(Weather{}, hot_morning, hot_evening, minutes{15});
    bench.desk.reset();
    stopper.release("letter");
  }
  bench.open(hot_evening + minutes{5});
  bench.turn(hot_evening + minutes{5});
  CHECK(!bench.letters_of("heat").empty());
}

TEST_CASE("a store that cannot note how a letter ended does not stop the mail") {
  Farm farm;
  farm.mail = "server = \"smtp://localhost:2525\"\nplain = true\n";
  Bench bench(farm);
  bench.open(sown);
  store::Decision decision;
  for (const char* id : {"one", "two"}) {
    decision.letters.push_back(some_letter(id, hot_morning));
  }
  REQUIRE(bench.desk->store().save(decision));
  std::vector<std::int64_t> handed;
  service::Carrier carrier(
      bench.settings, bench.desk->store(),
      [&](mail::Server, std::int64_t item, letters::Letter) { handed.push_back(item); });
  REQUIRE(carrier.load(hot_morning));
  carrier.carry(hot_morning);
  REQUIRE(handed.size() == 1);
  Stopper stopper(bench.folder);
  const bool dot = GENERATE(true, false);
  if (dot) {
    REQUIRE(carrier.before_dot(handed[0], hot_morning));
    stopper.stop_all();
    carrier.received(handed[0], {mail::How::accepted, mail::About::server, 250, "taken", ""},
                     hot_morning);
  } else {
    stopper.stop_all();
    CHECK(!carrier.before_dot(handed[0], hot_morning));  // no mark, no dot
    carrier.received(handed[0], {mail::How::wait, mail::About::server, 0, "broken off", ""},
                     hot_morning);
  }
  CHECK(!carrier.busy());
  carrier.carry(hot_morning + minutes{2});
  CHECK(handed.size() == 1);  // nothing goes that could not be noted
  const auto again = carrier.look_again(hot_morning + minutes{2});
  REQUIRE(again);
  CHECK(*again >= hot_morning + minutes{3});  // and the store is not asked without a pause
  stopper.release_all();

  carrier.carry(hot_morning + minutes{4});
  REQUIRE(handed.size() == 2);
  CHECK((handed[1] == handed[0]) == !dot);
  if (dot) {
    const auto first = bench.desk->store().letter(handed[0]);
    REQUIRE(first);
    CHECK((*first)->state == outbox::State::sent);
  }
}

TEST_CASE("a store that takes no mark is not asked for it without a pause") {
  Farm farm;
  farm.mail = "server = \"smtp://localhost:2525\"\nplain = true\n";
  Bench bench(farm);
  bench.open(sown);
  store::Decision decision;
  outbox::Item item;
  item.letter.id = "one";
  item.letter.recipient = "owner@larkspur.example";
  item.letter.kind = "heat";
  item.letter.decided = item.next_try = hot_morning;
  decision.letters.push_back(item);
  REQUIRE(bench.desk->store().save(decision));
  int handed = 0;
  service::Carrier carrier(bench.settings, bench.desk->store(),
                           [&](mail::Server, std::int64_t, letters::Letter) { ++handed; });
  REQUIRE(carrier.load(hot_morning));
  CHECK(carrier.look_again(hot_morning) == hot_morning);
  Stopper stopper(bench.folder);
  stopper.stop("line");
  CHECK(!carrier.carry(hot_morning).empty());
  CHECK(carrier.look_again(hot_morning) == hot_morning + minutes{1});
  stopper.release("line");
  carrier.carry(hot_morning + minutes{1});
  CHECK(handed == 1);
}

TEST_CASE("samples that find no room do not keep the heat letter back") {
  Bench bench;
  bench.open(sown);
  bench.live(Weather{}, sown, hot_morning, minutes{15});
  Stopper stopper(bench.folder);
  stopper.stop("sample");
  bench.live(Weather{}, hot_morning, hot_evening, minutes{15});
  CHECK(!bench.letters_of("heat").empty());
  for (const auto& item : bench.letters_of("heat")) CHECK(item.state == outbox::State::sent);
  CHECK(bench.letters_of("no_data").empty());
  stopper.release("sample");
}

TEST_CASE("no row of a file is lost while the store fails and memory is full") {
  Bench steady, bench;  // the log is that of the last
  const Instant later = hot_morning + days{4};
  for (Bench* each : {&bench, &steady}) {
    each->open(sown);
    each->drop("bench.csv", readings(Weather{}, sown, hot_morning));
    each->turn(hot_morning);
  }
  const auto before = bench.stored_hours().size();
  bench.desk->keeper().keep_in_memory_at_most(100);
  Stopper stopper(bench.folder);
  stopper.stop_all();
  // Half a day a piece: the third look finds memory full.
  Instant written = hot_morning;
  for (Instant now = hot_morning + hours{12}; now <= later; now += hours{12}) {
    const std::string rows = rows_of(readings(Weather{}, written, now));
    written = now;
    for (Bench* each : {&bench, &steady}) {
      each->folder.append("drop/bench.csv", rows);
      each->turn(now);
    }
  }
  CHECK(bench.stored_hours().size() == before);
  const std::string log = bench.folder.read("antherd.log");
  CHECK(log.find("memory is full") != std::string::npos);
  CHECK(log.find("memory is full") == log.rfind("memory is full"));  // once
  SECTION("the store works again") { stopper.release_all(); }
  SECTION("the service is started again") {
    bench.desk.reset();
    stopper.release_all();
    bench.open(later + minutes{5});
  }
  for (Bench* each : {&bench, &steady}) {
    each->turn(later + minutes{6});
    each->turn(later + minutes{12});
  }
  CHECK(bench.fingerprint() == steady.fingerprint());
}

TEST_CASE("of a polled station the oldest readings are given up, and that is said once") {
  Farm farm;
  farm.more = river;
  Bench bench(farm);
  bench.open(hot_morning);
  bench.desk->keeper().keep_in_memory_at_most(10);
  Stopper stopper(bench.folder);
  stopper.stop_all();
  Instant now = hot_morning;
  for (int i = 0; i < 24; ++i, now += minutes{5}) {
    station::Answer answer;
    answer.readings.samples = {reading_at(Weather{}, now)};
    bench.desk->poll_answered("river", answer, now);
    bench.turn(now);
  }
  stopper.release_all();
  bench.turn(now + minutes{6});
  const auto kept = bench.desk->store().samples("river", Instant{}, Instant::max());
  REQUIRE(kept);
  CHECK(kept->size() >= 5);
  CHECK(kept->size() <= 10);
  CHECK(kept->back().time == now - minutes{5});
  const std::string log = bench.folder.read("antherd.log");
  const auto said = log.find("all readings of river");
  CHECK(said != std::string::npos);
  CHECK(said == log.rfind("all readings of river"));
}
