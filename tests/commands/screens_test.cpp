// now, review and letters on a store that a service has filled.
#include <algorithm>
#include <nlohmann/json.hpp>
#include <sstream>

#include "program.hpp"
#include "service/ground.hpp"
#include "support/catch.hpp"

using namespace ground;

namespace {

/// A hot July with its letters, an exercise: "now" is the newest reading's time.
Farm july() {
  Farm farm;
  farm.extra_farm = "exercise = true";
  return farm;
}

struct Season {
  Bench bench;
  Instant now = farm_time("2026-07-13 20:00");
  explicit Season(const Farm& farm = july()) : bench(farm) {
    const Instant sown = farm_time("2026-06-25 00:00");
    const Instant from = farm_time("2026-07-11 12:00");
    bench.open(sown);
    bench.drop("bench.csv", readings(Weather{}, sown, from));
    bench.turn(from);
    bench.live(Weather{}, from, now, minutes{15});
  }
  program::Ended run(std::vector<std::string> arguments) const {
    arguments.insert(arguments.end(), {"--settings", bench.folder / "antherd.toml"});
    return program::run(arguments);
  }
};

bool holds(const std::string& text, const std::string& part) {
  return text.find(part) != std::string::npos;
}

}  // namespace

TEST_CASE("now, review and letters read beside the running service") {
  Season season;
  const auto now = season.run({"now"});
  INFO(now.out << now.err);
  CHECK(now.status == 0);
  CHECK(holds(now.out, "north bench"));

  const auto week = season.run({"review", "--week", "2026-W28"});
  CHECK(week.status == 0);
  CHECK(holds(week.out, "2026-W28"));
  CHECK(season.run({"review", "--season"}).status == 0);
  for (const char* wrong : {"2026-W54", "2026-28", "W28", "2026-W00", "2025-W53", "2026-W28x"}) {
    const auto ended = season.run({"review", "--week", wrong});
    INFO("'" << wrong << "': " << ended.err);
    CHECK(ended.status == 2);
    CHECK(holds(ended.err, wrong));
  }

  const auto letters = season.run({"letters", "--lines"});
  CHECK(letters.status == 0);
  std::istringstream stream(letters.out);
  std::size_t count = 0;
  std::string heat;
  for (std::string line; std::getline(stream, line); ++count) {
    const auto row = nlohmann::json::parse(line);
    CHECK(row.contains("id"));
    CHECK(row["state"] == "sent");
    if (row["kind"] == "heat") heat = std::to_string(row["id"].get<long>());
  }
  CHECK(count == season.bench.letters().size());
  CHECK(season.run({"letters"}).status == 0);
  const auto csv = season.run({"letters", "--csv"});
  CHECK(csv.status == 0);
  CHECK(csv.out.find("id,state,decided,kind,severity,recipient,subject,attempts,") == 0);
  CHECK(std::count(csv.out.begin(), csv.out.end(), '\n') == static_cast<long>(count) + 1);

  // Seen: the reminder of that level no longer comes.
  REQUIRE(!heat.empty());
  const auto seen = season.run({"letters", "--seen", heat});
  INFO(seen.out << seen.err);
  CHECK(seen.status == 0);
  const auto said = season.bench.desk->store().said(Instant{});
  REQUIRE(said);
  bool marked = false;
  for (const auto& entry : *said) marked = marked || entry.seen;
  CHECK(marked);

  for (const char* option : {"--seen", "--retry"}) {
    const auto ended = season.run({"letters", option, "999"});
    CHECK(ended.status == 1);
    CHECK(holds(ended.err, "999"));
  }
  const auto sent = season.run({"letters", "--retry", heat});
  CHECK(sent.status == 1);
  CHECK(holds(sent.err, "sent already"));
}

TEST_CASE("a parked letter asks for attention until somebody has it sent again") {
  Season season;
  auto item = season.bench.letters().back();
  item.state = outbox::State::parked;
  item.answer = "550 no such mailbox";
  REQUIRE(season.bench.desk->store().update(item, outbox::Line{}));
  const auto parked = season.run({"letters"});
  CHECK(parked.status == 3);
  CHECK(holds(parked.out, "550 no such mailbox"));
  CHECK(season.run({"now"}).status == 3);

  const auto retried = season.run({"letters", "--retry", std::to_string(item.id)});
  INFO(retried.out << retried.err);
  CHECK(retried.status == 0);
  // The running service takes it up, though it was another process that put it back.
  season.bench.turn(season.now + minutes{2});
  season.bench.turn(season.now + minutes{4});
  const auto after = season.bench.desk->store().letter(item.id);
  REQUIRE(after);
  CHECK((*after)->state == outbox::State::sent);
}

TEST_CASE("a silent station is an attention of now") {
  Bench bench;  // no exercise: the wall clock counts; sown yesterday, never a reading
  const Instant now = std::chrono::floor<std::chrono::seconds>(std::chrono::system_clock::now());
  Farm farm;
  farm.sown = farm_clock(now - days{2}).substr(0, 10);
  bench.settings = settings_in(bench.folder, farm);
  bench.open(now - days{2});
  bench.turn(now - days{2});
  bench.close(now - days{2});
  const auto ended = program::run({"now", "--settings", bench.folder / "antherd.toml"});
  INFO(ended.out << ended.err);
  CHECK(ended.status == 3);
  CHECK(holds(ended.out, "Station bench is silent"));
}

TEST_CASE("without a store the reading commands say so and end with 1") {
  Folder folder;
  settings_in(folder);
  for (const char* command : {"now", "review", "letters"}) {
    const auto ended = program::run({command, "--settings", folder / "antherd.toml"});
    INFO(command << ": " << ended.err);
    CHECK(ended.status == 1);
    CHECK(holds(ended.err, "there is none yet"));
  }
  CHECK(folder.names("store").empty());
}

TEST_CASE("water says what the entry changes, at the time of the newest reading") {
  Season season;
  // Four wet evenings are logged; the fifth is the one that is asked about.
  for (const char* day : {"2026-07-09", "2026-07-10", "2026-07-11"}) {
    const std::string start = std::string(day) + " 20:00";
    REQUIRE(season.run({"water", "north", "--start", start, "--end", "23:00"}).status == 0);
  }
  const std::vector<std::string> entry{"water", "north", "--start", "2026-07-12 20:00",
                                       "--end", "23:00"};
  auto trial = entry;
  trial.emplace_back("--try");
  const auto tried = season.run(trial);
  INFO(tried.out << tried.err);
  CHECK(holds(tried.out, "Sprinkler nights of the last five: 4 (without it 3)"));
  const auto written = season.run(entry);
  INFO(written.out << written.err);
  CHECK(written.out.substr(written.out.find("Sprinkler")) ==
        tried.out.substr(tried.out.find("Sprinkler")));
}

TEST_CASE("water --list tells what each irrigation did, in the farm's units") {
  Farm farm = july();
  farm.extra_farm += "\nunits = \"us\"";
  farm.more = "soil = \"silt loam\"\nsoil_water_at_sowing = \"full\"\n";
  Season season(farm);
  const auto log = [&](const char* start, const char* end, const char* depth) {
    return season.run({"water", "north", "--start", start, "--end", end, "--depth", depth}).out;
  };
  CHECK(holds(log("2026-07-10 20:00", "23:00", "0.2 in"), "0.20 in"));
  log("2026-07-12 08:00", "11:00", "12 in");
  log("2026-07-13 19:00", "19:45", "0.2 in");
  const auto list = season.run({"water", "north", "--list"});
  INFO(list.out << list.err);
  CHECK(list.status == 0);
  const auto entry = [&](int number) {
    const std::string from = std::to_string(number) + "  2026";
    const auto at = list.out.find(from);
    const auto next = list.out.find(std::to_string(number + 1) + "  2026");
    return at == std::string::npos ? "" : list.out.substr(at, next - at);
  };
  CHECK(holds(entry(1), "short before"));
  CHECK(holds(entry(1), "leaves wet until sunrise"));
  CHECK(holds(entry(2), "full after"));
  CHECK(holds(entry(2), "drained below the roots"));
  CHECK(!holds(entry(2), "leaves wet"));
  CHECK(!holds(entry(3), "short"));  // the day is not over
  CHECK(holds(entry(3), "leaves wet until sunrise"));

  const auto hours = season.run({"hours", "north", "--lines"});
  std::istringstream lines(hours.out);
  std::optional<double> missing;
  for (std::string line; std::getline(lines, line);) {
    const auto row = nlohmann::json::parse(line);
    if (row["hour"] == "2026-07-13T12:00:00Z") missing = row["depletion_mm"].get<double>();
    if (row["ks"].is_number()) CHECK(row["ks"].get<double>() <= 1.0);
  }
  REQUIRE(missing);  // filled on the 12th: since then a day's use
  CHECK(*missing > 1);
  CHECK(*missing < 12);
}

TEST_CASE("scout shows the flowering window before and after a note, also of one that is held") {
  Season season;
  // A few days from sowing nothing can be done flowering: the note is held.
  const auto odd =
      season.run({"scout", "north", "--date", "2026-06-27", "--stage", "flowers-done", "--began"});
  INFO(odd.out << odd.err);
  CHECK(holds(odd.out, "both windows are watched"));
  REQUIRE(season.run({"scout", "north", "--undo", "1"}).status == 0);

  const auto noted =
      season.run({"scout", "north", "--date", "2026-07-12", "--stage", "first-anthers"});
  INFO(noted.out << noted.err);
  CHECK(noted.status == 0);
  const auto window = [](const std::string& text, const std::string& label) {
    const auto at = text.find(label);
    if (at == std::string::npos) return std::string("?");
    return text.substr(at + label.size(), text.find('\n', at) - at - label.size());
  };
  const auto before = window(noted.out, "before the note: ");
  const auto after = window(noted.out, "after the note:  ");
  CHECK(holds(before, " to "));
  CHECK(holds(after, " to "));
  CHECK(before != after);
  CHECK(holds(season.run({"scout", "north", "--date", "2026-07-13", "--stage", "full-flower"}).out,
              "before the note: " + after));

  CHECK(!holds(season.run({"scout", "north", "--date", "2026-07-13", "--disease", "no"}).out,
               "Flowering window"));
}

TEST_CASE("a seed count stands in the review of its week and of the season") {
  Season season;
  const auto noted = season.run({"scout", "north", "--date", "2026-07-12", "--seed-set", "14/20"});
  CHECK(holds(noted.out, "seed in 14 of 20 clusters"));
  const std::string line = "Sun 12 Jul 2026: 14 of 20 hold a seed";
  CHECK(holds(season.run({"review", "--season"}).out, line));
  CHECK(holds(season.run({"review", "--week", "2026-W28"}).out, line));
  CHECK(!holds(season.run({"review", "--week", "2026-W27"}).out, line));
}

TEST_CASE("only from a Monday on are seven days named after a week") {
  Season season;  // now is a Monday: the seven days before it are a week of the calendar
  CHECK(holds(season.run({"review"}).out, "Week 2026-W28 (Mon 6 Jul to Sun 12 Jul)"));
  season.bench.live(Weather{}, season.now, season.now + hours{24}, minutes{15});
  const auto tuesday = season.run({"review"}).out;
  CHECK(holds(tuesday, "Last 7 days (Tue 7 Jul to Mon 13 Jul)"));
  CHECK(!holds(tuesday, "2026-W28 ("));
}

TEST_CASE("a replay from the store sees no silence where the station spoke") {
  Season season;  // 18 days without a gap
  const auto replayed = season.run({"replay"});
  INFO(replayed.out << replayed.err);
  CHECK(replayed.status == 0);
  CHECK(holds(replayed.out, "Heat"));
  CHECK(!holds(replayed.out, "o data "));  // neither "No data" nor "Still no data"
  CHECK(!holds(replayed.out, "Data back"));
}

TEST_CASE("mail that does not go: the screen says since when, the status asks for attention") {
  Season season;
  const Instant newest = season.now;  // an exercise: the newest reading's time
  auto item = season.bench.letters().back();
  item.letter.id = "waits-1";
  item.letter.decided = newest - hours{7};
  item.letter.valid_until.reset();
  item.state = outbox::State::waiting;
  item.ended.reset();
  item.next_try = newest + hours{1};
  store::Decision decision;
  decision.letters = {item};
  REQUIRE(season.bench.desk->store().save(decision));
  const auto now = season.run({"now"});
  INFO(now.out << now.err);
  CHECK(now.status == 3);
  CHECK(holds(now.out, "Mail trouble since 2026-07-13 13:"));
  outbox::Line line;
  line.trouble = "mail.larkspur.example:465 refuses the login of farm (535)";
  REQUIRE(season.bench.desk->store().update(season.bench.letters().back(), line));
  CHECK(holds(season.run({"now"}).out, "Mail: mail.larkspur.example:465 refuses the login"));
}

TEST_CASE("a digest marked as seen marks what each letter that it names spoke of") {
  Season season;
  auto& store = season.bench.desk->store();
  const auto heat = season.bench.letters_of("heat");
  REQUIRE(!heat.empty());
  outbox::Item digest = heat.front();
  digest.letter.id = "digest-1";
  digest.letter.kind = "digest";
  digest.letter.decided = season.now;
  outbox::Item named = heat.front();
  named.state = outbox::State::held;
  REQUIRE(store.update(named, outbox::Line{}));
  outbox::Item stranger = named;  // of which the ledger knows nothing
  stranger.letter.id = "stranger-1";
  store::Decision decision;
  decision.letters = {digest, stranger};
  for (const auto& id : {named.letter.id, stranger.letter.id}) {
    decision.merged.push_back({id, named.letter.recipient, "digest-1", season.now});
  }
  REQUIRE(store.save(decision));
  std::int64_t digest_id = 0, named_id = 0;
  for (const auto& item : season.bench.letters()) {
    if (item.letter.id == "digest-1") digest_id = item.id;
    if (item.letter.id == named.letter.id) named_id = item.id;
  }
  const auto refused = season.run({"letters", "--retry", std::to_string(named_id)});
  CHECK(refused.status == 1);
  CHECK(holds(refused.err, "digest-1"));
  const auto seen = season.run({"letters", "--seen", std::to_string(digest_id)});
  INFO(seen.out << seen.err);
  CHECK(seen.status == 3);
  CHECK(holds(seen.out, "What 1 of the letters that it names spoke of cannot be told"));
  const auto said = store.said(Instant{});
  REQUIRE(said);
  CHECK(std::any_of(said->begin(), said->end(), [](const auto& entry) { return entry.seen; }));
}
