// The service as a process: signals, second instances, strange files in the drop folder.
#include <signal.h>
#include <sqlite3.h>

#include <algorithm>

#include "program.hpp"
#include "service/ground.hpp"
#include "support/catch.hpp"

using namespace ground;
using program::Service;
using std::chrono::seconds;

namespace {

/// Four times what the promise allows, for a machine that is busy with other things.
constexpr std::chrono::milliseconds stop_bound{8000};
/// Below the five seconds for which the store's lock is waited for otherwise.
constexpr std::chrono::milliseconds held_bound{4500};

/// Its log goes to standard error.
Farm talking() {
  Farm farm;
  farm.log = {};
  return farm;
}

bool holds(const std::string& text, const std::string& part) {
  return text.find(part) != std::string::npos;
}

/// Holds the store's lock for writing, as another process would.
class Holder {
 public:
  explicit Holder(const Folder& folder) {
    REQUIRE(sqlite3_open((folder / "store/antherd.db").c_str(), &database_) == SQLITE_OK);
    sqlite3_busy_timeout(database_, 20000);
    REQUIRE(sqlite3_exec(database_, "BEGIN IMMEDIATE", nullptr, nullptr, nullptr) == SQLITE_OK);
  }
  ~Holder() { sqlite3_close(database_); }
  Holder(const Holder&) = delete;
  Holder& operator=(const Holder&) = delete;

 private:
  sqlite3* database_ = nullptr;
};

/// The service's store, as a reading command opens it.
store::Store store_beside(const Folder& folder) {
  store::Store::Options options;
  options.folder = folder / "store";
  options.read_only = true;
  auto store = store::Store::open(options);
  REQUIRE(store);
  return std::move(*store);
}

/// A store that was there before, and a service that is held up while it opens it.
void make_store(const Folder& folder) {
  Service service(folder.path());
  REQUIRE(service.told("READY=1"));
  service.signal(SIGTERM);
  REQUIRE(service.wait(seconds{20}));
}

}  // namespace

TEST_CASE("the service says when it is ready and ends with 0 when it is told to") {
  Folder folder;
  settings_in(folder, talking());
  const int number = GENERATE(SIGTERM, SIGINT);
  Service service(folder.path());
  REQUIRE(service.told("READY=1"));
  service.signal(number);
  const auto ended = service.wait(seconds{20});
  INFO(service.words());
  REQUIRE(ended);
  CHECK(ended->first == 0);
  CHECK(ended->second < stop_bound);
  CHECK(holds(service.words(), "stopping"));
}

TEST_CASE("broken settings at SIGHUP are named and the service goes on") {
  Folder folder;
  settings_in(folder, talking());
  Service service(folder.path());
  REQUIRE(service.told("READY=1"));
  const std::string good = folder.read("antherd.toml");
  folder.write("antherd.toml", "[farm]\nname = 7\nnonsense = true\n");
  service.signal(SIGHUP);
  REQUIRE(service.told("READY=1"));
  INFO(service.words());
  CHECK(holds(service.words(), "antherd.toml:2:"));
  CHECK(holds(service.words(), "antherd.toml:3:"));
  CHECK(service.running());
  folder.write("antherd.toml", good);
  service.signal(SIGHUP);
  CHECK(service.said("in force"));
  service.signal(SIGTERM);
  const auto ended = service.wait(seconds{20});
  REQUIRE(ended);
  CHECK(ended->first == 0);
}

TEST_CASE("a second service on one store is refused by its process, another store is fine") {
  Folder folder, other;
  settings_in(folder, talking());
  settings_in(other, talking());
  Service first(folder.path());
  REQUIRE(first.told("READY=1"));
  const auto second = program::run({"run", "--settings", folder / "antherd.toml"});
  INFO(second.out << second.err);
  CHECK(second.status == 1);
  CHECK(holds(second.err, std::to_string(first.process())));
  CHECK(first.running());
  Service third(other.path());
  CHECK(third.told("READY=1"));
}

TEST_CASE("a paced clock needs a farm that is marked as an exercise") {
  Folder folder;
  settings_in(folder, talking());
  const auto refused = program::run({"run", "--settings", folder / "antherd.toml", "--clock-from",
                                     "2026-07-12 12:00", "--stop-after", "1"});
  CHECK(refused.status == 2);
  CHECK(holds(refused.err, "exercise"));
  Farm farm = talking();
  farm.extra_farm = "exercise = true";
  settings_in(folder, farm);
  const auto wrong = program::run(
      {"run", "--settings", folder / "antherd.toml", "--clock-from", "noon", "--stop-after", "1"});
  CHECK(wrong.status == 2);
  CHECK(holds(wrong.err, "noon"));
  const auto ran = program::run({"run", "--settings", folder / "antherd.toml", "--clock-from",
                                 "2026-07-12 12:00", "--pace", "60", "--stop-after", "1"});
  INFO(ran.err);
  CHECK(ran.status == 0);
}

TEST_CASE("strange files in the drop folder are named and the good one is used") {
  Folder folder;
  Farm farm = talking();
  farm.extra_farm = "exercise = true";
  settings_in(folder, farm);
  const auto samples =
      readings(Weather{}, farm_time("2026-07-12 00:00"), farm_time("2026-07-12 12:00"));
  folder.write("drop/bench-good.csv", header + rows_of(samples));
  folder.write("drop/bench-nul.csv",
               std::string(header) + std::string("2026-07-12 01:00,2\0002,50,0\n", 26));
  folder.write("drop/bench-long.csv",
               header + std::string(10 * 1024 * 1024, '7') + "\n" + row_of(samples.back()));
  std::string wide = "\xFF\xFE";
  for (const char c : header + rows_of(samples)) wide += {c, '\0'};
  folder.write("drop/bench-wide.csv", wide);
  folder.write("drop/bench-empty.csv", "");
  Service service(folder.path(),
                  {"--clock-from", "2026-07-12 12:00", "--pace", "60", "--stop-after", "60"});
  REQUIRE(service.told("READY=1"));
  CHECK(service.told("bench: read "));
  CHECK(service.running());
  service.signal(SIGTERM);
  const auto ended = service.wait(seconds{20});
  REQUIRE(ended);
  CHECK(ended->first == 0);
  const std::string all = service.words() + folder.read("store/refused.csv");
  for (const char* file : {"bench-nul.csv", "bench-long.csv", "bench-wide.csv"}) {
    INFO(file << "\n" << service.words().substr(0, 3000));
    CHECK(holds(all, file));
  }
  CHECK(service.words().size() < 100 * 1024);  // ten megabytes do not reach the log
  const auto stored = store_beside(folder);
  const auto kept = stored.samples("bench", Instant{}, Instant::max());
  REQUIRE(kept);
  CHECK(kept->size() >= samples.size());
}

TEST_CASE("settings that are faulty at the start: 2, each fault named, nothing is made") {
  Folder folder;
  folder.write("antherd.toml", ground::text_of(Farm{}) + "[nonsense]\n");
  const auto ended = program::run({"run", "--settings", folder / "antherd.toml"});
  CHECK(ended.status == 2);
  CHECK(holds(ended.err, "nonsense"));
  CHECK(folder.names("store").empty());
}

TEST_CASE("the review is mailed through a running service, which keeps its store to itself") {
  Folder folder;
  settings_in(folder, talking());
  Service service(folder.path());
  REQUIRE(service.told("READY=1"));
  const auto mailed = program::run({"review", "--mail"}, folder.path());
  INFO(mailed.out << mailed.err);
  CHECK(mailed.status == 0);
  CHECK(holds(mailed.out, "put into the outbox"));
  CHECK(service.running());
  const auto stored = store_beside(folder);
  const auto items = stored.letters_since(Instant{});
  REQUIRE(items);
  // Under the identity of the week's own review that one would never be sent.
  const auto asked = std::count_if(items->begin(), items->end(), [](const auto& item) {
    return item.letter.kind == "weekly" && item.letter.id.starts_with("asked-");
  });
  CHECK(asked == 1);
}

TEST_CASE("signals that come while the store is opened are heeded: reload later, stop at once") {
  Folder folder;
  settings_in(folder, talking());
  make_store(folder);
  auto holder = std::make_unique<Holder>(folder);
  Service service(folder.path());
  REQUIRE(service.said("antherd watches"));
  service.signal(SIGHUP);
  SECTION("it is told to stop") {
    service.signal(SIGTERM);
    const auto ended = service.wait(seconds{20});
    REQUIRE(ended);
    INFO(service.words());
    CHECK(ended->first == 0);
    CHECK(holds(service.words(), "before the watch had begun"));
  }
  SECTION("it comes up") {
    holder.reset();
    REQUIRE(service.told("READY=1"));
    CHECK(service.said("read again and are in force"));
  }
}

TEST_CASE("a store that cannot be opened now: the service stays up, says so and tries again") {
  Folder folder;
  settings_in(folder, talking());
  make_store(folder);
  auto holder = std::make_unique<Holder>(folder);
  Service service(folder.path());
  REQUIRE(service.told("READY=1"));  // or the service manager would end it
  CHECK(service.said("nothing is watched: could not"));
  service.signal(SIGHUP);
  CHECK(service.told("STATUS=nothing is watched"));
  SECTION("it begins by itself; SIGHUP hurries it") {
    holder.reset();
    service.signal(SIGHUP);
    CHECK(service.said("the watch begins", seconds{60}));
    CHECK(service.told("STATUS=bench: "));
  }
  SECTION("it ends when it is told to") {
    service.signal(SIGTERM);
    const auto ended = service.wait(seconds{20});
    REQUIRE(ended);
    CHECK(ended->first == 0);
  }
}

TEST_CASE("told to stop while another process holds the store, the service ends in time") {
  Folder folder;
  Farm farm = talking();
  farm.extra_farm = "exercise = true";
  settings_in(folder, farm);
  Service service(folder.path(), {"--clock-from", "2026-07-12 12:05", "--pace", "1"});
  REQUIRE(service.told("READY=1"));
  const Holder holder(folder);
  folder.write("drop/bench.csv", header + rows_of(readings(Weather{}, farm_time("2026-07-01 00:00"),
                                                           farm_time("2026-07-12 12:00"))));
  REQUIRE(service.said("could not"));  // the store was asked and did not take it
  folder.append("drop/bench.csv", row_of(reading_at(Weather{}, farm_time("2026-07-12 12:00"))));
  service.signal(SIGTERM);
  const auto ended = service.wait(seconds{60});
  INFO(service.words());
  REQUIRE(ended);
  CHECK(ended->first == 0);
  CHECK(ended->second < held_bound);
  CHECK(holds(service.words(), "stopping"));
}

TEST_CASE("told to stop while it reads a huge file, the service ends in time") {
  Folder folder;
  Farm farm = talking();
  farm.extra_farm = "exercise = true";
  settings_in(folder, farm);
  // Nine months of minutes, some looks long.
  std::string rows = header;
  const Instant end = farm_time("2026-07-12 12:00"), first = end - days{270};
  for (Instant at = first; at < end; at += minutes{1}) rows += row_of(reading_at(Weather{}, at));
  folder.write("drop/bench.csv", rows);
  Service service(folder.path(), {"--clock-from", "2026-07-12 12:00", "--pace", "1"});
  REQUIRE(service.told("READY=1", seconds{60}));
  service.signal(SIGTERM);
  const auto ended = service.wait(seconds{60});
  INFO(service.words());
  REQUIRE(ended);
  CHECK(ended->first == 0);
  CHECK(ended->second < stop_bound);
}
