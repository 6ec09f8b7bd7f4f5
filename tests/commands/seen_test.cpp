// letters --seen beside the running service: what it marks, and what it does not.
#include <algorithm>

#include "program.hpp"
#include "service/ground.hpp"
#include "support/catch.hpp"

using namespace ground;

namespace {

const Instant hot_noon = farm_time("2026-07-12 09:00");
const Instant evening = farm_time("2026-07-12 20:00");

bool holds(const std::string& text, const std::string& part) {
  return text.find(part) != std::string::npos;
}

/// Two fields under one station, a person for each, and one for both who sleeps from noon to six.
struct TwoFields {
  static Farm farm() {
    Farm farm;
    farm.recipients =
        "[[recipient]]\naddress = \"north@larkspur.example\"\nfields = [\"north bench\"]\n"
        "[[recipient]]\naddress = \"south@larkspur.example\"\nfields = [\"south bench\"]\n"
        "[[recipient]]\naddress = \"owner@larkspur.example\"\nquiet = \"12:00-06:00\"\n";
    farm.more =
        "\n[[field]]\nname = \"south bench\"\nstations = [\"bench\"]\ncrop_type = \"quick\"\n"
        "irrigation = \"overhead\"\nsown = 2026-06-25\n";
    return farm;
  }

  Bench bench{farm()};
  TwoFields() {
    keep_in_memory();
    const Instant sown = farm_time("2026-06-25 00:00");
    bench.open(sown);
    bench.drop("bench.csv", readings(Weather{}, sown, hot_noon));
    bench.turn(hot_noon);
    bench.live(Weather{}, hot_noon, evening, minutes{15});
  }
  outbox::Item heat_to(const std::string& who, alerts::Severity severity) const {
    for (const auto& item : bench.letters_of("heat")) {
      const auto& letter = item.letter;
      if (letter.recipient.starts_with(who) && letter.severity == severity) return item;
    }
    FAIL("no such letter to " << who);
    return {};
  }
  program::Ended see(const outbox::Item& item) const {
    return program::run({"letters", "--seen", std::to_string(item.id), "--settings",
                         bench.folder / "antherd.toml"});
  }
  std::vector<alerts::Said> heat_said() const {
    auto said = bench.desk->store().said(hot_noon);
    REQUIRE(said);
    std::erase_if(*said, [](const auto& entry) { return entry.kind != alerts::Kind::heat; });
    return *said;
  }
};

}  // namespace

TEST_CASE("seen by one person is seen of the fields that this person gets") {
  TwoFields farm;
  const auto seen = farm.see(farm.heat_to("north", alerts::Severity::extreme));
  INFO(seen.out << seen.err);
  CHECK(seen.status == 0);
  int marked = 0;
  for (const auto& entry : farm.heat_said()) {
    CAPTURE(entry.subject, static_cast<int>(entry.level));
    CHECK(entry.seen == (entry.subject == "north bench" && entry.level == alerts::Level::extreme));
    if (entry.seen) ++marked;
  }
  CHECK(marked == 1);

  // The service that runs meanwhile reminds of the other field alone.
  farm.bench.live(Weather{}, evening + minutes{15}, evening + hours{24}, minutes{15});
  int reminders = 0;
  for (const auto& entry : farm.heat_said()) {
    if (entry.saying != alerts::Saying::reminder) continue;
    CHECK(entry.subject == "south bench");
    ++reminders;
  }
  CHECK(reminders == 1);
}

TEST_CASE("a letter that quiet hours held back marks what it spoke of, not what came after it") {
  TwoFields farm;
  const auto held = farm.heat_to("owner", alerts::Severity::severe);
  REQUIRE(farm_clock(held.letter.decided) == "2026-07-13 06:00");
  const auto seen = farm.see(held);
  INFO(seen.out << seen.err);
  CHECK(seen.status == 0);
  int marked = 0;
  for (const auto& entry : farm.heat_said()) {
    CAPTURE(entry.subject, static_cast<int>(entry.level));
    CHECK(entry.seen == (entry.level == alerts::Level::severe));
    if (entry.seen) ++marked;
  }
  CHECK(marked == 2);
}

TEST_CASE("a letter that cannot be traced surely marks nothing and says so") {
  TwoFields farm;
  std::string text = farm.bench.folder.read("antherd.toml");
  const std::string name = "\"Larkspur Bench\"";
  farm.bench.folder.write("antherd.toml",
                          text.replace(text.find(name), name.size(), "\"Camas Bench\""));
  const auto ended = farm.see(farm.heat_to("south", alerts::Severity::extreme));
  INFO(ended.out << ended.err);
  CHECK(ended.status == 1);
  CHECK(holds(ended.err, "cannot be told for sure"));
  CHECK(holds(ended.err, "nothing was changed"));
  for (const auto& entry : farm.heat_said()) CHECK_FALSE(entry.seen);

  for (const auto& item : farm.bench.letters()) {
    if (item.letter.kind != "daily") continue;
    const auto daily = farm.see(item);
    CHECK(daily.status == 1);
    CHECK(holds(daily.err, "nothing that is reminded of"));
  }
}
