// New settings while the service runs: whole or not at all, and never under a letter's feet.
#include <algorithm>

#include "ground.hpp"
#include "run/service/attention.hpp"
#include "support/catch.hpp"

using namespace ground;

namespace {
const Instant sown = farm_time("2026-06-25 00:00");
const Instant noon = farm_time("2026-07-12 12:05");

std::string replaced(std::string text, const std::string& from, const std::string& to) {
  const auto at = text.find(from);
  REQUIRE(at != std::string::npos);
  return text.replace(at, from.size(), to);
}
}  // namespace

TEST_CASE("broken settings keep the old ones, good ones apply") {
  Bench bench;
  bench.open(sown);
  bench.drop("bench.csv", readings(Weather{}, sown, noon));
  bench.turn(noon);
  const auto print = bench.fingerprint();
  const std::string good = bench.folder.read("antherd.toml");
  const auto name = [&] { return bench.desk->keeper().lookout().settings().farm; };

  for (const std::string& broken :
       {std::string("not TOML ["), std::string(), replaced(good, "15 min", "15 parsecs"),
        replaced(good, "stations = [\"bench\"]", "stations = [\"moon\"]"),
        replaced(good, "temp_c", "temp\\r\\nBcc: x"),
        replaced(good, "Larkspur Bench", "Larkspur\\r\\nBcc: other@larkspur.example")}) {
    bench.folder.write("antherd.toml", broken);
    bench.desk->reload(noon + minutes{1});
    bench.turn(noon + minutes{1});
    CHECK(name() == "Larkspur Bench");
  }
  std::filesystem::remove(bench.folder / "antherd.toml");
  bench.desk->reload(noon + minutes{1});
  CHECK(name() == "Larkspur Bench");

  bench.folder.write("antherd.toml", replaced(good, "Larkspur Bench", "Larkspur Hill"));
  bench.desk->reload(noon + minutes{2});
  bench.turn(noon + minutes{2});
  CHECK(name() == "Larkspur Hill");
  CHECK(bench.fingerprint() == print);
}

TEST_CASE("a reload says nothing a second time and loses no reading") {
  Bench bench;
  bench.open(sown);
  bench.live(Weather{}, sown, farm_time("2026-07-12 18:00"), minutes{15});
  const auto letters = bench.letter_ids();
  const Instant now = farm_time("2026-07-12 18:01");
  bench.desk->reload(now);
  bench.turn(now);
  CHECK(bench.letter_ids() == letters);
  // What came just before stands only in memory until its batch is due.
  const Instant next = farm_time("2026-07-12 18:15");
  bench.folder.append("drop/bench.csv", row_of(reading_at(Weather{}, next)));
  bench.turn(farm_time("2026-07-12 18:15"));
  bench.desk->reload(farm_time("2026-07-12 18:16"));
  bench.turn(farm_time("2026-07-12 18:17"));
  bench.turn(farm_time("2026-07-12 18:25"));
  const auto last = bench.desk->store().last_sample("bench");
  REQUIRE(last);
  REQUIRE(*last);
  CHECK(farm_clock(**last) == "2026-07-12 18:15");
}

TEST_CASE("a reading that was polled and not yet stored outlives a reload") {
  Farm farm;
  farm.more = river;
  Bench bench(farm);
  bench.open(noon);
  bench.turn(noon);
  station::Answer answer;
  answer.readings.samples = {reading_at(Weather{}, noon)};
  bench.desk->poll_answered("river", answer, noon);
  bench.turn(noon);
  auto next = answer;
  next.readings.samples = {reading_at(Weather{}, noon + minutes{1})};
  bench.desk->poll_answered("river", next, noon + minutes{1});
  bench.turn(noon + minutes{1});
  bench.desk->reload(noon + minutes{2});
  bench.turn(noon + minutes{10});
  const auto stored = bench.desk->store().samples("river", noon - hours{1}, noon + hours{1});
  REQUIRE(stored);
  CHECK(stored->size() == 2);
}

TEST_CASE("an answer that was asked for before new settings came is not read as they say") {
  Farm farm;
  farm.more = river;
  Bench bench(farm);
  std::vector<station::PollMemory> asked;
  bench.open(noon);
  bench.desk->on_poll([&](const std::string&, const station::HttpForm&,
                          const station::PollMemory& memory) { asked.push_back(memory); });
  bench.turn(noon);
  REQUIRE(asked.size() == 1);
  station::Answer old, fresh;
  old.memory = asked[0];
  old.readings.samples = {reading_at(Weather{}, noon)};
  old.readings.samples[0].temperature = Celsius(77);  // degF, read as degC
  const std::string good = bench.folder.read("antherd.toml");
  bench.folder.write("antherd.toml", replaced(good, "/c\", unit = \"degC", "/c\", unit = \"degF"));
  bench.desk->reload(noon + minutes{1});
  bench.turn(noon + minutes{1});
  REQUIRE(asked.size() == 2);  // at once
  bench.desk->poll_answered("river", old, noon + minutes{1});
  bench.turn(noon + minutes{1});
  CHECK(asked.size() == 2);
  fresh.memory = asked[1];
  fresh.readings.samples = {reading_at(Weather{}, noon)};
  bench.desk->poll_answered("river", fresh, noon + minutes{2});
  bench.turn(noon + minutes{10});
  const auto stored = bench.desk->store().samples("river", noon - hours{1}, noon + hours{1});
  REQUIRE(stored);
  REQUIRE(stored->size() == 1);
  CHECK(stored->front() == fresh.readings.samples.front());
  CHECK(bench.desk->store().conflicts("river")->empty());
}

TEST_CASE("while a letter is under way new settings wait for its end") {
  Farm farm;
  farm.mail = "server = \"smtp://localhost:2525\"\nplain = true\n";
  Bench bench(farm);
  bench.open(sown);
  std::vector<std::int64_t> handed;
  bench.desk->on_send(
      [&](mail::Server, std::int64_t item, letters::Letter) { handed.push_back(item); });
  Instant now = farm_time("2026-06-29 06:00");  // a Monday: the review
  bench.drop("bench.csv", readings(Weather{}, sown, now));
  bench.turn(now);
  REQUIRE(handed.size() == 1);

  const std::string good = bench.folder.read("antherd.toml");
  bench.folder.write("antherd.toml", replaced(good, "Larkspur Bench", "Larkspur Hill"));
  const auto name = [&] { return bench.desk->keeper().lookout().settings().farm; };
  bench.desk->reload(now + minutes{1});
  bench.desk->reload(now + minutes{1});
  bench.turn(now + minutes{1});
  CHECK(name() == "Larkspur Bench");
  const std::string log = bench.folder.read("antherd.log");
  const auto said = log.find("put off until the letter under way has ended");
  CHECK(said != std::string::npos);
  CHECK(said == log.rfind("put off until"));  // once
  CHECK(bench.desk->before_dot(handed.front(), now + minutes{1}));
  bench.desk->mail_spoken(handed.front(), {mail::How::accepted, mail::About::server, 250, "ok", ""},
                          now + minutes{1});
  CHECK(name() == "Larkspur Hill");
  const auto item = bench.desk->store().letter(handed.front());
  REQUIRE(item);
  REQUIRE(*item);
  CHECK((*item)->state == outbox::State::sent);
}

TEST_CASE("after a column's name was mended the files are read from their start") {
  Bench bench;
  const std::string good = bench.folder.read("antherd.toml");
  bench.folder.write("antherd.toml", replaced(good, "\"temp_c\"", "\"temperature\""));
  bench.settings = std::make_shared<const settings::Settings>(
      *settings::read_file(bench.folder / "antherd.toml").settings);
  bench.open(sown);
  bench.drop("bench.csv", readings(Weather{}, sown, noon));
  bench.turn(noon);
  bench.turn(noon + minutes{6});
  REQUIRE(!*bench.desk->store().last_sample("bench"));

  bench.folder.write("antherd.toml", good);
  SECTION("by a reload") { bench.desk->reload(noon + minutes{7}); }
  SECTION("by a reload, and the power fails before they were read") {
    bench.desk->reload(noon + minutes{7});
    bench.desk.reset();
    bench.settings = std::make_shared<const settings::Settings>(
        *settings::read_file(bench.folder / "antherd.toml").settings);
    bench.open(noon + minutes{7});
  }
  SECTION("by a restart") {
    bench.close(noon + minutes{7});
    bench.settings = std::make_shared<const settings::Settings>(
        *settings::read_file(bench.folder / "antherd.toml").settings);
    bench.open(noon + minutes{7});
  }
  bench.turn(noon + minutes{7});
  bench.turn(noon + minutes{13});
  CHECK(*bench.desk->store().last_sample("bench"));
}

TEST_CASE("files that were read in the wrong unit are read again, also when the power fails then") {
  Bench bench;
  const std::string good = bench.folder.read("antherd.toml");
  const auto in_force = [&](const std::string& text) {
    bench.folder.write("antherd.toml", text);
    bench.settings = std::make_shared<const settings::Settings>(
        *settings::read_file(bench.folder / "antherd.toml").settings);
  };
  const auto warmest = [&] {
    double most = -99.0;
    for (const auto& hour : bench.stored_hours()) {
      if (hour.temperature) most = std::max(most, hour.temperature->value);
    }
    return most;
  };
  in_force(replaced(good, "degC", "degF"));
  bench.open(sown);
  bench.drop("bench.csv", readings(Weather{}, sown, noon));
  bench.turn(noon);
  bench.turn(noon + minutes{6});  // the bookmark is stored: the file counts as read
  REQUIRE(warmest() < 5.0);

  in_force(good);
  bench.desk->reload(noon + minutes{7});
  bench.desk.reset();
  bench.open(noon + minutes{7});
  bench.turn(noon + minutes{7});
  bench.turn(noon + minutes{13});
  CHECK(warmest() > 20.0);
}

TEST_CASE("cool hours that were read in the wrong unit do not outlive it") {
  Bench bench;
  const std::string bad = bench.folder.read("antherd.toml");  // says degC of a logger in degF
  const Instant night = farm_time("2026-07-10 00:00");
  std::vector<weather::Sample> cool;
  for (Instant at = night; at < night + hours{6}; at += minutes{15}) {
    weather::Sample sample = reading_at(Weather{}, at);
    sample.temperature = Celsius(46.4);  // 8 degC
    cool.push_back(sample);
  }
  bench.open(sown);
  bench.drop("bench.csv", cool);
  bench.turn(night + hours{7});
  bench.turn(night + hours{7} + minutes{6});
  const auto warmest = [&] {
    const auto samples = bench.desk->store().samples("bench", sown, noon + days{3});
    REQUIRE(samples);
    REQUIRE(samples->size() == cool.size());
    double most = -99.0;
    for (const auto& sample : *samples) most = std::max(most, sample.temperature->value);
    return most;
  };
  REQUIRE(warmest() == Approx(46.4));
  bench.folder.write("antherd.toml", replaced(bad, "degC", "degF"));
  bench.desk->reload(night + hours{8});
  bench.turn(night + hours{8});
  bench.turn(night + hours{8} + minutes{6});
  CHECK(warmest() == Approx(8.0));
  const auto hours_now = bench.stored_hours();
  REQUIRE(!hours_now.empty());
  for (const auto& hour : hours_now) {
    if (hour.temperature) CHECK(hour.temperature->value < 9.0);
  }
  CHECK(bench.folder.read("antherd.log").find("mean something else now") != std::string::npos);
}

TEST_CASE("a value that is added to the form drops nothing that was stored") {
  Farm farm;
  Bench bench(farm);
  const std::string before = bench.folder.read("antherd.toml");
  bench.open(sown);
  bench.drop("bench.csv", readings(Weather{}, sown, noon));
  bench.turn(noon);
  bench.turn(noon + minutes{6});
  std::filesystem::remove(bench.folder / "drop/bench.csv");  // moved away
  const auto count = [&] { return bench.desk->store().samples("bench", sown, noon)->size(); };
  const auto stored = count();
  REQUIRE(stored > 100);
  bench.folder.write("antherd.toml",
                     replaced(before, "[station.drop]\n",
                              "[station.drop]\nwind = { column = \"wind\", unit = \"m/s\" }\n"));
  bench.desk->reload(noon + minutes{7});
  bench.turn(noon + minutes{7});
  CHECK(count() == stored);
}

TEST_CASE("the diary of a field that was renamed is not lost without a word") {
  Bench bench;
  bench.open(sown);
  bench.drop("bench.csv", readings(Weather{}, sown, noon));
  bench.turn(noon);
  const auto note = [&](const std::string& field, Instant at) {
    field::Scouting seen;
    seen.field = field;
    seen.date = bench.settings->calendar.day_of(at);
    seen.stage = 61;
    REQUIRE(bench.desk->store().add(seen));
  };
  const auto said = [&] {
    const auto sentences =
        service::attention_of(bench.desk->keeper().lookout(), bench.desk->store(), noon);
    return std::count_if(sentences.begin(), sentences.end(), [](const std::string& sentence) {
      return sentence.find("was it renamed?") != std::string::npos;
    });
  };
  note("north bench", noon);
  note("a field of another year", noon - days{150});
  CHECK(said() == 0);
  const std::string good = bench.folder.read("antherd.toml");
  bench.folder.write("antherd.toml", replaced(good, "\"north bench\"", "\"upper bench\""));
  bench.desk->reload(noon + minutes{1});
  bench.turn(noon + minutes{1});
  CHECK(said() == 1);
  CHECK(bench.folder.read("antherd.log").find("the diary holds entries of \"north bench\"") !=
        std::string::npos);
}
