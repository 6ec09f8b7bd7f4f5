// Opening: who may, what is refused, what is set aside.
#include <sys/wait.h>

#include <cstring>

#include "edge/store/folder.hpp"
#include "edge/store/schema.hpp"
#include "ground.hpp"

using namespace ground;
using weather::Sample;

namespace {

/// A store with enough in it to span many pages.
void fill(const Store::Options& options, int samples = 3000) {
  Store store = open(options);
  std::vector<Sample> all;
  for (int i = 0; i < samples; ++i) all.push_back(sample(i * 60, 20 + i * 0.001, 50));
  must(store.add_samples("bench", all));
  must(store.add(irrigation("north bench", 0)));
}

}  // namespace

TEST_CASE("the file is what it should be", "[store]") {
  const Folder folder;
  fill(writer(folder));
  Raw raw(folder.database());
  CHECK(raw.run("PRAGMA journal_mode") == "wal\n");
  CHECK(raw.run("PRAGMA application_id") == std::to_string(0x416e7468) + "\n");
  CHECK(raw.run("PRAGMA user_version") == std::to_string(store::schema_number) + "\n");
  CHECK(raw.run("SELECT number, name FROM migration") == "1|first tables\n2|digests\n");
  CHECK(raw.run("SELECT name FROM pragma_table_list WHERE schema = 'main' AND type = 'table' "
                "AND name NOT LIKE 'sqlite%' AND NOT strict") == "");
  CHECK(raw.run("PRAGMA integrity_check") == "ok\n");
  CHECK(raw.run("PRAGMA foreign_key_check") == "");
}

TEST_CASE("a folder is made, one level deep", "[store]") {
  const Folder folder;
  Store::Options options = writer(folder);
  options.folder += "/odd #name%20?x=1";
  { fill(options, 10); }
  options.read_only = true;
  CHECK(must(open(options).samples("bench", instant(0), instant(july_14 * 2))).size() == 10);
  options.folder = folder.path() + "/no/such";
  CHECK_FALSE(Store::open(options));
  options.read_only = false;
  const auto refused = Store::open(options);
  REQUIRE_FALSE(refused);
  CHECK(refused.failure().on_what == options.folder);
}

TEST_CASE("a second service is refused by its number, other writers are not", "[store]") {
  const Folder folder;
  {
    Store first = open(service(folder));
    const auto second = Store::open(service(folder));
    REQUIRE_FALSE(second);
    CHECK(second.failure().why.find("process " + std::to_string(::getpid())) != std::string::npos);
    Store command = open(writer(folder));
    must(command.add(irrigation("north bench", 0)));
    CHECK(must(first.diary_version()) == 1);
  }
  open(service(folder));  // the lock ends with its holder
  const pid_t child = ::fork();
  if (child == 0) {
    const auto held = Store::open(service(folder));
    ::kill(::getpid(), SIGKILL);
  }
  int status = 0;
  ::waitpid(child, &status, 0);
  CHECK(WIFSIGNALED(status));
  open(service(folder));
}

TEST_CASE("a newer schema is refused by name and left alone", "[store]") {
  const Folder folder;
  fill(writer(folder));
  Raw(folder.database())
      .run(
          "INSERT INTO migration VALUES(7, 'later'); PRAGMA user_version = 7;"
          "PRAGMA wal_checkpoint(TRUNCATE)");
  const std::string before = bytes_of(folder.database());
  for (const auto& options : {writer(folder), service(folder), reader(folder)}) {
    const auto refused = Store::open(options);
    REQUIRE_FALSE(refused);
    CHECK(refused.failure().why.find("schema 7") != std::string::npos);
    CHECK(refused.failure().why.find("knows 2") != std::string::npos);
  }
  CHECK(bytes_of(folder.database()) == before);
}

TEST_CASE("another program's database is refused and left alone", "[store]") {
  const Folder folder;
  put_bytes(folder.database(), "");
  Raw(folder.database()).run("CREATE TABLE songs(name)");
  const std::string before = bytes_of(folder.database());
  for (const auto& options : {writer(folder), service(folder), reader(folder)}) {
    const auto refused = Store::open(options);
    REQUIRE_FALSE(refused);
    CHECK(refused.failure().why == "it is a database of another program");
  }
  CHECK(bytes_of(folder.database()) == before);
}

TEST_CASE("steps of the schema are taken once, in order, each whole", "[store]") {
  const Folder folder;
  fill(writer(folder), 5);
  std::vector<store::Migration> steps(store::migrations().begin(), store::migrations().end());
  REQUIRE(steps.size() == 2);
  steps.push_back({3, "more", "CREATE TABLE more(x INTEGER) STRICT; PRAGMA user_version = 3;"});
  using store::Standing;
  const auto connect = [&] {
    return std::make_unique<store::Database>(folder.database(), store::Database::Mode::write,
                                             std::chrono::milliseconds(100));
  };
  auto database = connect();
  CHECK(store::standing_of(*database, store::migrations()) == Standing::current);
  CHECK(store::standing_of(*database, steps) == Standing::older);
  steps.push_back({4, "broken", "CREATE TABLE third(x) STRICT; PRAGMA user_version = 4;"});
  CHECK_THROWS_AS(store::migrate(*database, steps), store::Trouble);  // STRICT wants types
  CHECK(Raw(folder.database()).run("SELECT number, name FROM migration") ==
        "1|first tables\n2|digests\n3|more\n");
  steps.back().sql = "CREATE TABLE third(x REAL) STRICT; PRAGMA user_version = 4;";
  store::migrate(*database, steps);
  store::migrate(*database, steps);
  CHECK(store::standing_of(*database, steps) == Standing::current);
  CHECK(store::standing_of(*database, store::migrations()) == Standing::newer);
  CHECK(Raw(folder.database()).run("SELECT count(*) FROM sample") == "5\n");
  CHECK(Raw(folder.database()).run("SELECT max(number) FROM migration; PRAGMA user_version") ==
        "4\n4\n");
}

TEST_CASE("a store of the first schema opens with its letters", "[store]") {
  const Folder folder;
  {
    store::Database database(folder.database(), store::Database::Mode::write,
                             std::chrono::milliseconds(100));
    store::migrate(database, store::migrations().first(1));
  }
  Raw(folder.database())
      .run(
          "INSERT INTO letter(identity, recipient, subject, body, kind, severity, decided, still, "
          "rise, state, attempts, doubts, next_try, answer) VALUES('heat.1', 'a@b.example', 's', "
          "'b', 'heat', 'severe', 1783987200, '', 0, 'in_doubt', 1, 1, 1783987200, '')");
  CHECK(Raw(folder.database()).run("PRAGMA user_version") == "1\n");
  CHECK_FALSE(Store::open(reader(folder)));  // a reader changes nothing: it says who does
  Store store = must(Store::open(service(folder)));
  CHECK_FALSE(store.set_aside());
  const auto letters = must(store.letters_open());
  REQUIRE(letters.size() == 1);
  CHECK(letters[0].state == outbox::State::in_doubt);
  CHECK(letters[0].digest.empty());
  CHECK(Raw(folder.database()).run("PRAGMA user_version") == "2\n");
}

TEST_CASE("the service sets a damaged file aside, commands leave it", "[store]") {
  const int way = GENERATE(range(0, 7));
  CAPTURE(way);
  const Folder folder;
  fill(service(folder));
  const std::string whole = bytes_of(folder.database());
  REQUIRE(whole.size() > 20 * 4096);
  std::string bytes = whole;
  if (way == 0) bytes.resize(bytes.size() / 2);                 // cut
  if (way == 1) bytes.clear();                                  // nothing left
  if (way == 2) bytes.resize(100);                              // a bare header
  if (way == 3) bytes[3] = static_cast<char>(bytes[3] ^ 4);     // "SQLite" misspelt
  if (way == 4) bytes[63] = static_cast<char>(bytes[63] ^ 64);  // user_version, one bit: schema 65
  if (way == 5) bytes[70] = static_cast<char>(bytes[70] ^ 1);   // application_id, one bit
  if (way == 6) std::memset(&bytes[bytes.size() / 2 / 4096 * 4096], 0xA5, 64);  // a page's head
  put_bytes(folder.database(), bytes);
  if (way != 1 && way != 6 && way != 0) {
    for (const auto& options : {writer(folder), reader(folder)}) {
      const auto refused = Store::open(options);
      REQUIRE_FALSE(refused);
      CHECK(refused.failure().what_next.find("restart the service") != std::string::npos);
      CHECK(bytes_of(folder.database()) == bytes);
    }
  }
  for (int n = 1; n <= 2; ++n) {
    put_bytes(folder.database(), bytes);
    Store store = open(service(folder));
    const std::string name =
        n == 1 ? "antherd-damaged-2026-07-14.db" : "antherd-damaged-2026-07-14-2.db";
    REQUIRE(store.set_aside());
    CHECK(*store.set_aside() == folder.path() + "/" + name);
    CHECK(bytes_of(*store.set_aside()) == bytes);
    CHECK_FALSE(must(store.last_sample("bench")));
    must(store.add(irrigation("north bench", 60)));
  }
  CHECK(bytes_of(folder.path() + "/antherd-damaged-2026-07-14.db") == bytes);
  Store store = open(service(folder));
  CHECK_FALSE(store.set_aside());
  CHECK(must(store.diary_version()) == 1);
}

TEST_CASE("a healthy store is not set aside, with or without a log left behind", "[store]") {
  const Folder folder;
  const pid_t child = ::fork();
  if (child == 0) {
    fill(service(folder));
    Store store = open(service(folder));
    must(store.add(irrigation("north bench", 60)));
    ::kill(::getpid(), SIGKILL);
  }
  int status = 0;
  ::waitpid(child, &status, 0);
  REQUIRE(WIFSIGNALED(status));
  REQUIRE(folder.has("antherd.db-wal"));
  Store store = open(service(folder));
  CHECK_FALSE(store.set_aside());
  CHECK(must(store.diary_version()) == 2);
  CHECK(must(store.samples("bench", instant(0), instant(july_14 * 2))).size() == 3000);
}

TEST_CASE("network file systems are known by their numbers", "[store]") {
  // Numbers as in the kernel's linux/magic.h and statfs(2).
  using store::network_name;
  CHECK(network_name(0x6969, "") == "NFS");
  CHECK(network_name(0x517B, "") == "SMB");
  CHECK(network_name(0xFE534D42, "") == "SMB2");
  CHECK(network_name(0xFF534D42, "") == "CIFS");
  CHECK(network_name(0x65735546, "fuse.sshfs") == "fuse.sshfs");
  CHECK(network_name(0x65735546, "") == "FUSE");
  CHECK_FALSE(network_name(0x65735546, "fuseblk"));
  CHECK_FALSE(network_name(0xEF53, ""));      // ext4
  CHECK_FALSE(network_name(0x01021994, ""));  // tmpfs
  CHECK_FALSE(network_name(0x9123683E, ""));  // btrfs
  CHECK_FALSE(network_name(0x794C7630, ""));  // overlay
  CHECK_FALSE(network_name(0xF2F52010, ""));  // f2fs
}

TEST_CASE("what was set aside keeps its log", "[store]") {
  const Folder folder;
  put_bytes(folder.database(), "db");
  put_bytes(folder.database() + "-wal", "log");
  put_bytes(folder.path() + "/antherd-damaged-2026-12-31.db-wal", "an older one's log");
  const auto aside = must(store::put_aside(folder.path(), instant(1798761599)));  // 23:59:59Z
  CHECK(aside == folder.path() + "/antherd-damaged-2026-12-31-2.db");
  CHECK(bytes_of(aside) == "db");
  CHECK(bytes_of(aside + "-wal") == "log");
  CHECK(bytes_of(folder.path() + "/antherd-damaged-2026-12-31.db-wal") == "an older one's log");
}
