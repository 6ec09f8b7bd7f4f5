// irrigation.csv and scouting.csv in the diary folder: what is good is used, every fault is refused
// with its line and reason, and the same file twice changes nothing.
#include <algorithm>

#include "ground.hpp"
#include "run/service/intake.hpp"
#include "support/catch.hpp"

using namespace ground;

namespace {

struct Diary {
  Folder folder;
  std::shared_ptr<const settings::Settings> settings = settings_in(folder);
  service::DiaryFiles read() const { return service::read_diary_files(*settings); }
};

}  // namespace

TEST_CASE("good irrigations are read with their units, sets and the farm's clock") {
  Diary diary;
  diary.folder.write("diary/irrigation.csv",
                     "field,start,end,method,depth,set\r\n"
                     "north bench,2026-07-09 20:00,2026-07-09 23:00,overhead,0.5 in,1\r\n"
                     "nor,2026-07-10 20:00,2026-07-11 02:00,drip,6 mm,\r\n"
                     "\"north bench\",2026-07-12 20:00,2026-07-12 23:00,,unknown,\n");
  const auto files = diary.read();
  for (const auto& row : files.refused) UNSCOPED_INFO(row.reason);
  CHECK(files.refused.empty());
  CHECK(files.troubles.empty());
  REQUIRE(files.diary.irrigations.size() == 3);
  const auto& first = files.diary.irrigations[0];
  CHECK(first.start == farm_time("2026-07-09 20:00"));
  CHECK(first.end == farm_time("2026-07-09 23:00"));
  CHECK(first.depth->value == Approx(12.7));  // 0.5 × 25.4 mm
  CHECK(first.set == 1);
  CHECK(files.diary.irrigations[1].method == field::Method::drip);
  CHECK(files.diary.irrigations[1].field == "north bench");
  CHECK(files.diary.irrigations[2].method == field::Method::overhead);  // the field's own
  CHECK(!files.diary.irrigations[2].depth);
}

TEST_CASE("a header may give the unit of bare depths") {
  Diary diary;
  diary.folder.write("diary/irrigation.csv",
                     "\xEF\xBB\xBF"
                     "field,start,end,method,depth_in,set\n"
                     "north bench,2026-07-09 20:00,2026-07-09 23:00,overhead,0.5,1\n");
  const auto files = diary.read();
  REQUIRE(files.diary.irrigations.size() == 1);
  CHECK(files.diary.irrigations[0].depth->value == Approx(12.7));
}

TEST_CASE("every fault of an irrigation is refused by line and name") {
  const auto [row, named] = GENERATE(table<std::string, std::string>({
      {"south,2026-07-09 20:00,2026-07-09 23:00,overhead,6 mm,1", "south"},
      {",2026-07-09 20:00,2026-07-09 23:00,overhead,6 mm,1", "field"},
      {"north bench,2026-07-09 8pm,2026-07-09 23:00,overhead,6 mm,1", "start"},
      {"north bench,2026-13-09 20:00,2026-07-09 23:00,overhead,6 mm,1", "start"},
      {"north bench,2026-07-09 20:00,2026-07-09 24:30,overhead,6 mm,1", "end"},
      {"north bench,2026-07-09 20:00,,overhead,6 mm,1", "end"},
      {"north bench,2026-07-09 20:00,2026-07-09 19:00,overhead,6 mm,1", "end is not after start"},
      {"north bench,2026-07-09 20:00,2026-08-09 19:00,overhead,6 mm,1", "96 h"},
      {"north bench,2026-07-09 20:00,2026-07-09 23:00,hose,6 mm,1", "hose"},
      {"north bench,2026-07-09 20:00,2026-07-09 23:00,overhead,6,1", "no unit"},
      {"north bench,2026-07-09 20:00,2026-07-09 23:00,overhead,6 gallons,1", "depth"},
      {"north bench,2026-07-09 20:00,2026-07-09 23:00,overhead,-6 mm,1", "depth"},
      {"north bench,2026-07-09 20:00,2026-07-09 23:00,overhead,nan mm,1", "depth"},
      {"north bench,2026-07-09 20:00,2026-07-09 23:00,overhead,6 mm,1.5", "set"},
      {"north bench,2026-07-09 20:00,2026-07-09 23:00,overhead,6 mm,-1", "set"},
      {"north bench,2026-11-01 01:30,2026-11-01 03:00,overhead,6 mm,1", "start '2026-11-01 01:30'"},
      {"north bench,2026-11-01 01:30,2026-11-01 03:00,overhead,6 mm,1", "exists twice"},
      {"north bench,2026-03-08 01:00,2026-03-08 02:30,overhead,6 mm,1", "end '2026-03-08 02:30'"},
      {"north bench,2026-03-08 01:00,2026-03-08 02:30,overhead,6 mm,1", "does not exist"},
  }));
  Diary diary;
  diary.folder.write("diary/irrigation.csv",
                     "field,start,end,method,depth,set\n" + row +
                         "\nnorth bench,2026-07-19 20:00,2026-07-19 23:00,overhead,6 mm,1\n");
  const auto files = diary.read();
  INFO(row);
  REQUIRE(files.refused.size() == 1);
  CHECK(files.refused[0].line == 2);
  INFO(files.refused[0].reason);
  CHECK(files.refused[0].reason.find(named) != std::string::npos);
  CHECK(files.refused[0].file.find("irrigation.csv") != std::string::npos);
  CHECK(files.diary.irrigations.size() == 1);  // the rest of the file is used
}

TEST_CASE("scouting notes: good ones are read, every fault is named") {
  Diary diary;
  const std::string head = "field,date,stage,began,disease,seed_set,note\n";
  diary.folder.write("diary/scouting.csv",
                     head +
                         "north bench,2026-07-02,first-anthers,yes,no,,\"yellow, south rows\"\n"
                         "north bench,2026-07-12,65,,yes,14/20,\n");
  auto files = diary.read();
  CHECK(files.refused.empty());
  REQUIRE(files.diary.notes.size() == 2);
  CHECK(files.diary.notes[0].stage == 60);
  CHECK(files.diary.notes[0].began);
  CHECK(files.diary.notes[0].note == "yellow, south rows");
  CHECK(files.diary.notes[1].stage == 65);
  CHECK(files.diary.notes[1].disease == true);
  CHECK(files.diary.notes[1].seed_set == 14);
  CHECK(files.diary.notes[1].seed_looked == 20);

  const std::vector<std::pair<std::string, std::string>> faults{
      {"moon,2026-07-02,first-anthers,yes,no,,", "moon"},
      {"north bench,2026-02-30,first-anthers,yes,no,,", "date"},
      {"north bench,07/02/2026,first-anthers,yes,no,,", "date"},
      {"north bench,2026-07-02,blooming,yes,no,,", "blooming"},
      {"north bench,2026-07-02,8,yes,no,,", "stage"},
      {"north bench,2026-07-02,first-anthers,maybe,no,,", "maybe"},
      {"north bench,2026-07-02,first-anthers,yes,a bit,,", "a bit"},
      {"north bench,2026-07-02,,,,21/20,", "seed_set"},
      {"north bench,2026-07-02,,,,14,", "seed_set"},
      {"north bench,2026-07-02,,,,0/0,", "seed_set"},
      {"north bench,2026-07-02,,,,,", "says nothing"},
      {std::string("north bench,2026-07-02,,,,,a\x01") + "b", "control"},
  };
  for (const auto& [row, named] : faults) {
    diary.folder.write("diary/scouting.csv", head + row + "\n");
    files = diary.read();
    INFO(row);
    CHECK(files.diary.notes.empty());
    REQUIRE(files.refused.size() == 1);
    INFO(files.refused[0].reason);
    CHECK(files.refused[0].reason.find(named) != std::string::npos);
  }
}

TEST_CASE("a diary file that is no diary is named, and nothing falls over") {
  Diary diary;
  std::string text, named;
  SECTION("a column is missing") {
    text = "field,begin,end\nnorth bench,2026-07-09 20:00,2026-07-09 23:00\n";
    named = "start";
  }
  SECTION("a column nobody knows") {
    text = "field,start,end,dept\nnorth bench,2026-07-09 20:00,2026-07-09 23:00,6 mm\n";
    named = "dept";
  }
  SECTION("the last line has no end yet") {
    text = "field,start,end\nnorth bench,2026-07-09 20:00,2026-07-09 23:00";
    named = "line";
  }
  SECTION("UTF-16") {
    for (const char c : std::string("field,start,end\nnorth,x,y\n")) text += {c, '\0'};
    named = "start";
  }
  SECTION("more than 4 MiB") {
    text = "field,start,end\n" + std::string(5 * 1024 * 1024, 'x') + "\n";
    named = "4 MiB";
  }
  diary.folder.write("diary/irrigation.csv", text);
  const auto files = diary.read();
  std::string all;
  for (const auto& trouble : files.troubles) all += trouble.sentence() + "\n";
  for (const auto& row : files.refused) all += row.reason + "\n";
  INFO(all);
  CHECK(all.find(named) != std::string::npos);
}

TEST_CASE("a folder or nothing in place of a diary file is no fault of the rest") {
  Diary diary;
  CHECK(diary.read().troubles.empty());
  std::filesystem::create_directories(diary.folder / "diary/irrigation.csv");
  CHECK(diary.read().troubles.size() == 1);
}

TEST_CASE("the service takes diary files once, and again only what is new") {
  Bench bench;
  const Instant now = farm_time("2026-07-10 12:00");
  bench.open(now);
  const std::string head = "field,start,end,method,depth,set\n";
  const std::string one = "north bench,2026-07-09 20:00,2026-07-09 23:00,overhead,6 mm,1\n";
  const std::string two = "north bench,2026-07-08 20:00,2026-07-08 23:00,overhead,6 mm,1\n";
  bench.folder.write("diary/irrigation.csv", head + one);
  bench.turn(now);
  const auto count = [&] { return bench.desk->store().diary("north bench")->irrigations.size(); };
  CHECK(count() == 1);
  const auto print = bench.fingerprint();
  bench.folder.write("diary/irrigation.csv", head + one + one);
  bench.turn(now + minutes{2});
  CHECK(count() == 1);
  CHECK(bench.fingerprint() == print);
  bench.close(now + minutes{3});
  bench.open(now + minutes{3});
  bench.turn(now + minutes{3});
  CHECK(count() == 1);
  bench.folder.write("diary/irrigation.csv", head + two + one + "broken\n");
  bench.turn(now + minutes{5});
  CHECK(count() == 2);
  CHECK(bench.folder.read("store/refused.csv").find("broken") != std::string::npos);
  CHECK(bench.desk->keeper().lookout().diary("north bench").irrigations.size() == 2);
}

TEST_CASE("an entry that was taken back stays away although its file is still there") {
  Bench bench;
  const Instant now = farm_time("2026-07-10 12:00");
  bench.open(now);
  bench.folder.write("diary/irrigation.csv",
                     "field,start,end\nnorth bench,2026-07-09 20:00,2026-07-09 23:00\n");
  bench.turn(now);
  const auto diary = bench.desk->store().diary("north bench");
  REQUIRE(diary);
  REQUIRE(diary->irrigations.size() == 1);
  // Another process: `antherd water north --undo`.
  REQUIRE(bench.desk->store().remove_irrigation(diary->irrigations[0].id));
  bench.turn(now + minutes{2});
  CHECK(bench.desk->keeper().lookout().diary("north bench").irrigations.empty());
}
