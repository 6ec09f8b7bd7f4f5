// Reading beside a running service and without one: sees what was committed, makes no file.
#include <sys/stat.h>
#include <sys/wait.h>

#include "ground.hpp"

using namespace ground;
using weather::Sample;

namespace {

/// Runs work in a child as a user who owns nothing here; true when it says so. Skipped (true) when
/// this process may not change its user.
template <class Work>
bool as_stranger(const Folder& folder, Work work) {
  if (::geteuid() != 0) return true;
  for (const auto& name : folder.names()) ::chmod((folder.path() + "/" + name).c_str(), 0644);
  ::chmod(folder.path().c_str(), 0755);
  const pid_t child = ::fork();
  if (child == 0) {
    const bool good = ::setgid(65534) == 0 && ::setuid(65534) == 0 && work();
    ::_exit(good ? 0 : 1);
  }
  int status = 0;
  ::waitpid(child, &status, 0);
  return WIFEXITED(status) && WEXITSTATUS(status) == 0;
}

std::size_t count(const Store& store) {
  const auto found = store.samples("bench", instant(0), instant(july_14 * 2));
  return found ? found->size() : 999999;
}

void add(Store& store, int n) {
  must(store.add_samples("bench", std::vector<Sample>{sample(n * 60, 20)}));
}

}  // namespace

TEST_CASE("a reader needs a store that is there", "[store]") {
  const Folder folder;
  const auto refused = Store::open(reader(folder));
  REQUIRE_FALSE(refused);
  CHECK(refused.failure().why == "there is none yet");
  CHECK(folder.names().empty());
}

TEST_CASE("a reader of a store at rest makes no file and may not write", "[store]") {
  const Folder folder;
  {
    Store store = open(writer(folder));
    add(store, 1);
  }
  const auto names = folder.names();
  CHECK(names == std::vector<std::string>{"antherd.db"});
  const std::string bytes = bytes_of(folder.database());
  {
    Store store = open(reader(folder));
    CHECK(count(store) == 1);
    CHECK(must(store.fingerprint()).size() == 32);
    const auto refused = store.add(irrigation("north bench", 0));
    REQUIRE_FALSE(refused);
    CHECK(refused.failure().why == "it was opened for reading only");
    CHECK(folder.names() == names);
    CHECK(as_stranger(folder, [&] { return count(open(reader(folder))) == 1; }));
  }
  CHECK(folder.names() == names);
  CHECK(bytes_of(folder.database()) == bytes);
}

TEST_CASE("a reader beside a writer sees what was committed", "[store]") {
  const Folder folder;
  Store store = open(service(folder));
  add(store, 0);
  const auto names = folder.names();
  Store beside = open(reader(folder));
  for (int n = 1; n < 60; ++n) {
    CHECK(count(beside) == static_cast<std::size_t>(n));
    add(store, n);
    if (n % 10 == 0) Raw(folder.database()).run("PRAGMA wal_checkpoint(RESTART)");
    if (n % 17 == 0) Raw(folder.database()).run("PRAGMA wal_checkpoint(TRUNCATE)");
    Store fresh = open(reader(folder));
    CHECK(count(fresh) == static_cast<std::size_t>(n + 1));
  }
  CHECK(folder.names() == names);
  CHECK(as_stranger(folder, [&] {
    Store stranger = open(reader(folder));
    return count(stranger) == 60 && stranger.diary("north bench") && stranger.fingerprint();
  }));
  CHECK(folder.names() == names);
}

TEST_CASE("a reader that opened a store at rest notices the writer", "[store]") {
  const Folder folder;
  {
    Store store = open(writer(folder));
    add(store, 1);
  }
  Store early = open(reader(folder));
  CHECK(count(early) == 1);
  SECTION("that is running") {
    Store store = open(writer(folder));
    add(store, 2);
    CHECK(count(early) == 2);
    add(store, 3);
    CHECK(count(early) == 3);
  }
  SECTION("that has come and gone") {
    {
      Store store = open(writer(folder));
      add(store, 2);
    }
    CHECK_FALSE(folder.has("antherd.db-wal"));
    CHECK(count(early) == 2);
  }
}

TEST_CASE("a reader sees what a killed service left in its log", "[store]") {
  const Folder folder;
  const pid_t child = ::fork();
  if (child == 0) {
    Store store = open(service(folder));
    for (int n = 0; n < 5; ++n) add(store, n);
    ::kill(::getpid(), SIGKILL);
  }
  int status = 0;
  ::waitpid(child, &status, 0);
  REQUIRE(WIFSIGNALED(status));
  const auto names = folder.names();
  REQUIRE(folder.has("antherd.db-shm"));
  const std::string log = bytes_of(folder.database() + "-wal");
  {
    Store store = open(reader(folder));
    CHECK(count(store) == 5);
    CHECK(as_stranger(folder, [&] { return count(open(reader(folder))) == 5; }));
  }
  CHECK(folder.names() == names);
  CHECK(bytes_of(folder.database() + "-wal") == log);
  // Copied elsewhere without its -shm it says what to do, rather than show less than there is.
  fs::remove(folder.database() + "-shm");
  const auto refused = Store::open(reader(folder));
  REQUIRE_FALSE(refused);
  CHECK(refused.failure().what_next.find("start the service") != std::string::npos);
  CHECK_FALSE(folder.has("antherd.db-shm"));
  { CHECK(count(open(writer(folder))) == 5); }
  CHECK(count(open(reader(folder))) == 5);
}
