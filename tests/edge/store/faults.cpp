// Kill, full disk, a lock held too long, the ballast, the weekly copy.
#include <sys/stat.h>
#include <sys/wait.h>

#include <csignal>
#include <cstring>

#include "edge/store/folder.hpp"
#include "ground.hpp"

using namespace ground;
using store::Decision;
using weather::Sample;

namespace {

constexpr int samples_a_step = 40;

/// One step of a small service: samples with their bookmark, then a decision, then the diary.
void step(Store& store, int n) {
  std::vector<Sample> some;
  for (int i = 0; i < samples_a_step; ++i) some.push_back(sample(n * 3600 + i * 60, 20 + i, 50));
  const std::string number = std::to_string(n);
  must(store.add_samples("bench", some, {{"bookmark", number}}));
  Decision made;
  made.hours["bench"] = {record(n, 30)};
  made.said = {said("episode " + number, n)};
  made.letters = {letter("heat." + number, "a@b.example", n), letter("heat." + number, "c", n)};
  made.notes = {{"decided", number}};
  must(store.save(made));
  must(store.add(irrigation("north bench", n)));
}

/// The child says each finished step through the pipe.
[[noreturn]] void work_until_killed(const Store::Options& options, int pipe, int from) {
  Store store = open(options);
  for (int n = from;; ++n) {
    step(store, n);
    if (::write(pipe, &n, sizeof n) != sizeof n) ::_exit(1);
  }
}

int number_in(const Store& store, const std::string& key) {
  const auto text = must(store.note(key));
  return text ? std::atoi(text->c_str()) : -1;
}

}  // namespace

TEST_CASE("killed at any moment, everything that was finished is there, once", "[store]") {
  const std::uint32_t started = seed();
  CAPTURE(started);
  std::mt19937 random(started);
  const Folder folder;
  int next = 0;
  for (int round = 0; round < 25; ++round) {
    int ends[2];
    REQUIRE(::pipe(ends) == 0);
    const pid_t child = ::fork();
    if (child == 0) {
      ::close(ends[0]);
      work_until_killed(service(folder), ends[1], next);
    }
    ::close(ends[1]);
    int told = next - 1;
    const int wanted = static_cast<int>(random() % 4);
    for (int seen = 0; seen <= wanted; ++seen) {
      REQUIRE(::read(ends[0], &told, sizeof told) == sizeof told);
    }
    // Somewhere within the next step, by work instead of sleeping.
    std::mt19937 busy(started);
    busy.discard(random() % 300000);
    ::kill(child, SIGKILL);
    int status = 0;
    ::waitpid(child, &status, 0);
    int later = 0;
    while (::read(ends[0], &later, sizeof later) == sizeof later) told = later;
    ::close(ends[0]);

    Store store = open(service(folder));
    CHECK_FALSE(store.set_aside());
    const int bookmark = number_in(store, "bookmark");
    const int decided = number_in(store, "decided");
    const auto letters = must(store.letters_since(instant(0)));
    CHECK(decided >= told);
    CHECK(decided <= told + 1);
    CHECK(bookmark >= decided);
    CHECK(must(store.samples("bench", instant(0), instant(july_14 * 2))).size() ==
          static_cast<std::size_t>((bookmark + 1) * samples_a_step));
    CHECK(letters.size() == static_cast<std::size_t>(2 * (decided + 1)));
    CHECK(must(store.said(instant(0))).size() == static_cast<std::size_t>(decided + 1));
    CHECK(must(store.hours("bench", hour(0), hour(100000))).size() ==
          static_cast<std::size_t>(decided + 1));
    CHECK(must(store.diary_version()) >= told + 1);
    next = told + 1;  // the step that was cut short is done again: nothing may double
  }
  Store store = open(service(folder));
  const int last = number_in(store, "decided");
  while (next <= last) step(store, next++);
  CHECK(must(store.conflicts("bench")).empty());
  CHECK(must(store.letters_since(instant(0))).size() == static_cast<std::size_t>(2 * (last + 1)));
  CHECK(must(store.diary_version()) == last + 1);
}

TEST_CASE("a full disk: said, nothing half kept, usable, and on again with room", "[store]") {
  const Folder folder;
  {
    Store store = open(writer(folder));
    step(store, 0);
  }
  Store::Options options = writer(folder);
  options.page_limit = static_cast<std::int64_t>(fs::file_size(folder.database()) / 4096 + 12);
  std::string full;
  {
    Store store = open(options);
    std::vector<Sample> many;
    for (int i = 0; i < 5000; ++i) many.push_back(sample(100000 + i * 60, 20 + i * 0.01, 50));
    const std::string before = must(store.fingerprint());
    const auto refused = store.add_samples("bench", many, {{"bookmark", "9"}});
    REQUIRE_FALSE(refused);
    CHECK(store.out_of_space());
    CHECK(refused.failure().why == "database or disk is full");
    CHECK(refused.failure().what_next.find("make room") != std::string::npos);
    CHECK(must(store.fingerprint()) == before);
    CHECK_FALSE(store.out_of_space());
    CHECK(number_in(store, "bookmark") == 0);
    // A station first named in the failed transaction has no number.
    CHECK_FALSE(store.add_samples("creek", many));
    // Decisions go on while samples do not: small ones find room.
    step(store, 1);
    CHECK(must(store.letters_open()).size() == 4);
    // Until there is none at all: whole or not at all, still.
    int n = 2;
    for (; n < 500; ++n) {
      Decision made;
      made.letters = {letter("a." + std::to_string(n), "x", n),
                      letter("b." + std::to_string(n), "x")};
      if (!store.save(made)) break;
    }
    REQUIRE(n < 500);
    CHECK(store.out_of_space());
    CHECK(must(store.letters_open()).size() == static_cast<std::size_t>(4 + 2 * (n - 2)));
    // What has ended can be kept without new pages.
    outbox::Item first = must(store.letters_open())[0];
    first.state = outbox::State::sent;
    must(store.update(first, {}));
  }
  Store store = open(writer(folder));
  step(store, 7);
  must(store.add_samples("creek", std::vector<Sample>{sample(0, 20)}));
  CHECK(Raw(folder.database()).run("PRAGMA integrity_check; PRAGMA foreign_key_check") == "ok\n");
}

TEST_CASE("a lock held too long is a failure, not a hang, and passes", "[store]") {
  const Folder folder;
  Store::Options options = writer(folder);
  options.patience = std::chrono::milliseconds(20);
  Store store = open(options);
  step(store, 0);
  Raw raw(folder.database());
  raw.run("BEGIN IMMEDIATE");
  const auto refused = store.add(irrigation("north bench", 9999));
  REQUIRE_FALSE(refused);
  CHECK(refused.failure().why == "database is locked");
  CHECK(must(store.diary("north bench")).irrigations.size() == 1);  // reading goes on
  raw.run("COMMIT");
  must(store.add(irrigation("north bench", 9999)));
}

TEST_CASE("damage found while running is a failure that names the way out", "[store]") {
  const Folder folder;
  {
    Store store = open(writer(folder));
    step(store, 0);
  }
  std::string bytes = bytes_of(folder.database());
  Raw raw(folder.database());
  const int page = std::stoi(raw.run("SELECT rootpage FROM sqlite_schema WHERE name = 'letter'"));
  std::memset(&bytes[static_cast<std::size_t>(page - 1) * 4096], 0x5A, 100);
  put_bytes(folder.database(), bytes);
  Store store = open(writer(folder));
  CHECK_FALSE(store.met_damage());
  const auto refused = store.letters_open();
  REQUIRE_FALSE(refused);
  CHECK(refused.failure().why == "database disk image is malformed");
  CHECK(refused.failure().what_next.find("restart the service") != std::string::npos);
  must(store.line());
  CHECK(store.met_damage());  // remembered past calls that succeed
  CHECK(must(store.check()));
  CHECK_FALSE(store.met_damage());
}

TEST_CASE("a file that is sound is called so by the check, whatever a row holds", "[store]") {
  const Folder folder;
  Store store = open(service(folder));
  step(store, 0);
  Raw(folder.database()).run("UPDATE letter SET attempts = 99999999999");
  CHECK_FALSE(store.letters_open());
  CHECK(store.met_damage());
  CHECK_FALSE(must(store.check()));
  CHECK_FALSE(store.met_damage());
  step(store, 1);
}

TEST_CASE("samples stop before decisions do: without the ballast they wait for room", "[store]") {
  const Folder folder;
  Store::Options options = service(folder);
  options.page_limit = 3000;  // 12 MB: less than 16 MiB are free from the start
  Store store = open(options);
  step(store, 0);  // the ballast is there
  must(store.release_ballast());
  const auto refused = store.add_samples("bench", std::vector<Sample>{sample(9, 20)});
  REQUIRE_FALSE(refused);
  CHECK(refused.failure().sentence().find("8 MiB in reserve are given up") != std::string::npos);
  CHECK(store.out_of_space());
  CHECK(store.samples_wait());
  Decision made;
  made.letters = {letter("heat.9", "x")};
  made.hours["bench"] = {record(9, 30)};
  must(store.save(made));
  must(store.update(must(store.letters_open())[0], {}));
  must(store.add(irrigation("north bench", 9)));
  must(store.put_notes({{"key", "value"}}));
  must(store.keep_ballast());
  must(store.add_samples("bench", std::vector<Sample>{sample(9, 20)}));
  CHECK_FALSE(store.samples_wait());
}

TEST_CASE("the ballast is there, is given back, and is made again", "[store]") {
  const Folder folder;
  const std::string ballast = folder.path() + "/ballast";
  {
    Store store = open(writer(folder));
    CHECK_FALSE(folder.has("ballast"));  // the service's alone
  }
  Store store = open(service(folder));
  REQUIRE(folder.has("ballast"));
  CHECK(fs::file_size(ballast) == 8u << 20);
  struct stat held {};
  REQUIRE(::stat(ballast.c_str(), &held) == 0);
  CHECK(held.st_blocks * 512 >= 8 << 20);  // really taken, not a hole
  must(store.release_ballast());
  CHECK_FALSE(folder.has("ballast"));
  must(store.release_ballast());
  must(store.keep_ballast());
  CHECK(fs::file_size(ballast) == 8u << 20);
  put_bytes(ballast, "short");
  must(store.keep_ballast());
  CHECK(fs::file_size(ballast) == 8u << 20);
}

TEST_CASE("the weekly copy: all but samples, checked, two kept, usable as a store", "[store]") {
  const Folder folder;
  const bool by_reader = GENERATE(false, true);
  const bool running = GENERATE(false, true);
  if (!by_reader && !running) return;
  CAPTURE(by_reader, running);
  auto store = std::make_unique<Store>(open(service(folder)));
  for (int n = 0; n < 5; ++n) step(*store, n);
  must(store->remove_irrigation(5));
  const auto version = must(store->diary_version());
  const auto letters = must(store->letters_since(instant(0))).size();
  if (!running) store.reset();
  std::unique_ptr<Store> source;
  if (by_reader) source = std::make_unique<Store>(open(reader(folder)));
  Store& from = by_reader ? *source : *store;
  put_bytes(folder.path() + "/antherd-copy-2020-W01.db.part", "left by a crash");
  for (const int week : {0, 1, 2, 2})
    must(from.copy_without_samples(instant(july_14 + week * 7 * 86400)));
  std::vector<std::string> copies;
  for (const auto& name : folder.names()) {
    if (name.starts_with("antherd-copy")) copies.push_back(name);
  }
  // date -d 2026-07-21 +%G-W%V and a week on
  CHECK(copies == std::vector<std::string>{"antherd-copy-2026-W30.db", "antherd-copy-2026-W31.db"});
  const Folder elsewhere;
  fs::copy_file(folder.path() + "/" + copies[1], elsewhere.database());
  CHECK(Raw(elsewhere.database()).run("PRAGMA integrity_check; PRAGMA foreign_key_check") ==
        "ok\n");
  Store copy = open(service(elsewhere));
  CHECK_FALSE(copy.set_aside());
  CHECK(must(copy.letters_since(instant(0))).size() == letters);
  CHECK(must(copy.hours("bench", hour(0), hour(9))).size() == 5);
  CHECK(must(copy.diary("north bench")).irrigations.size() == 4);
  CHECK(must(copy.diary_version()) == version);
  CHECK(must(copy.said(instant(0))).size() == 5);
  CHECK(must(copy.note("bookmark")) == "4");
  CHECK_FALSE(must(copy.last_sample("bench")));
  CHECK(must(copy.add(irrigation("north bench", 99999))) == 6);  // number 5 is not used again
}

TEST_CASE("a copy is named by its ISO week", "[store]") {
  // date -u -d DATE +%G-W%V
  CHECK(store::copy_name(instant(1783987200)) == "antherd-copy-2026-W29.db");  // 2026-07-14
  CHECK(store::copy_name(instant(1609459200)) == "antherd-copy-2020-W53.db");  // 2021-01-01
  CHECK(store::copy_name(instant(1609718399)) == "antherd-copy-2020-W53.db");  // 2021-01-03 23:59
  CHECK(store::copy_name(instant(1609718400)) == "antherd-copy-2021-W01.db");  // 2021-01-04
  CHECK(store::copy_name(instant(1735516800)) == "antherd-copy-2025-W01.db");  // 2024-12-30
}

TEST_CASE("a copy named by a clock that stood ahead neither wins nor lives for ever", "[store]") {
  const Folder folder;
  const auto copies = [&] {
    std::vector<std::string> names;
    for (const auto& name : folder.names()) {
      if (name.starts_with("antherd-copy")) names.push_back(name.substr(13, 8));
    }
    return names;
  };
  using Weeks = std::vector<std::string>;
  {
    Store store = open(service(folder));
    must(store.put_notes({{"first_start", "1783987200"}}));
    for (const int years : {4, 3})
      must(store.copy_without_samples(instant(july_14 + years * 31557600)));
    CHECK(copies() == Weeks{"2029-W28", "2030-W28"});
    must(store.add(irrigation("north bench", 0)));
    must(store.copy_without_samples(instant(july_14)));
    CHECK(copies() == Weeks{"2026-W29", "2030-W28"});
  }
  fs::remove(folder.database());
  {
    Store store = open(service(folder));  // the diary of this week's copy
    CHECK(must(store.diary("north bench")).irrigations.size() == 1);
    must(store.copy_without_samples(instant(july_14 + 7 * 86400)));
  }
  CHECK(copies() == Weeks{"2026-W29", "2026-W30"});
}
