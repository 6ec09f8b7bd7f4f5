// A store that was damaged or is missing: people are told once, and what they typed comes back.
#include <filesystem>
#include <fstream>

#include "ground.hpp"
#include "support/catch.hpp"

using namespace ground;

namespace {

const Instant tuesday = farm_time("2026-07-07 12:00");

Farm two_readers() {
  Farm farm;
  farm.recipients += "[[recipient]]\naddress = \"hand@larkspur.example\"\n";
  return farm;
}

field::Irrigation evening(const std::string& day) {
  field::Irrigation made;
  made.field = "north bench";
  made.start = farm_time(day + " 19:00");
  made.end = farm_time(day + " 21:00");
  return made;
}

}  // namespace

TEST_CASE("after the store was damaged or is missing one letter goes to everyone") {
  Bench bench(two_readers());
  bench.open(tuesday);
  bench.turn(tuesday);
  CHECK(bench.letters_of("anew").empty());  // a first start
  REQUIRE(bench.desk->store().add(evening("2026-07-05")));
  const Instant wednesday = tuesday + days{8};
  bench.turn(wednesday);  // the copy of the week
  REQUIRE(bench.desk->store().add(evening("2026-07-15")));
  bench.close(wednesday);
  const bool damaged = GENERATE(true, false);
  if (damaged) {
    bench.folder.write("store/antherd.db", std::string(20000, 'x'));
  } else {
    std::filesystem::remove(bench.folder / "store/antherd.db");
  }
  const Instant again = wednesday + days{1};
  bench.open(again);
  SECTION("at once") { bench.turn(again); }
  SECTION("even when it dies before it has told") {
    bench.desk.reset();
    bench.open(again + minutes{1});
    bench.turn(again + minutes{1});
  }
  for (int start = 0; start < 2; ++start) {  // and never again
    const auto told = bench.letters_of("anew");
    REQUIRE(told.size() == 2);
    CHECK(told[0].letter.recipient != told[1].letter.recipient);
    for (const auto& item : told) {
      CHECK(item.state == outbox::State::sent);
      CHECK((item.letter.body.find("antherd-damaged-2026-07-16") != std::string::npos) == damaged);
      CHECK(item.letter.body.find("1 irrigation and") != std::string::npos);
    }
    const auto diary = bench.desk->store().diary("north bench");
    REQUIRE(diary);
    REQUIRE(diary->irrigations.size() == 1);
    CHECK(diary->irrigations[0].same_as(evening("2026-07-05")));
    bench.close(again + hours{start + 1});
    bench.open(again + hours{start + 2});
    bench.turn(again + hours{start + 2});
  }
  CHECK(bench.folder.read("antherd.log").find("1 irrigation and ") != std::string::npos);
}

TEST_CASE("each week has its copy, also where the service rested over Sunday's midnight") {
  Bench bench;
  const auto copies = [&] {
    auto names = bench.folder.names("store");
    std::erase_if(names, [](const auto& name) { return name.rfind("antherd-copy-", 0) != 0; });
    return names;
  };
  bench.open(tuesday);
  bench.turn(tuesday);
  CHECK(copies() == std::vector<std::string>{"antherd-copy-2026-W28.db"});
  bench.close(tuesday + hours{1});
  bench.open(tuesday + days{8});
  bench.turn(tuesday + days{8});
  CHECK(copies() ==
        std::vector<std::string>{"antherd-copy-2026-W28.db", "antherd-copy-2026-W29.db"});
  const std::string copy = bench.folder.read("store/antherd-copy-2026-W29.db");
  REQUIRE(bench.desk->store().add(evening("2026-07-15")));
  bench.turn(tuesday + days{9});  // the week has its copy: it is not written over
  CHECK(bench.folder.read("store/antherd-copy-2026-W29.db") == copy);
}

TEST_CASE("while the clock is not set a copy bears the week of the newest reading") {
  Bench bench;
  const auto copies = [&] {
    auto names = bench.folder.names("store");
    std::erase_if(names, [](const auto& name) { return name.rfind("antherd-copy-", 0) != 0; });
    return names;
  };
  bench.open(tuesday);
  bench.desk->turn(tuesday + days{200}, false);  // a clock that stands ahead
  bench.desk->turn(tuesday + days{200} + minutes{1}, false);
  CHECK(copies().empty());  // nothing is known of the time
  bench.drop("bench.csv", readings(Weather{}, tuesday - days{2}, tuesday));
  for (int i = 1; i < 8; ++i) {
    bench.desk->look_soon();
    bench.desk->turn(tuesday + days{201} + minutes{i}, false);
  }
  bench.desk->turn(tuesday + days{202}, false);
  CHECK(copies() == std::vector<std::string>{"antherd-copy-2026-W28.db"});
}
