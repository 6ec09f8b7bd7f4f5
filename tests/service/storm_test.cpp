// Storms: many letters to one address in an hour or a day become one digest; what rises or is
// graver than anything told always goes; nothing is told twice or left out.
#include <algorithm>
#include <set>

#include "ground.hpp"
#include "run/service/post.hpp"
#include "support/catch.hpp"

using namespace ground;
using alerts::Severity;
using outbox::State;

namespace {

constexpr const char* owner = "owner@larkspur.example";

letters::Letter letter_of(const std::string& id, Severity severity, Instant decided,
                          bool raise = false) {
  letters::Letter letter;
  letter.id = id;
  letter.recipient = owner;
  letter.subject = id;
  letter.body = "A body.\n";
  letter.kind = "heat";
  letter.severity = severity;
  letter.raise = raise;
  letter.decided = decided;
  return letter;
}

/// The limits alone, on a farm that allows so many letters a day.
struct Limits {
  Folder folder;
  std::shared_ptr<const settings::Settings> settings;
  service::Rations rations;

  explicit Limits(int a_day = 12, const std::string& quiet = "") {
    Farm farm;
    farm.mail = "folder = \"outgoing\"\nat_most_per_day = " + std::to_string(a_day) + "\n";
    if (!quiet.empty()) farm.recipients += "quiet = \"" + quiet + "\"\n";
    settings = settings_in(folder, farm);
  }
  State put(const letters::Letter& letter) {
    return service::to_items({letter}, *settings, rations, letter.decided).at(0).state;
  }
  State put(Severity severity, Instant at, bool raise = false) {
    return put(letter_of("heat-" + std::to_string(++count_), severity, at, raise));
  }
  bool due(Instant at) const { return !service::digests_due(*settings, rations, at).empty(); }
  /// The first minute from `from` on at which the digest may go.
  std::string first_due(Instant from) const {
    for (Instant at = from; at < from + days{3}; at += minutes{1}) {
      if (due(at)) return farm_clock(at);
    }
    return "never";
  }
  void digest(Instant at) {
    letters::Letter letter = letter_of("digest", Severity::moderate, at);
    letter.kind = "digest";
    service::digest_item(letter, rations, at);
  }

 private:
  int count_ = 0;
};

}  // namespace

TEST_CASE("six letters an hour go, the seventh is held until the hour has room") {
  Limits limits;
  const Instant noon = farm_time("2026-07-12 12:00");
  for (int n = 0; n < 6; ++n) {
    CHECK(limits.put(Severity::moderate, noon + minutes{n * 2}) == State::waiting);
  }
  CHECK(limits.put(Severity::moderate, noon + minutes{20}) == State::held);
  CHECK(limits.put(Severity::minor, noon + minutes{30}) == State::held);
  CHECK(limits.first_due(noon + minutes{30}) == "2026-07-12 13:00");
  // While some are held, others join them, also when the hour has room again.
  CHECK(limits.put(Severity::moderate, noon + minutes{61}) == State::held);
  limits.digest(noon + minutes{61});
  CHECK_FALSE(limits.due(noon + minutes{62}));
  CHECK(limits.put(Severity::moderate, noon + minutes{65}) == State::waiting);
}

TEST_CASE("what rises always goes: Extreme, a raise, and what is graver than all that was told") {
  Limits limits;
  const Instant noon = farm_time("2026-07-12 12:00");
  for (int n = 0; n < 6; ++n) limits.put(Severity::moderate, noon);
  CHECK(limits.put(Severity::moderate, noon) == State::held);
  CHECK(limits.put(Severity::severe, noon) == State::waiting);  // the first of that gravity
  CHECK(limits.put(Severity::severe, noon + minutes{1}) == State::held);
  CHECK(limits.put(Severity::severe, noon + minutes{1}, true) == State::waiting);
  CHECK(limits.put(Severity::extreme, noon + minutes{1}) == State::waiting);
  CHECK(limits.put(Severity::extreme, noon + minutes{2}) == State::waiting);
  // A day later a Severe letter is news again.
  for (int n = 0; n < 7; ++n) limits.put(Severity::moderate, noon + hours{25});
  CHECK(limits.put(Severity::severe, noon + hours{25}) == State::waiting);
}

TEST_CASE("of letters of one moment the gravest get the room that is left") {
  Limits limits(2);
  const Instant noon = farm_time("2026-07-12 12:00");
  const auto items = service::to_items(
      {letter_of("one", Severity::moderate, noon), letter_of("two", Severity::moderate, noon),
       letter_of("three", Severity::severe, noon), letter_of("four", Severity::severe, noon)},
      *limits.settings, limits.rations, noon);
  REQUIRE(items.size() == 4);
  CHECK(items[0].state == State::held);
  CHECK(items[1].state == State::held);
  CHECK(items[2].state == State::waiting);
  CHECK(items[3].state == State::waiting);
}

TEST_CASE("past the daily limit the digest comes at 06:00, not at midnight") {
  Limits limits(2);
  const Instant noon = farm_time("2026-07-12 12:00");
  CHECK(limits.put(Severity::moderate, noon) == State::waiting);
  CHECK(limits.put(Severity::moderate, noon + hours{2}) == State::waiting);
  CHECK(limits.put(Severity::moderate, noon + hours{4}) == State::held);
  CHECK(limits.first_due(noon + hours{4}) == "2026-07-13 06:00");
  CHECK(limits.put(Severity::moderate, farm_time("2026-07-13 00:30")) == State::held);
  limits.digest(farm_time("2026-07-13 06:00"));
  CHECK(limits.put(Severity::moderate, farm_time("2026-07-13 09:00")) == State::waiting);
  CHECK(limits.put(Severity::moderate, farm_time("2026-07-13 10:00")) == State::held);
}

TEST_CASE(
    "a digest keeps to quiet hours, and a full hour before midnight does not wait for 06:00") {
  const Instant evening = farm_time("2026-07-12 23:50");
  Limits quiet(12, "22:00-05:30");
  for (int n = 0; n < 6; ++n) quiet.put(Severity::moderate, farm_time("2026-07-12 21:50"));
  CHECK(quiet.put(Severity::moderate, farm_time("2026-07-12 21:55")) == State::held);
  CHECK(quiet.first_due(farm_time("2026-07-12 21:55")) == "2026-07-13 05:30");
  Limits open;
  for (int n = 0; n < 6; ++n) open.put(Severity::moderate, evening);
  CHECK(open.put(Severity::moderate, evening + minutes{5}) == State::held);
  CHECK(open.first_due(evening) == "2026-07-13 00:50");
}

TEST_CASE("the daily line and the weekly review are neither counted nor held") {
  Limits limits(2);
  const Instant noon = farm_time("2026-07-12 12:00");
  for (int n = 0; n < 9; ++n) limits.put(Severity::moderate, noon);
  for (const char* kind : {"daily", "weekly"}) {
    letters::Letter letter = letter_of(kind, Severity::minor, noon);
    letter.kind = kind;
    CHECK(limits.put(letter) == State::waiting);
  }
  Limits fresh(1);
  letters::Letter daily = letter_of("daily", Severity::minor, noon);
  daily.kind = "daily";
  fresh.put(daily);
  CHECK(fresh.put(Severity::moderate, noon) == State::waiting);
}

TEST_CASE("200 letters in an hour: never more than six in any hour and a digest an hour") {
  Limits limits(100);
  const Instant noon = farm_time("2026-07-12 12:00");
  std::vector<Instant> gone;
  std::size_t held = 0, named = 0, digests = 0;
  for (int second = 0; second < 3 * 3600; second += 18) {
    const Instant now = noon + Seconds{second};
    if (second < 3600) {
      (limits.put(Severity::moderate, now) == State::waiting ? gone.push_back(now), 0 : ++held);
    }
    if (limits.due(now)) {
      limits.digest(now);
      gone.push_back(now);
      ++digests;
      named = held;
    }
  }
  CHECK(held == 194);
  CHECK(named == 194);
  CHECK(digests == 1);
  for (const Instant from : gone) {
    CHECK(std::count_if(gone.begin(), gone.end(),
                        [&](Instant at) { return at >= from && at < from + hours{1}; }) <= 6);
  }
}

namespace {

/// So many stations, each with a field of its own, that all watch one farm.
Farm of_stations(int count) {
  Farm farm;
  for (int n = 0; n < count; ++n) {
    const std::string name = "s" + std::to_string(n);
    farm.more += "\n[[station]]\nname = \"" + name +
                 "\"\nlatitude = 46.73\nlongitude = -117.18\nelevation = \"780 m\"\n"
                 "interval = \"15 min\"\n[station.drop]\nfolder = \"drop\"\nfiles = \"" +
                 name +
                 "-*.csv\"\ntime = { column = \"time\", form = \"%Y-%m-%d %H:%M\", zone = \"utc\" "
                 "}\ntemperature = { column = \"temp_c\", unit = \"degC\" }\n"
                 "humidity = { column = \"rh_pct\", unit = \"%\" }\n\n[[field]]\nname = \"field " +
                 name + "\"\nstations = [\"" + name +
                 "\"]\ncrop_type = \"quick\"\nirrigation = \"none\"\nsown = 2026-07-01\n";
  }
  return farm;
}

struct Told {
  std::size_t sent = 0, held = 0, merged = 0, digests = 0;
};

Told told_of(const Bench& bench) {
  Told told;
  for (const auto& item : bench.letters()) {
    if (item.state == State::sent) ++told.sent;
    if (item.state == State::held) ++told.held;
    if (item.state == State::merged) ++told.merged;
    if (item.letter.kind == "digest") ++told.digests;
  }
  return told;
}

}  // namespace

TEST_CASE(
    "thirty stations that fall silent within an hour: six letters and digests name them all") {
  Bench bench(of_stations(30));
  const Instant from = farm_time("2026-07-12 06:00");
  bench.open(from);
  // Station n speaks last at 08:00 and n times 2 minutes.
  for (int n = 0; n < 30; ++n) {
    std::vector<weather::Sample> samples;
    for (Instant at = from + minutes{n * 2 % 15}; at <= from + hours{2} + minutes{n * 2};
         at += minutes{15}) {
      samples.push_back(reading_at(Weather{}, at));
    }
    samples.push_back(reading_at(Weather{}, from + hours{2} + minutes{n * 2}));
    bench.drop("s" + std::to_string(n) + "-a.csv", samples);
  }
  bench.drop("bench.csv", readings(Weather{}, from, from + hours{30}));
  const Instant storm = from + hours{3};
  bench.turn(storm - minutes{2});
  for (Instant now = storm; now <= storm + hours{3}; now += minutes{2}) {
    bench.turn(now);
    if ((now - storm) % minutes{34} == Seconds{0}) {  // restarts change nothing
      bench.close(now);
      bench.open(now + Seconds{30});
    }
  }
  const Told told = told_of(bench);
  CHECK(told.held == 0);
  CHECK(told.merged > 12);
  CHECK(told.digests >= 1);
  CHECK(told.digests <= 3);
  // Each silence was decided once, and stands in one letter that went, itself or by its digest.
  std::set<std::string> digests;
  for (const auto& item : bench.letters_of("digest")) {
    CHECK(item.state == State::sent);
    digests.insert(item.letter.id);
  }
  const auto silent = bench.letters_of("no_data");
  std::string all;
  for (const auto& item : bench.letters()) {
    if (item.state == State::sent) all += item.letter.subject + "\n" + item.letter.body + "\n";
    if (item.state == State::merged) CHECK(digests.contains(item.digest));
  }
  std::replace(all.begin(), all.end(), '\n', ' ');  // lines are broken to the page
  for (std::size_t at; (at = all.find("  ")) != std::string::npos;) all.erase(at, 1);
  for (const auto& item : silent) {
    CHECK((item.state == State::sent || item.state == State::merged));
    if (item.state == State::merged) CHECK(all.find(item.letter.subject) != std::string::npos);
  }
  // No hour holds more than six (nothing was graver than the first).
  std::vector<Instant> gone;
  for (const auto& item : bench.letters()) {
    if (item.state == State::sent && item.letter.kind != "daily") gone.push_back(*item.ended);
  }
  for (const Instant at : gone) {
    CHECK(std::count_if(gone.begin(), gone.end(),
                        [&](Instant other) { return other >= at && other < at + hours{1}; }) <= 6);
  }
}

TEST_CASE("a digest that the store did not take is made again, and once") {
  Bench bench(of_stations(9));
  const Instant from = farm_time("2026-07-12 06:00");
  bench.open(from);
  for (int n = 0; n < 9; ++n) {
    std::vector<weather::Sample> samples;
    for (Instant at = from; at <= from + hours{1} + minutes{n}; at += minutes{1}) {
      samples.push_back(reading_at(Weather{}, at));
    }
    bench.drop("s" + std::to_string(n) + "-a.csv", samples);
  }
  bench.drop("bench.csv", readings(Weather{}, from, from + hours{30}));
  Instant now = from + hours{1};
  for (; told_of(bench).held < 3 && now < from + hours{4}; now += minutes{1}) bench.turn(now);
  REQUIRE(told_of(bench).held == 3);
  CHECK(told_of(bench).digests == 0);
  for (const Instant end = now + hours{2}; now < end; now += minutes{5}) {
    bench.close(now);
    bench.open(now + Seconds{10});
    bench.turn(now + Seconds{20});
  }
  CHECK(told_of(bench).digests == 1);
  // And a fourth: at the first start the rows of bench.csv that had been ahead of the clock are
  // read again, so bench is back.
  CHECK(told_of(bench).merged == 4);
}

TEST_CASE("a value that flaps on its threshold writes no more than it must") {
  // Every quarter of an hour 34.6 or 35.4 °C around the limit of Severe, from noon to six, two
  // days.
  Bench bench;
  const Instant from = farm_time("2026-07-12 00:00");
  bench.open(from);
  bench.drop("bench.csv",
             readings(Weather{CivilDay{}, CivilDay{}}, farm_time("2026-06-25 00:00"), from));
  bench.turn(from);
  std::string rows = header;
  for (Instant now = from; now < from + days{2}; now += minutes{15}) {
    weather::Sample sample = reading_at(Weather{CivilDay{}, CivilDay{}}, now);
    const auto clock = (now - from).count() / 3600 % 24;
    const bool other = (now - from).count() / 3600 % 2 == 1;
    if (clock >= 12 && clock < 18) sample.temperature = Celsius(other ? 35.4 : 34.6);
    bench.folder.write("drop/bench-2.csv", rows += row_of(sample));
    bench.turn(now + Seconds{10});
  }
  // At most: opened, raised, a reminder, eased; the line of the evening apart.
  CHECK(!bench.letters_of("heat").empty());
  CHECK(bench.letters_of("heat").size() <= 4);
  for (const auto& item : bench.letters_of("heat")) CHECK(item.state == State::sent);
}

TEST_CASE("a station that comes and goes all day stays within the limits, and the line comes") {
  Farm farm;
  farm.mail = "folder = \"outgoing\"\nat_most_per_day = 4\n";
  Bench bench(farm);
  const Instant sown = farm_time("2026-06-25 00:00");
  const Instant from = farm_time("2026-07-12 00:00");
  bench.open(sown);
  bench.drop("bench.csv", readings(Weather{}, sown, from));
  bench.turn(from);
  std::string rows = header;
  // One reading every 75 minutes: an hour of silence, an alert, and word that readings are back.
  for (Instant now = from; now < from + days{2}; now += minutes{5}) {
    if ((now - from) % minutes{75} == Seconds{0}) {
      bench.folder.write("drop/bench-2.csv", rows += row_of(reading_at(Weather{}, now)));
    }
    bench.turn(now + Seconds{10});
  }
  std::map<std::string, int> by_day;
  int lines = 0;
  for (const auto& item : bench.letters()) {
    if (item.state != State::sent) continue;
    const bool alert = item.letter.kind != "daily" && item.letter.kind != "weekly";
    if (item.letter.kind == "daily") ++lines;
    if (alert && !item.letter.raise && item.letter.severity < Severity::extreme) {
      ++by_day[farm_clock(*item.ended).substr(0, 10)];
    }
  }
  CHECK(bench.letters_of("no_data").size() > 20);
  CHECK(by_day["2026-07-12"] <= 4 + 2);  // and what was graver than anything told
  CHECK(by_day["2026-07-13"] <= 4 + 2);
  CHECK(told_of(bench).digests >= 1);
  CHECK(lines == 2);
}
