// A new store where one had been: what people typed comes back from the weekly copy, once, and a
// first start is no such thing.
#include "edge/store/folder.hpp"
#include "ground.hpp"

using namespace ground;

namespace {

field::Scouting scouting(const std::string& field, int day) {
  field::Scouting made;
  made.field = field;
  made.date = CivilDay(std::chrono::days(day));
  made.stage = 2;
  made.note = "first yellow anthers, north end";
  return made;
}

/// A season's store with a diary, and its weekly copy, made by July 14.
void live(const Folder& folder) {
  Store store = open(service(folder));
  must(store.put_notes({{"first_start", "1783987200"}}));
  must(store.add(irrigation("north bench", 0)));
  must(store.add(irrigation("south bench", 3600)));
  must(store.add(scouting("north bench", 20647)));
  CHECK_FALSE(store.has_copy_of_week(instant(july_14)));
  must(store.copy_without_samples(instant(july_14)));
  CHECK(store.has_copy_of_week(instant(july_14 + 5 * 86400)));        // Sunday
  CHECK_FALSE(store.has_copy_of_week(instant(july_14 + 6 * 86400)));  // Monday
  CHECK_FALSE(must(store.beginning()));
}

}  // namespace

TEST_CASE("a store that is gone or damaged gives its diary back, told until it was told") {
  const Folder folder;
  live(folder);
  const int way = GENERATE(range(0, 3));
  CAPTURE(way);
  if (way == 0) put_bytes(folder.database(), std::string(9000, 'x'));
  if (way == 1) put_bytes(folder.database(), "");
  if (way == 2) fs::remove(folder.database());
  for (int opened = 0; opened < 2; ++opened) {  // the second finds it so
    Store store = open(service(folder));
    const auto beginning = must(store.beginning());
    REQUIRE(beginning);
    CHECK(beginning->aside == (way == 2 ? "" : "antherd-damaged-2026-07-14.db"));
    CHECK(beginning->copied);
    CHECK(beginning->irrigations == 2);
    CHECK(beginning->notes == 1);
    const field::Diary north = must(store.diary("north bench"));
    REQUIRE(north.irrigations.size() == 1);
    CHECK(north.irrigations[0].same_as(irrigation("north bench", 0)));
    REQUIRE(north.notes.size() == 1);
    CHECK(north.notes[0].same_as(scouting("north bench", 20647)));
    CHECK(must(store.diary("south bench")).irrigations.size() == 1);
  }
  Store store = open(service(folder));
  store::Decision decision;
  decision.letters = {letter("anew", "a@larkspur.example")};
  decision.notes = Store::beginning_told();
  must(store.save(decision));
  CHECK_FALSE(must(store.beginning()));
}

TEST_CASE("from a damaged copy the older one is taken, from none nothing") {
  const Folder folder;
  live(folder);
  fs::remove(folder.database());
  put_bytes(folder.path() + "/antherd-copy-2026-W30.db", std::string(9000, 'x'));
  SECTION("an older one is there") {
    Store store = open(service(folder));
    CHECK(must(store.beginning())->irrigations == 2);
    CHECK(must(store.diary("north bench")).notes.size() == 1);
  }
  SECTION("none can be read") {
    fs::remove(folder.path() + "/antherd-copy-2026-W29.db");
    Store store = open(service(folder));
    REQUIRE(must(store.beginning()));
    CHECK_FALSE(must(store.beginning())->copied);
    CHECK(must(store.diary("north bench")).irrigations.empty());
  }
  SECTION("only the ballast is there") {
    for (const char* week : {"29", "30"}) {
      fs::remove(folder.path() + "/antherd-copy-2026-W" + week + ".db");
    }
    REQUIRE(folder.has("ballast"));
    CHECK(must(open(service(folder)).beginning()));
  }
}

TEST_CASE("what was typed into the new store first stands beside what comes back, each once") {
  const Folder folder;
  live(folder);
  fs::remove(folder.database());
  {
    Store command = open(writer(folder));
    must(command.add(irrigation("north bench", 0)));
    must(command.add(irrigation("north bench", 7200)));
  }
  Store store = open(service(folder));
  CHECK(must(store.beginning()));
  CHECK(must(store.diary("north bench")).irrigations.size() == 2);
  CHECK(must(store.diary("south bench")).irrigations.size() == 1);
}

TEST_CASE("a first start is no loss, nor is one that died before it wrote a byte") {
  const Folder folder;
  if (GENERATE(true, false)) put_bytes(folder.database(), "");
  Store store = open(service(folder));
  CHECK_FALSE(store.set_aside());
  CHECK_FALSE(must(store.beginning()));
  must(store.add(irrigation("north bench", 0)));
}

TEST_CASE("in haste another's lock is not waited for") {
  const Folder folder;
  std::atomic<bool> haste{false};
  Store::Options options = service(folder);
  options.haste = &haste;
  options.patience = std::chrono::hours(1);
  Store store = open(options);
  Raw other(folder.database());
  other.run("BEGIN IMMEDIATE");
  haste = true;
  CHECK_FALSE(store.put_notes({{"key", "value"}}));
  other.run("ROLLBACK");
  CHECK(store.put_notes({{"key", "value"}}));
}
