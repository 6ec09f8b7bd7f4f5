// water and scout: what is written, what is refused, and that a refusal wrote nothing.
#include "program.hpp"
#include "service/ground.hpp"
#include "support/catch.hpp"

using namespace ground;
using program::run;

namespace {

/// A call that is refused, and what the refusal must name.
struct Case {
  std::vector<std::string> arguments;
  std::string named;
};

struct Log {
  Folder folder;
  Log() {
    Farm farm;
    farm.sown = "2026-04-25";
    farm.more =
        "\n[[field]]\nname = \"creek\"\nstations = [\"bench\"]\nsown = 2026-04-25\n"
        "crop_type = \"quick\"\nirrigation = \"none\"\n";
    settings_in(folder, farm);
  }
  program::Ended operator()(std::vector<std::string> arguments) const {
    arguments.insert(arguments.end(), {"--settings", folder / "antherd.toml"});
    return run(arguments);
  }
  std::string list(const std::string& command, const std::string& field = "north") const {
    return (*this)({command, field, "--list"}).out;
  }
};

bool holds(const std::string& text, const std::string& part) {
  return text.find(part) != std::string::npos;
}

}  // namespace

TEST_CASE("water writes one irrigation, lists it, and takes it back") {
  const Log log;
  const auto written = log({"water", "north", "--start", "2026-07-14 20:00", "--end", "23:00",
                            "--method", "overhead", "--depth", "0.5 in", "--set", "3"});
  INFO(written.out << written.err);
  CHECK(written.status == 0);
  CHECK(holds(written.out, "Written as entry 1"));
  CHECK(holds(written.out, "2026-07-14 20:00 to 2026-07-14 23:00"));
  CHECK(holds(log.list("water"),
              "1  2026-07-14 20:00 to 2026-07-14 23:00, overhead, 12.7 mm, set 3"));

  // The same once more is the same entry; over midnight "02:00" is the next day.
  log({"water", "north", "--start", "2026-07-14 20:00", "--end", "2026-07-14 23:00", "--depth",
       "0.5 in", "--set", "3"});
  CHECK(!holds(log.list("water"), "\n2  "));
  CHECK(log({"water", "north", "--start", "2026-07-15 22:00", "--end", "02:00"}).status == 0);
  CHECK(holds(log.list("water"), "2026-07-15 22:00 to 2026-07-16 02:00"));

  const auto undone = log({"water", "north", "--undo", "1"});
  CHECK(undone.status == 0);
  CHECK(!holds(log.list("water"), "2026-07-14 20:00"));
  const auto again = log({"water", "north", "--undo", "1"});
  CHECK(again.status == 1);
  CHECK(holds(again.err, "1"));
}

TEST_CASE("an entry of another field is not taken back") {
  const Log log;
  REQUIRE(log({"water", "north", "--start", "2026-07-14 20:00", "--end", "23:00"}).status == 0);
  REQUIRE(log({"scout", "north", "--date", "2026-07-01", "--stage", "buds"}).status == 0);
  const auto water = log({"water", "creek", "--undo", "1"});
  CHECK(water.status != 0);
  CHECK(holds(water.err, "creek"));
  CHECK(holds(log.list("water"), "2026-07-14 20:00"));
  CHECK(log({"scout", "creek", "--undo", "1"}).status != 0);
  CHECK(holds(log.list("scout"), "2026-07-01"));
}

TEST_CASE("--try writes nothing, not even a store") {
  const Log log;
  const auto tried =
      log({"water", "north", "--start", "2026-07-14 20:00", "--end", "23:00", "--try"});
  INFO(tried.out << tried.err);
  CHECK(tried.status == 0);
  CHECK(holds(tried.out, "not written"));
  CHECK(log.folder.names("store").empty());
}

TEST_CASE("what water cannot read it names, with what was given, and writes nothing") {
  const Log log;
  const auto [arguments, named] = GENERATE(values<Case>({
      {{}, "--start"},
      {{"--start", "2026-07-14 20:00"}, "--end"},
      {{"--start", "2026-07-14 8pm", "--end", "23:00"}, "2026-07-14 8pm"},
      {{"--start", "2026-07-14 20:00", "--end", "11pm"}, "11pm"},
      {{"--start", "2026-07-14 20:00", "--end", "2026-07-13 20:00"}, "not after --start"},
      {{"--start", "2026-07-14 20:00", "--end", "2026-07-24 20:00"}, "96 h"},
      {{"--start", "2026-11-01 01:30", "--end", "2026-11-01 05:00"}, "exists twice"},
      {{"--start", "2026-11-01 01:30", "--end", "2026-11-01 05:00"}, "2026-11-01 01:30"},
      {{"--start", "2026-03-08 02:30", "--end", "2026-03-08 05:00"}, "does not exist"},
      {{"--start", "2026-07-14 20:00", "--end", "23:00", "--method", "hose"}, "hose"},
      {{"--start", "2026-07-14 20:00", "--end", "23:00", "--depth", "6"}, "--depth"},
      {{"--start", "2026-07-14 20:00", "--end", "23:00", "--depth", "6 gallons"}, "gallons"},
      {{"--start", "2026-07-14 20:00", "--end", "23:00", "--depth", "-1 mm"}, "-1 mm"},
      {{"--start", "2026-07-14 20:00", "--end", "23:00", "--depth", "nan mm"}, "nan"},
      {{"--start", "2026-07-14 20:00", "--end", "23:00", "--set", "-1"}, "--set"},
  }));
  auto call = arguments;
  call.insert(call.begin(), {"water", "north"});
  const auto ended = log(call);
  INFO(ended.out << ended.err);
  CHECK(ended.status == 2);
  CHECK(holds(ended.err, named));
  if (named != "--set") CHECK(holds(ended.err, "nothing was written"));
  CHECK(log.folder.names("store").empty());
}

TEST_CASE("a field without irrigation needs the method named") {
  const Log log;
  const auto ended = log({"water", "creek", "--start", "2026-07-14 20:00", "--end", "23:00"});
  CHECK(ended.status == 2);
  CHECK(holds(ended.err, "--method"));
}

TEST_CASE("scout writes one note, lists it and takes it back") {
  const Log log;
  const auto written = log({"scout", "north", "--date", "2026-07-01", "--stage", "first-anthers",
                            "--disease", "no", "--seed-set", "14/20", "--note", "south rows"});
  INFO(written.out << written.err);
  CHECK(written.status == 0);
  const auto list = log.list("scout");
  CHECK(holds(list,
              "1  2026-07-01  first-anthers, began that day, disease not seen, seed set "
              "14/20, south rows"));
  CHECK(log({"scout", "north", "--undo", "1"}).status == 0);
  CHECK(!holds(log.list("scout"), "2026-07-01"));
}

TEST_CASE("what scout cannot read it names, with what was given, and writes nothing") {
  const Log log;
  const auto [arguments, named] = GENERATE(values<Case>({
      {{}, "says nothing"},
      {{"--date", "2026-02-30", "--stage", "buds"}, "2026-02-30"},
      {{"--date", "2099-07-01", "--stage", "buds"}, "future"},
      {{"--date", "2026-04-01", "--stage", "buds"}, "before sowing"},
      {{"--date", "2026-07-01", "--stage", "blooming"}, "blooming"},
      {{"--date", "2026-07-01", "--disease", "maybe"}, "maybe"},
      {{"--date", "2026-07-01", "--seed-set", "21/20"}, "21/20"},
      {{"--date", "2026-07-01", "--seed-set", "14"}, "14"},
      {{"--date", "2026-07-01", "--seed-set", "1.5/20"}, "1.5/20"},
      {{"--date", "2026-07-01", "--note", "fine\r\nBcc: other@larkspur.example"}, "--note"},
      {{"--date", "2026-07-01", "--note", std::string("fine\x1b[2J")}, "--note"},
      {{"--date", "2026-07-01", "--began"}, "--stage"},
  }));
  auto call = arguments;
  call.insert(call.begin(), {"scout", "north"});
  const auto ended = log(call);
  INFO(ended.out << ended.err);
  CHECK(ended.status == 2);
  CHECK(holds(ended.err, named));
  CHECK(holds(ended.err, "nothing was written"));
  CHECK(log.folder.names("store").empty());
}

TEST_CASE("the folder's file and the command speak of one log") {
  const Log log;
  {
    const auto settings = std::make_shared<const settings::Settings>(
        *settings::read_file(log.folder / "antherd.toml").settings);
    const Instant now = farm_time("2026-07-10 12:00");
    log.folder.write("diary/irrigation.csv",
                     "field,start,end\nnorth bench,2026-07-09 20:00,2026-07-09 23:00\n");
    auto desk = service::DeskWork::open(settings, now);
    REQUIRE(desk);
    (*desk)->turn(now, true);
    // The command works beside the running service, which learns of it at its next turn.
    CHECK(log({"water", "north", "--start", "2026-07-09 20:00", "--end", "23:00"}).status == 0);
    CHECK(log({"water", "north", "--undo", "1"}).status == 0);
    (*desk)->turn(now + minutes{2}, true);
    CHECK((*desk)->keeper().lookout().diary("north bench").irrigations.empty());
  }
  CHECK(!holds(log.list("water"), "2026-07-09"));
}
