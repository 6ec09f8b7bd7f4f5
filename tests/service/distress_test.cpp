// A store that takes nothing for half an hour: the outbox rests, and one letter a day goes past it.
#include "run/service/distress.hpp"

#include <algorithm>
#include <sstream>

#include "ground.hpp"
#include "stopper.hpp"
#include "support/catch.hpp"

using namespace ground;

namespace {

const Instant sown = farm_time("2026-06-25 00:00");
const Instant hot_morning = farm_time("2026-07-12 10:00");

std::vector<std::string> distress_files(const Bench& bench) {
  auto names = bench.folder.names("outgoing");
  std::erase_if(names, [](const auto& name) { return !name.starts_with("store-trouble-"); });
  return names;
}

/// A letter's text without its line breaks.
std::string running(const std::string& file) {
  std::istringstream words(file);
  std::string text;
  for (std::string word; words >> word;) text += word + " ";
  return text;
}

bool has(const std::string& text, const std::string& part) {
  return text.find(part) != std::string::npos;
}

mail::Spoken spoken(mail::How how) { return {how, mail::About::server, 0, "said", ""}; }

/// A farm with a server and two people, and the letters that were handed to the line.
struct AtLine {
  Farm farm;
  Folder folder;
  std::shared_ptr<const settings::Settings> settings;
  service::Distress distress;
  std::vector<letters::Letter> handed;
  Instant refused_since = hot_morning;
  risk::Level heat = risk::Level::none;

  AtLine() {
    farm.mail = "server = \"smtp://localhost:2525\"\nplain = true\n";
    farm.recipients += "[[recipient]]\naddress = \"manager@larkspur.example\"\n";
    settings = settings_in(folder, farm);
  }
  void refuse(Instant now, bool letters_go = false) {
    distress.note(Failure{"keep new samples", "antherd.db", "disk I/O error", "tried again"}, now,
                  letters_go);
  }
  void carry(Instant now) {
    const auto desk = [&] {
      letters::Desk of_now;
      of_now.farm = "Larkspur Bench";
      of_now.calendar = &settings->calendar;
      of_now.now = now;
      of_now.fields["north bench"].field = "north bench";
      of_now.fields["north bench"].heat.today.level = heat;
      return of_now;
    };
    const auto send = [&](mail::Server, std::int64_t item, letters::Letter letter) {
      CHECK(service::Distress::mine(item));
      handed.push_back(std::move(letter));
    };
    distress.carry(*settings, desk, send, now);
  }
};

}  // namespace

TEST_CASE("a store that takes nothing for half an hour is told past the outbox") {
  Bench bench;
  bench.open(sown);
  bench.live(Weather{}, sown, hot_morning, minutes{30});
  Stopper stopper(bench.folder);
  stopper.stop_all();
  bench.live(Weather{}, hot_morning, hot_morning + minutes{30}, minutes{15});
  CHECK(distress_files(bench).empty());
  bench.live(Weather{}, hot_morning + minutes{45}, farm_time("2026-07-12 20:00"), minutes{15});
  // One for the trouble, one more when the heat rises: Moderate, Severe, perhaps Extreme.
  const auto files = distress_files(bench);
  REQUIRE(files.size() >= 2);
  REQUIRE(files.size() <= 4);
  std::string letter, all;
  for (const auto& file : files) {
    if (has(file, "-below-moderate-")) letter = running(bench.folder.read("outgoing/" + file));
    all += running(bench.folder.read("outgoing/" + file));
  }
  CHECK(has(all, "heat Severe"));
  CHECK(has(letter, "Watch keeps nothing: Larkspur Bench"));
  CHECK(has(letter, "the disk is full"));  // why, in the store's words
  CHECK(has(letter, "north bench: "));     // how the field stands
  CHECK(has(bench.desk->status_line(farm_time("2026-07-12 20:00")), "the store takes nothing"));
  CHECK(bench.letters_of("heat").empty());  // the heat itself waits for the store

  bench.live(Weather{}, farm_time("2026-07-12 20:15"), farm_time("2026-07-13 16:00"), minutes{15});
  const auto then = distress_files(bench);
  CHECK(then.size() > files.size());  // the next day's
  CHECK(then.size() <= 2 * files.size());
  stopper.release_all();
  const auto told = bench.folder.names("outgoing").size();
  bench.live(Weather{}, farm_time("2026-07-13 16:15"), farm_time("2026-07-13 18:00"), minutes{15});
  CHECK(bench.folder.names("outgoing").size() > told);  // what waited goes
  CHECK(!bench.letters_of("heat").empty());
  CHECK(distress_files(bench) == then);
  CHECK(!has(bench.desk->status_line(farm_time("2026-07-13 18:00")), "the store takes nothing"));
}

TEST_CASE("a store that fails now and then is not told of") {
  AtLine line;
  Instant now = hot_morning;
  for (int i = 0; i < 100; ++i, now += minutes{10}) {
    line.refuse(now);
    line.carry(now);
    line.distress.note(std::nullopt, now + minutes{9});
  }
  CHECK(line.handed.empty());
}

TEST_CASE("word past the store goes one by one, and again where it was not taken") {
  AtLine line;
  line.refuse(hot_morning);
  Instant now = hot_morning + minutes{31};
  line.refuse(now);
  line.carry(now);
  REQUIRE(line.handed.size() == 1);
  CHECK(line.distress.busy());
  line.carry(now + minutes{1});
  CHECK(line.handed.size() == 1);  // one conversation at a time
  line.distress.received(spoken(mail::How::wait), now + minutes{2});
  line.carry(now + minutes{3});
  REQUIRE(line.handed.size() == 2);
  CHECK(line.handed[1].recipient != line.handed[0].recipient);  // the other is not held up
  const mail::How how = GENERATE(mail::How::accepted, mail::How::in_doubt, mail::How::refused);
  line.distress.received(spoken(how), now + minutes{4});
  line.carry(now + minutes{5});
  CHECK(line.handed.size() == 2);
  line.carry(now + minutes{33});
  REQUIRE(line.handed.size() == 3);
  CHECK(line.handed[2].id == line.handed[0].id);  // the same letter, by its identity
  line.distress.received(spoken(mail::How::accepted), now + minutes{34});
  for (int i = 35; i < 12 * 60; i += 7) line.carry(now + minutes{i});
  CHECK(line.handed.size() == 3);
}

TEST_CASE("a level that rises is told past the store, one that falls is no news") {
  AtLine line;
  line.refuse(farm_time("2026-07-12 09:00"));
  const auto carry_all = [&](Instant now, risk::Level heat) {
    line.heat = heat;
    const auto before = line.handed.size();
    for (int i = 0; i < 3; ++i) {
      line.carry(now);
      if (line.distress.busy()) line.distress.received(spoken(mail::How::accepted), now);
    }
    return line.handed.size() - before;
  };
  CHECK(carry_all(farm_time("2026-07-12 10:00"), risk::Level::none) == 2);  // both people
  CHECK(carry_all(farm_time("2026-07-12 14:00"), risk::Level::moderate) == 2);
  CHECK(carry_all(farm_time("2026-07-12 16:00"), risk::Level::extreme) == 2);
  CHECK(carry_all(farm_time("2026-07-12 18:00"), risk::Level::severe) == 0);
  CHECK(carry_all(farm_time("2026-07-13 00:00"), risk::Level::severe) == 0);  // at midnight
  CHECK(carry_all(farm_time("2026-07-13 05:00"), risk::Level::none) == 0);
  CHECK(carry_all(farm_time("2026-07-13 06:00"), risk::Level::none) == 2);  // a new day
  CHECK(carry_all(farm_time("2026-07-13 15:00"), risk::Level::severe) == 2);
}

TEST_CASE("nobody is woken for a store that fails on a calm night") {
  AtLine line;
  const Instant night = farm_time("2026-07-12 23:00");
  line.refuse(night - minutes{31});
  for (Instant now = night; now < farm_time("2026-07-13 06:00"); now += minutes{10}) {
    line.refuse(now);
    line.carry(now);
  }
  CHECK(line.handed.empty());
  line.carry(farm_time("2026-07-13 06:00"));
  CHECK(line.handed.size() == 1);
}

TEST_CASE("where readings alone find no room the letter says that alerts still go, once a day") {
  AtLine line;
  for (Instant now = hot_morning - minutes{31}; now <= hot_morning + hours{30};
       now += minutes{10}) {
    line.refuse(now, true);
    line.carry(now);
    while (line.distress.busy()) {
      line.distress.received(spoken(mail::How::accepted), now);
      line.carry(now);
    }
  }
  REQUIRE(line.handed.size() == 4);  // two people, two days
  for (const auto& letter : line.handed) {
    CHECK(has(letter.id, "disk-low-"));
    CHECK(letter.severity == alerts::Severity::minor);
    CHECK(has(running(letter.body), "their letters go"));
  }
  // When the last room is used up as well, that is another letter.
  line.refuse(hot_morning + hours{31});
  line.carry(hot_morning + hours{31});
  REQUIRE(line.handed.size() == 5);
  CHECK(has(line.handed.back().id, "store-trouble-"));
}
