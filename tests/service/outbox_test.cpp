// From the hour that decides to the letter that is gone: one transaction, the folder of .eml files,
// and a mail server that is down, silent, or refuses.
#include <algorithm>
#include <deque>

#include "ground.hpp"
#include "support/catch.hpp"

using namespace ground;

namespace {

const Instant sown = farm_time("2026-06-25 00:00");
const Instant noon = farm_time("2026-07-12 12:05");

Farm by_server() {
  Farm farm;
  farm.mail = "server = \"smtp://localhost:2525\"\nplain = true\n";
  return farm;
}

outbox::Item item_of(const std::string& id, alerts::Severity severity, Instant decided) {
  outbox::Item item;
  item.letter.id = id;
  item.letter.recipient = "owner@larkspur.example";
  item.letter.subject = id;
  item.letter.body = "A body.\n";
  item.letter.kind = "heat";
  item.letter.severity = severity;
  item.letter.decided = decided;
  item.letter.valid_until = decided + hours{72};
  item.letter.still = "It held.";
  item.next_try = decided;
  return item;
}

/// A carrier whose server does what the test says.
struct Post {
  Bench bench;
  std::vector<std::pair<std::int64_t, letters::Letter>> handed;
  std::unique_ptr<service::Carrier> carrier;

  Post() : bench(by_server()) { bench.open(sown); }
  void load(const std::vector<outbox::Item>& items, Instant now) {
    store::Decision decision;
    decision.letters = items;
    REQUIRE(bench.desk->store().save(decision));
    restart(now);
  }
  void restart(Instant now) {
    carrier = std::make_unique<service::Carrier>(
        bench.settings, bench.desk->store(),
        [this](mail::Server, std::int64_t item, letters::Letter letter) {
          handed.emplace_back(item, std::move(letter));
        });
    REQUIRE(carrier->load(now));
  }
  /// One conversation. @return the subject that was handed over, empty for none
  std::string carry(Instant now, mail::How how, mail::About about = mail::About::server) {
    const auto before = handed.size();
    carrier->carry(now);
    if (handed.size() == before) return {};
    REQUIRE(handed.size() == before + 1);
    const auto [item, letter] = handed.back();
    const bool read_out = how == mail::How::accepted || how == mail::How::in_doubt;
    if (read_out) CHECK(carrier->before_dot(item, now));
    carrier->received(item, {how, about, 0, "as the test says", ""}, now);
    return letter.subject;
  }
  outbox::Item stored(const std::string& id) {
    for (const auto& item : bench.letters()) {
      if (item.letter.id == id) return item;
    }
    FAIL("no letter " << id);
    return {};
  }
};

}  // namespace

TEST_CASE("hour, ledger and letters of a decision are stored together") {
  Bench bench;
  bench.open(sown);
  bench.drop("bench.csv", readings(Weather{}, sown, noon));
  bench.turn(noon);
  const auto heat = bench.letters_of("heat");
  CHECK(heat.empty());  // noon of the first hot day is not hot yet, the day before was not

  bench.live(Weather{}, noon, farm_time("2026-07-12 18:00"));
  const auto told_of = bench.letters_of("heat");
  REQUIRE(!told_of.empty());
  const Instant decided = told_of.front().letter.decided;
  // The deciding hour is the last that was closed then, and it is stored.
  const auto stored = bench.stored_hours();
  const bool there = std::any_of(stored.begin(), stored.end(), [&](const auto& hour) {
    return hour.start == hour_of(decided) - hours{1};
  });
  CHECK(there);
  const auto said = bench.desk->store().said(decided);
  REQUIRE(said);
  CHECK(std::any_of(said->begin(), said->end(), [&](const auto& entry) {
    return entry.kind == alerts::Kind::heat && entry.at == decided;
  }));
}

TEST_CASE("the folder gets one .eml for each letter, in the turn that decides it") {
  Bench bench;
  bench.open(sown);
  bench.live(Weather{}, sown, farm_time("2026-07-12 18:00"), minutes{15});
  const auto letters = bench.letters();
  REQUIRE(!bench.letters_of("heat").empty());
  const auto files = bench.folder.names("outgoing");
  CHECK(files.size() == letters.size());
  for (const auto& item : letters) {
    INFO(item.letter.subject << ": " << item.answer);
    CHECK(item.state == outbox::State::sent);
    REQUIRE(item.ended);
    CHECK(*item.ended - item.letter.decided < minutes{1});
    const std::string text = bench.folder.read("outgoing/" + item.letter.id + ".eml");
    CHECK(text.find("Message-ID: <" + item.letter.id + "@") != std::string::npos);
    CHECK(text.find("Auto-Submitted: auto-generated") != std::string::npos);
  }
}

TEST_CASE("a folder that cannot be written keeps the letters waiting until it can") {
  Bench bench;
  const Instant morning = farm_time("2026-07-12 10:00");
  bench.open(sown);
  bench.drop("bench.csv", readings(Weather{}, sown, morning));
  bench.turn(morning);
  std::filesystem::rename(bench.folder / "outgoing", bench.folder / "earlier");
  bench.folder.write("outgoing", "a file stands where the folder should be");
  bench.live(Weather{}, morning, farm_time("2026-07-12 18:00"), minutes{15});
  REQUIRE(!bench.letters_of("heat").empty());
  for (const auto& item : bench.letters_of("heat")) {
    CHECK(item.state == outbox::State::waiting);
    CHECK(item.answer.find("outgoing") != std::string::npos);
  }

  std::filesystem::remove(bench.folder / "outgoing");
  const Instant later = farm_time("2026-07-12 18:31");
  bench.turn(later);
  bench.turn(later + minutes{1});
  for (const auto& item : bench.letters_of("heat")) CHECK(item.state == outbox::State::sent);
  CHECK(bench.folder.names("outgoing").size() + bench.folder.names("earlier").size() ==
        bench.letters().size());
}

TEST_CASE("a server that is down is tried after 1, 2, 5, 10, 20, 30 minutes") {
  Post post;
  post.load({item_of("one", alerts::Severity::severe, noon)}, noon);
  std::vector<long> waits;  // contracts: 1, 2, 5, 10, 20, 30 min, then 30 min less up to 20 %
  Instant last = noon;
  int tries = 0;
  for (Instant now = noon; now < noon + hours{4}; now += Seconds{10}) {
    if (post.carry(now, mail::How::wait).empty()) continue;
    if (++tries > 1) waits.push_back((now - last).count() / 60);
    last = now;
  }
  REQUIRE(waits.size() >= 8);
  CHECK(std::vector<long>(waits.begin(), waits.begin() + 5) == std::vector<long>{1, 2, 5, 10, 20});
  for (std::size_t i = 5; i < waits.size(); ++i) {
    CHECK(waits[i] >= 24);
    CHECK(waits[i] <= 30);
  }
  // Back again after two days: within 31 minutes, and it says how late it is.
  const Instant back = noon + days{2};
  std::string subject;
  Instant now = back;
  for (; now <= back + minutes{31} && subject.empty(); now += Seconds{10}) {
    subject = post.carry(now, mail::How::accepted);
  }
  CHECK(now <= back + minutes{31});
  CHECK(subject.find("[delayed 2 d") != std::string::npos);
  CHECK(post.stored("one").state == outbox::State::sent);
}

TEST_CASE("after a server's return the gravest letter goes first, then the older") {
  Post post;
  post.load({item_of("a-moderate", alerts::Severity::moderate, noon - hours{3}),
             item_of("b-extreme", alerts::Severity::extreme, noon - minutes{1}),
             item_of("c-severe-late", alerts::Severity::severe, noon - minutes{2}),
             item_of("d-severe-early", alerts::Severity::severe, noon - minutes{9})},
            noon);
  CHECK(post.carry(noon, mail::How::wait) == "b-extreme");  // the probe
  CHECK(post.carry(noon + Seconds{30}, mail::How::wait).empty());
  std::vector<std::string> order;
  const Instant back = noon + minutes{1};
  for (std::string next; !(next = post.carry(back, mail::How::accepted)).empty();) {
    order.push_back(post.handed.back().second.id);
  }
  CHECK(order ==
        std::vector<std::string>{"b-extreme", "d-severe-early", "c-severe-late", "a-moderate"});
}

TEST_CASE("a lost answer rests 10 minutes and goes once more, marked; a second one parks") {
  Post post;
  post.load({item_of("one", alerts::Severity::severe, noon)}, noon);
  CHECK(!post.carry(noon, mail::How::in_doubt).empty());
  CHECK(post.stored("one").state == outbox::State::in_doubt);
  CHECK(post.carry(noon + minutes{9}, mail::How::accepted).empty());
  CHECK(!post.carry(noon + minutes{10} + Seconds{1}, mail::How::in_doubt).empty());
  CHECK(post.handed.back().second.body.find("You may already have this letter") == 0);
  CHECK(post.handed.back().second.id == post.handed.front().second.id);
  CHECK(post.stored("one").state == outbox::State::parked);
}

TEST_CASE("killed before the dot a letter goes again as new, after it only as doubtful") {
  Post post;
  post.load({item_of("one", alerts::Severity::severe, noon)}, noon);
  post.carrier->carry(noon);
  REQUIRE(post.handed.size() == 1);
  SECTION("before") {
    post.restart(noon + Seconds{5});
    CHECK(!post.carry(noon + Seconds{5}, mail::How::accepted).empty());
    CHECK(post.handed.back().second.body.find("already have") == std::string::npos);
  }
  SECTION("after") {
    REQUIRE(post.carrier->before_dot(post.handed.back().first, noon));
    post.restart(noon + Seconds{5});
    CHECK(post.carry(noon + Seconds{5}, mail::How::accepted).empty());
    CHECK(!post.carry(noon + minutes{11}, mail::How::accepted).empty());
    CHECK(post.handed.back().second.body.find("already have") != std::string::npos);
  }
  CHECK(post.stored("one").state == outbox::State::sent);
}

TEST_CASE("one refused recipient does not hold up the others") {
  Post post;
  auto other = item_of("two", alerts::Severity::moderate, noon);
  other.letter.recipient = "agronomist@larkspur.example";
  post.load({item_of("one", alerts::Severity::severe, noon), other}, noon);
  CHECK(post.carry(noon, mail::How::refused, mail::About::recipient) == "one");
  CHECK(post.carry(noon, mail::How::accepted) == "two");
  CHECK(post.stored("one").state == outbox::State::parked);
  CHECK(post.stored("two").state == outbox::State::sent);
}

TEST_CASE("a refused login keeps every letter and is said") {
  Post post;
  post.load({item_of("one", alerts::Severity::severe, noon)}, noon);
  CHECK(!post.carry(noon, mail::How::settings_trouble).empty());
  CHECK(post.stored("one").state == outbox::State::waiting);
  CHECK(!post.carrier->line().trouble.empty());
  CHECK(post.carry(noon + minutes{59}, mail::How::accepted).empty());
  CHECK(!post.carry(noon + minutes{61}, mail::How::accepted).empty());
  CHECK(post.carrier->line().trouble.empty());
}

TEST_CASE("a letter that nobody could take in 72 hours is parked and named") {
  Post post;
  post.load({item_of("one", alerts::Severity::severe, noon)}, noon);
  for (Instant now = noon; now < noon + hours{73}; now += minutes{10}) {
    post.carry(now, mail::How::wait);
  }
  const auto item = post.stored("one");
  CHECK(item.state == outbox::State::parked);
  CHECK(!item.answer.empty());
}

TEST_CASE("a letter that a person has sent again goes at once, whatever the line waited for") {
  Post post;
  post.load({item_of("one", alerts::Severity::severe, noon)}, noon);
  CHECK(!post.carry(noon, mail::How::settings_trouble).empty());
  REQUIRE(post.carrier->refresh());
  CHECK(post.carry(noon + minutes{5}, mail::How::accepted).empty());  // the line rests an hour
  // Another process: `antherd letters --retry`.
  const Instant wish = noon + minutes{6};
  auto& store = post.bench.desk->store();
  REQUIRE(store.update(outbox::retry(post.stored("one"), wish), outbox::reopen(*store.line())));
  REQUIRE(post.carrier->refresh());
  CHECK(!post.carry(wish, mail::How::accepted).empty());
  CHECK(post.stored("one").state == outbox::State::sent);
}
